// Signing out. Entries that are on this tablet only keep a person here; discarding them takes a file and a typed word.

import { html, useState } from "../parts/html.js";
import { begin, mark, newDevice } from "../parts/db.js";
import { saveFile } from "../parts/export.js";
import { TextField, useSaving } from "../parts/fields.js";
import { Problem, go } from "../parts/frame.js";
import { signOut } from "../parts/sync.js";
import { outboxChanged, useView, waiting } from "../parts/view.js";

/** Empty what this person made here; what follows is numbered anew, as by another device. */
async function discard() {
  const tx = await begin(["outbox", "drafts", "photos", "meta"], "readwrite");
  await Promise.all(["outbox", "drafts", "photos"].map((name) => tx.objectStore(name).clear()));
  const device = await newDevice(tx.objectStore("meta"));
  await tx.done;
  mark(device, 0);
  outboxChanged([]);
}

function Discard({ count }) {
  const [file, setFile] = useState("");
  const [word, setWord] = useState("");
  const wanted = `DISCARD ${count}`;
  const { save, problem, busy } = useSaving(async () => {
    if (!file) throw new Error("Nothing was discarded. First save the entries as a file.");
    if (word.trim() !== wanted) throw new Error(`Nothing was discarded. Type ${wanted} exactly.`);
    await signOut();
    await discard();
    go("/sign-in");
  });
  return html`<details><summary>Discard them and sign out</summary><form class="stack" onSubmit=${save}>
    <p>An administrator can take the file in later, in Review under Held entries. Without it these entries are gone.</p>
    <button type="button" onClick=${() => setFile(saveFile())}>1. Save the entries as a file</button>
    ${file && html`<p role="status">Saved as ${file}. See that it is there before you go on.</p>`}
    <${TextField} label="2. Type ${wanted}" value=${word} onInput=${setWord} autocomplete="off" />
    <${Problem} words=${problem} /><button disabled=${busy}>3. Discard and sign out</button></form></details>`;
}

/** The way out: plain when everything is on the server. */
export function Leave() {
  const { count } = useView(waiting);
  const { save, problem, busy } = useSaving(async () => {
    if (count > 0) throw new Error(`${count} ${count === 1 ? "entry is" : "entries are"} on this tablet only. Send them before you sign out, so that nothing is stranded.`);
    await signOut();
    go("/sign-in");
  });
  return html`<${Problem} words=${problem} /><button type="button" onClick=${save} disabled=${busy}>Sign out</button>
    ${count > 0 && html`<${Discard} count=${count} />`}`;
}
