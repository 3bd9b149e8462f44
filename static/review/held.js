// Entries that the server keeps but that are not in force: why, and what a coordinator decides.

import { html, useRef, useState } from "../parts/html.js";
import { TextField, useSaving } from "../parts/fields.js";
import { dayAndTime } from "../parts/format.js";
import { Empty, Frame, Problem, Where, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { usePerson } from "../parts/person.js";
import { ask } from "../parts/session.js";
import { sync } from "../parts/sync.js";
import { kindWords } from "../parts/kinds.js";
import { all, one, programme, useView } from "../parts/view.js";

function readable(text) {
  try {
    return JSON.stringify(JSON.parse(text).body, null, 1);
  } catch {
    return text;
  }
}

function Settle({ entry }) {
  const [reason, setReason] = useState("");
  const decide = (decision) => async () => {
    if (!reason.trim()) throw new Error("Give the reason; it stays beside the entry.");
    await state("entry.settled", entry.id, { decision, reason });
    say(`Saved on this tablet: ${decision}.`);
  };
  const admit = useSaving(decide("admit"));
  const aside = useSaving(decide("set aside"));
  return html`<${TextField} label="Reason" value=${reason} onInput=${setReason} /><${Problem} words=${admit.problem || aside.problem} />
    <div class="row"><button type="button" onClick=${admit.save} disabled=${admit.busy}>Bring it into force</button><button type="button" onClick=${aside.save} disabled=${aside.busy}>Set it aside</button></div>`;
}

function Entry({ entry, zone }) {
  const open = entry.state === "held";
  return html`<section class="card stack ${open ? "stop" : ""}">
    <h2>${open ? "▲ " : ""}${kindWords(entry.kind)}, ${entry.state}</h2>
    <p>${entry.message}</p>
    <ul>${Object.entries(entry.fields ?? {}).map(([path, lines]) => html`<li key=${path}>${path}: ${lines.join(" ")}</li>`)}</ul>
    <p class="soft small">Stated by ${one("person", entry.by)?.name ?? entry.by}, received ${dayAndTime(entry.received_at, zone)}.</p>
    <details><summary>What was stated</summary><pre class="small">${readable(entry.text)}</pre></details>
    ${open ? html`<${Settle} entry=${entry} />` : html`<p>${entry.settled ? `By ${entry.settled.by}: ${entry.settled.reason}` : html`<${Where} about=${entry.id} />`}</p>`}
  </section>`;
}

async function entriesOf(file) {
  try {
    const { weirbook_tablet: kind, entries } = JSON.parse(await file.text());
    if (kind === 1 && entries.length) return entries;
  } catch { /* said below */ }
  throw new Error("This is no file of a tablet's entries. Nothing was taken in.");
}

/** A tablet that cannot send any more: its file is taken in, each entry held. */
function TakeIn() {
  const file = useRef(null);
  const { save, problem, busy } = useSaving(async () => {
    if (!file.current) throw new Error("Choose the file first.");
    const { answers } = await ask("POST", "/api/tablet-file", { entries: await entriesOf(file.current) });
    const known = answers.filter((one_) => one_.result === "duplicate").length;
    await sync();
    say(`${answers.length - known} taken in and held; ${known} were here already.`);
  });
  return html`<details class="card"><summary>Take in a tablet's file</summary><form class="stack" onSubmit=${save}>
    <p class="soft">For a tablet that broke or was given up: what it saved as a file is kept under its authors, with you as the one who brought it.</p>
    <label class="field">File of a tablet<input type="file" accept="application/json,.json" onChange=${(event) => { file.current = event.target.files[0]; }} /></label>
    <${Problem} words=${problem} /><button disabled=${busy}>Take it in</button></form></details>`;
}

/** The held entries. */
export function Held() {
  const entries = useView(() => all("held")).reverse();
  const zone = useView(programme)?.zone;
  const person = usePerson();
  return html`<${Frame} place="review" title="Held entries"><div class="stack">
    <p class="soft">Nothing that anybody stated is dropped. What cannot come into force waits here for a coordinator.</p>
    ${entries.length ? entries.map((entry) => html`<${Entry} key=${entry.id} entry=${entry} zone=${zone} />`) : html`<${Empty} title="Nothing is held">Entries that do not validate appear here with their reasons.<//>`}
    ${person?.roles?.includes("administrator") && html`<${TakeIn} />`}
    <p><a href="/review">All of Review</a></p></div><//>`;
}
