// What a person must know of this tablet's store: that it cannot be used, or that it came back empty.

import { begin, getMeta, store } from "./db.js";
import { saveFile } from "./export.js";
import { html, useEffect, useState } from "./html.js";
import { health, push, watch } from "./sync.js";
import { askState } from "./session.js";

/** The store cannot be used: nothing is saved until it can; what there is can leave as a file. */
export function Trouble() {
  const [words, setWords] = useState(store.trouble);
  useEffect(() => {
    const look = () => setWords(store.trouble);
    addEventListener("weirbook-store", look);
    return () => removeEventListener("weirbook-store", look);
  }, []);
  if (!words) return null;
  return html`<div class="banner stop" role="alert"><strong>▲ Nothing can be saved.</strong> ${words} What is typed stays in the form.
    <button type="button" class="quiet" onClick=${saveFile}>Save this tablet's entries as a file</button>
    <button type="button" class="quiet" onClick=${() => location.reload()}>Reload</button></div>`;
}

/** How many entries of a vanished store the server has; null while that cannot be asked. */
async function countThere(lost) {
  const state = await askState();
  if (!state?.person) return null;
  const { expect_n: next } = await push(state, { id: lost.device, incarnation: lost.incarnation }, []);
  return next - 1;
}

function told(lost, there) {
  const head = `This tablet's store came back empty: the browser cleared it or could not read it. It held entries up to number ${lost.n}.`;
  if (there === null) return `${head} How many of them the server lacks is told here once you are signed in.`;
  const gone = Math.max(0, lost.n - there);
  if (!gone) return `${head} The server has all of them; nothing is lost.`;
  return `${head} The server has ${there} of them; ${gone} ${gone === 1 ? "is" : "are"} at risk: state them again, or take in a file that was saved from this tablet.`;
}

async function forget() {
  const tx = await begin("meta", "readwrite");
  await tx.store.delete("lost");
  await tx.done;
}

/** The store came back empty: how many entries are at risk. */
export function Loss() {
  const [lost, setLost] = useState(null);
  const [there, setThere] = useState(null);
  useEffect(() => { getMeta("lost").then(setLost, () => {}); }, []);
  useEffect(() => {
    if (!lost) return undefined;
    const look = () => { countThere(lost).then(setThere, () => {}); };
    look();
    let contact = health.contact;
    return watch(() => {
      if (health.contact !== contact) look();
      contact = health.contact;
    });
  }, [lost]);
  if (!lost) return null;
  const done = () => { forget().then(() => setLost(null), () => {}); };
  return html`<div class="banner stop" role="alert"><strong>▲ ${told(lost, there)}</strong>
    ${there !== null && html`<button type="button" class="quiet" onClick=${done}>I have read this</button>`}</div>`;
}
