// Readings in rack order: one number, one colour, next. Enter goes on; arrows move along the rack.

import { html, useEffect, useState } from "../parts/html.js";
import { Choice, NumberField, Select, TextField, useSaving } from "../parts/fields.js";
import { Problem, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { Keypad } from "../parts/keypad.js";
import { read } from "../parts/measured.js";
import { labelOf } from "./rack.js";

const COLOURS = ["orange", "olive", "green"];
const CAUSES = ["cap leaked", "wrong volume", "tube cracked", "spilled", "precipitate in the beam"];

/** The next position to read after one, going round; null when all are read. */
export function nextUnread(run, after) {
  const left = run.tubes.filter((tube) => !tube.absorbance && !tube.excluded).map((tube) => tube.position);
  return left.find((position) => position > after) ?? left[0] ?? null;
}

function useArrows(run, position, onPick) {
  useEffect(() => {
    const move = (event) => {
      if (event.target.matches?.("input, select, textarea") && event.key !== "ArrowUp" && event.key !== "ArrowDown") return;
      const step = { ArrowRight: 1, ArrowDown: 1, ArrowLeft: -1, ArrowUp: -1 }[event.key];
      if (!step) return;
      const at = run.tubes.findIndex((tube) => tube.position === position);
      const next = run.tubes[at + step];
      if (next) {
        event.preventDefault();
        onPick(next.position);
      }
    };
    addEventListener("keydown", move);
    return () => removeEventListener("keydown", move);
  }, [run, position, onPick]);
}

function Exclude({ run, tube }) {
  const [open, setOpen] = useState(false);
  const [cause, setCause] = useState("");
  const [note, setNote] = useState("");
  const { save, problem, busy } = useSaving(async () => {
    if (!cause) throw new Error("Choose the cause that was seen.");
    await state("tube.excluded", run.id, { position: tube.position, cause, note });
    setOpen(false);
  });
  if (tube.excluded) return html`<p class="above">▲ Left out: ${tube.excluded.cause}. Its reading stays on record.</p>`;
  if (!open) return html`<button type="button" class="quiet" onClick=${() => setOpen(true)}>Leave this tube out</button>`;
  return html`<div class="card stop stack"><p>Only for a cause that was seen. Statistics never drop a tube of three.</p>
    <${Select} label="Cause" value=${cause} options=${[["", "choose"], ...CAUSES.map((words) => [words, words])]} onChoose=${setCause} />
    <${TextField} label="Note" value=${note} onInput=${setNote} /><${Problem} words=${problem} />
    <div class="row"><button type="button" class="stop" onClick=${save} disabled=${busy}>Leave it out</button><button type="button" onClick=${() => setOpen(false)}>Back</button></div></div>`;
}

function One({ run, tube, onNext }) {
  const [text, setText] = useState(tube.absorbance?.text ?? "");
  const [colour, setColour] = useState(tube.colour ?? null);
  const [reason, setReason] = useState("");
  const again = Boolean(tube.absorbance);
  const changed = !again || text.trim() !== tube.absorbance.text || colour !== tube.colour;
  const { save, problem, busy } = useSaving(async () => {
    if (changed) {
      if (read(text).problem || read(text).sign !== "=") throw new Error(text.trim() ? read(text).problem ?? "A number is needed, not a bound." : "Type the absorbance.");
      if (again && !reason.trim()) throw new Error("This tube was read before: say why the reading changes.");
      const body = { position: tube.position, absorbance: { text: text.trim(), unit: "AU" }, colour };
      await state("tube.read", run.id, again ? { ...body, reason: reason.trim() } : body);
    }
    onNext();
  });
  return html`<form class="card stack" onSubmit=${save} novalidate>
    <h2>Position ${tube.position}: ${labelOf(tube)}</h2>
    <${NumberField} label="Absorbance" unit="AU" value=${text} onInput=${setText} autofocus />
    <${Choice} label="Colour" value=${colour} options=${COLOURS} onChoose=${setColour} />
    ${again && changed && html`<${TextField} label="Why it changes" value=${reason} onInput=${setReason} />`}
    <${Problem} words=${problem} />
    <${Keypad} text=${text} onText=${setText} minus />
    <button class="main" disabled=${busy}>${again && !changed ? "Next tube" : "Save and next"}</button>
    <${Exclude} run=${run} tube=${tube} /></form>`;
}

/** Reading the rack. */
export function Readings({ run, position, onPick }) {
  useArrows(run, position, onPick);
  const tube = run.tubes.find((one) => one.position === position) ?? run.tubes[0];
  const left = run.tubes.filter((one) => !one.absorbance && !one.excluded).length;
  const finish = useSaving(async () => {
    await state("readings.finished", run.id, {});
    say("Saved on this tablet.");
  });
  return html`<div class="stack">${run.problem && html`<section class="card stop"><h2>▲ Not calculated</h2><p>${run.problem.error}</p></section>`}
    <p role="status">${left === 0 ? "All tubes are read." : `${left} of ${run.tubes.length} tubes to read.`}</p>
    ${left === 0 && html`<${Problem} words=${finish.problem} /><button class="main" type="button" onClick=${finish.save} disabled=${finish.busy}>All read: calculate</button>`}
    <${One} key=${tube.position} run=${run} tube=${tube} onNext=${() => { const next = nextUnread(run, tube.position); if (next !== null) onPick(next); }} /></div>`;
}
