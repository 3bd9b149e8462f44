// Heating and cooling: timers that count from the journal, and their ends.

import { html, useState } from "../parts/html.js";
import { LongField, useSaving } from "../parts/fields.js";
import { clock } from "../parts/format.js";
import { Problem } from "../parts/frame.js";
import { state, withOffset } from "../parts/journal.js";
import { one, programme } from "../parts/view.js";
import { canAsk, canSound, cooledAt, heatedAt, span, useAlarm, useNow, useSound, useTitle } from "./timer.js";

/** What the independent probe read at its gate; the recipe's temperature is a wish, not a measurement. */
function probed(run, words) {
  const gate = words.gates.find(({ asks }) => asks === "temperature");
  return run.gates[gate?.id]?.value ?? null;
}

/** Start the heating. */
export function Start({ run, words }) {
  const recipe = one("recipe", run.recipe);
  const temperature = probed(run, words) ?? recipe.temperature_c;
  const { save, problem, busy } = useSaving(() => state("heating.started", run.id, {
    started_at: withOffset(), minutes: recipe.minutes, temperature: { text: String(temperature), unit: "Cel" },
  }));
  const ask = () => { Notification.requestPermission().catch(() => {}); };
  return html`<section class="card stack"><h2>Start the digestion</h2>
    <p>${recipe.minutes / 60} h at ${recipe.temperature_c} °C. The tubes are in the block.</p>
    ${canAsk() && html`<button type="button" onClick=${ask}>Notify me when it is over</button>`}
    <${Problem} words=${problem} /><button class="main" type="button" onClick=${save} disabled=${busy}>Start heating now</button></section>`;
}

function Interrupt({ run }) {
  const [open, setOpen] = useState(false);
  const [reason, setReason] = useState("");
  const { save, problem, busy } = useSaving(async () => {
    if (!reason.trim()) throw new Error("Say what interrupted it; the run fails with this reason.");
    await state("heating.ended", run.id, { ended_at: withOffset(), complete: false, reason: reason.trim() });
  });
  if (!open) return html`<button type="button" class="quiet" onClick=${() => setOpen(true)}>It was interrupted</button>`;
  return html`<div class="card stop stack"><p>An interrupted digestion fails: its tubes give no result.</p>
    <${LongField} label="What happened" value=${reason} onInput=${setReason} /><${Problem} words=${problem} />
    <div class="row"><button type="button" class="stop" onClick=${save} disabled=${busy}>The run failed</button><button type="button" onClick=${() => setOpen(false)}>Back</button></div></div>`;
}

/** The heating with its timer. */
export function Heating({ run }) {
  const now = useNow();
  const due = heatedAt(run);
  const over = now >= due;
  const [sound, soundOn] = useSound();
  useAlarm(due, now, `${run.name}: the digestion is over`);
  useTitle(over ? "The digestion is over" : `${span(due - now)} heating`);
  const { save, problem, busy } = useSaving(() => state("heating.ended", run.id, { ended_at: withOffset(), complete: true, reason: "" }));
  return html`<section class="card stack ${over ? "wait" : ""}"><h2>${over ? "The digestion is over" : "Heating"}</h2>
    <p role="timer"><span class="big">${over ? "0:00" : span(due - now)}</span> <span class="unit">${over ? `since ${clock(due, programme()?.zone)}` : `until ${clock(due, programme()?.zone)}`}</span></p>
    <p class="soft">Counted from ${clock(run.heating.started_at, programme()?.zone)}; a reload or a sleeping tablet changes nothing.</p>
    <${Problem} words=${problem} />
    ${over && html`<button class="main" type="button" onClick=${save} disabled=${busy}>The tubes are out of the block</button>`}
    ${!over && canSound() && html`<button type="button" aria-pressed=${sound ? "true" : "false"} onClick=${soundOn}>${sound ? "It will sound while this page is open" : "Sound when it is over"}</button>`}
    <${Interrupt} run=${run} /></section>`;
}

/** The cooling with its timer; before its end there is no gate to confirm. */
export function Cooling({ run, minutes, children }) {
  const now = useNow();
  const due = cooledAt(run, minutes);
  useAlarm(due, now, `${run.name}: cooled for ${minutes} minutes`);
  useTitle(now >= due ? "Cooled" : `${span(due - now)} cooling`);
  if (now >= due) return children;
  return html`<section class="card stack"><h2>Cooling</h2><p role="timer"><span class="big">${span(due - now)}</span> <span class="unit">until ${clock(due, programme()?.zone)}</span></p>
    <p class="card wait">▲ Hot tubes are under pressure: do not open them, do not tighten their caps.</p></section>`;
}
