// The frame of every screen: the bar with the mark and the place, the banner that says what has not been sent,
// the three places, and the toast.

import { durability } from "./durability.js";
import { TYPING } from "./fields.js";
import { ago, clock } from "./format.js";
import { html, useEffect, useState } from "./html.js";
import { usePerson } from "./person.js";
import { Loss, Trouble } from "./store_notes.js";
import { health, sync, watch } from "./sync.js";
import { update } from "./update.js";
import { programme, useView, waiting, whereIs } from "./view.js";

export const PLACES = [["field", "Field"], ["bench", "Bench"], ["review", "Review"]];

/** Go to a screen without loading a page. */
export function go(path) {
  history.pushState(null, "", path);
  dispatchEvent(new Event("weirbook-moved"));
}

/** A V-notch weir. */
export const Mark = () => html`<svg class="mark" viewBox="0 0 36 26" width="36" height="26" aria-hidden="true" focusable="false">
  <path d="M2 2h10l6 13 6-13h10v22H2z" fill="none" stroke="currentColor" stroke-width="2.6" stroke-linejoin="round" />
  <path d="M12.5 6h11" stroke="var(--water)" stroke-width="2.6" /></svg>`;

/** The places of an entry in words. */
export const WORDS = { tablet: "on this tablet", server: "on the server", backup: "in a verified backup", held: "needs attention", other: "of another programme" };

/** Where an entry about a thing is, in words; without an entry of this device, the thing is on the server. */
export function Where({ about }) {
  const place = useView(() => whereIs(about)) ?? "server";
  const kind = { tablet: "wait", server: "good", backup: "good", held: "stop", other: "wait" }[place];
  const sign = { tablet: "◐", server: "●", backup: "◉", held: "▲", other: "◐" }[place];
  return html`<span class="tag ${kind}"><span aria-hidden="true">${sign}</span>${WORDS[place]}</span>`;
}

function useHealth() {
  const [, draw] = useState(0);
  useEffect(() => watch(() => draw((n) => n + 1)), []);
  return health;
}

/** What waits on this tablet and when the server was last heard. */
export function Banner() {
  const { count, oldest, held } = useView(waiting);
  const { contact, problem, refused, signIn } = useHealth();
  const said = contact ? `Last contact ${clock(contact)}.` : "No contact with the server yet.";
  if (signIn) {
    return html`<div class="banner stop" role="status"><a href="/sign-in">Sign in</a> to send and receive. Recording goes on
      without it.${count > 0 && ` ${count} on this tablet only.`}</div>`;
  }
  if (!count && !held && !problem) return html`<div role="status" class="unseen">Everything is on the server.</div>`;
  return html`<div class="banner ${held || refused ? "stop" : ""}" role="status">
    ${count > 0 && html`<strong>${count} ${count === 1 ? "entry" : "entries"} on this tablet only</strong>${oldest && Date.now() - new Date(oldest) > durability.warnAfterMs && `, the oldest from ${ago(oldest)}`}. `}
    ${held > 0 && html`<strong><a href="/waiting">${held} ${held === 1 ? "entry needs" : "entries need"} attention.</a></strong> `}
    ${refused && html`<strong>${refused}</strong> `}${problem && !refused && count === 0 && html`<span>Working from what is on this tablet. </span>`}${said} </div>`;
}

const LATE_MS = 6000;
let showToast = () => {};

/** Say something for a few seconds. */
export const say = (words) => showToast(words);

function Toast() {
  const [words, setWords] = useState("");
  useEffect(() => {
    showToast = setWords;
    if (!words) return undefined;
    const timer = setTimeout(() => setWords(""), LATE_MS);
    return () => clearTimeout(timer);
  }, [words]);
  return html`<div role="status" aria-live="polite">${words && html`<div class="toast">${words}</div>`}</div>`;
}

function Update() {
  const [worker, setWorker] = useState(update.worker);
  const [waits, setWaits] = useState(false);
  useEffect(() => {
    const show = () => setWorker(update.worker);
    show();
    addEventListener("weirbook-update", show);
    return () => removeEventListener("weirbook-update", show);
  }, []);
  if (!worker) return null;
  const use = async () => {
    const locks = (await navigator.locks?.query())?.held ?? [];
    const open = locks.some((lock) => lock.name === TYPING);
    setWaits(open);
    if (!open) worker.postMessage("update");
  };
  return html`<div class="banner" role="status">A new version is ready. ${waits && html`<strong>It waits: a form holds something that is not saved. Save it or leave it first.</strong>`}
    <button type="button" class="quiet" onClick=${use}>Use it now</button></div>`;
}

const ROLES = { field: "inspector", bench: "analyst", review: "coordinator" };

/** Say before anything is typed that a place belongs to another role: what is stated there would be held. */
function RoleNote({ place }) {
  const person = usePerson();
  const role = ROLES[place];
  if (!role || !person?.id || person.roles.includes(role)) return null;
  return html`<div class="banner">You are here as ${person.roles.join(" and ")}. You may look; what only ${role === "analyst" || role === "inspector" ? "an" : "a"} ${role} may state would be held.</div>`;
}

/** A screen in its frame. */
export function Frame({ place, title, about, wide = false, children }) {
  const here = useView(programme);
  const words = PLACES.find(([key]) => key === place)?.[1] ?? "Weirbook";
  useEffect(() => { document.title = `${title} · ${words} · Weirbook`; }, [title, words]);
  return html`<div class="frame">
    <a class="skip" href="#main">To the content</a>
    <header class="bar"><${Mark} /><span class="place">${words}</span><span class="about">${about ?? (here?.example ? `Example: ${here.name}` : here?.name) ?? ""}</span>
      <a class="gear" href="/settings" aria-label="Settings">☰</a></header>
    <${Trouble} /><${Loss} /><${Banner} /><${RoleNote} place=${place} /><${Update} />
    ${wide ? children : html`<main class="screen" id="main" tabindex="-1"><h1>${title}</h1>${children}</main>`}
    <nav class="places" aria-label="Places">${PLACES.map(([key, name]) => html`<a key=${key} href="/${key}" aria-current=${key === place ? "page" : undefined}>${name}</a>`)}</nav>
    <${Toast} />
  </div>`;
}

/**
 * List and detail: side by side on a wide screen, one at a time on a phone. `front` says which one is the main content.
 * @param {{front: "list"|"detail", list: object, detail: object, kind?: string, listName?: string}} props
 */
export function Sides({ front, list, detail, kind = "", listName = "List" }) {
  const main = (vnode, name) => html`<main class="side front ${name}" id="main" tabindex="-1">${vnode}</main>`;
  const beside = (vnode, name) => html`<aside class="side ${name}" aria-label=${listName}>${vnode}</aside>`;
  return html`<div class="sides ${kind}">
    ${front === "list" ? main(list, "of-list") : beside(list, "of-list")}
    ${front === "detail" ? main(detail, "of-detail") : beside(detail, "of-detail")}
  </div>`;
}

/** What to do when there is nothing to show. */
export const Empty = ({ title, children }) => html`<div class="empty"><strong>${title}</strong>${children}</div>`;

/** What went wrong, in words. */
export const Problem = ({ words }) => (words ? html`<div class="card stop" role="alert"><strong>▲ ${words}</strong></div>` : null);

/** Exchange with the server now, by hand. */
export const exchangeNow = () => { sync().catch(() => {}); };
