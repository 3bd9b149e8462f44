// The device's store. Whatever a screen shows comes from here; "saved" means that a transaction of this store is complete.

import { openDB } from "../vendor/idb.js";
import { uuid7 } from "./uuid7.js";

const NAME = "weirbook";
const VERSION = 2;
const MARK = "weirbook-mark";
const RESERVE_BYTES = 400_000;

/** What is wrong with the store, in words for a banner; empty while it works. */
export const store = { trouble: "" };

/** What is told when the store cannot be used; forms keep what was typed. */
export class StoreProblem extends Error {}

let opening = null;

function tell(words) {
  store.trouble = words;
  dispatchEvent(new Event("weirbook-store"));
}

function first(db) {
  const records = db.createObjectStore("records", { keyPath: ["type", "id"] });
  records.createIndex("type", "type");
  db.createObjectStore("outbox", { keyPath: "n" });
  db.createObjectStore("drafts", { keyPath: "key" });
  db.createObjectStore("meta", { keyPath: "key" });
}

function second(db) {
  db.createObjectStore("photos", { keyPath: "sha256" });
}

/** Step n makes a store of version n; the steps of one opening are one transaction: all of them, or none. */
const STEPS = [first, second];

const upgrade = (db, from) => STEPS.slice(from).forEach((step) => step(db));

/** The device and its last number as they stand outside the store; null when they stand nowhere. */
function marked() {
  let text = null;
  try {
    text = localStorage.getItem(MARK);
  } catch { /* refused as the store may be */ }
  text ??= document.cookie.split("; ").find((one) => one.startsWith(`${MARK}=`))?.slice(MARK.length + 1);
  const [device, incarnation, n] = text?.split("~") ?? [];
  return incarnation ? { device, incarnation, n: Number(n) } : null;
}

/** Note the last number outside the store, so that a store which comes back empty is noticed. */
export function mark(device, n) {
  const before = marked();
  if (before?.incarnation === device.incarnation && before.n > n) return;
  const text = [device.id, device.incarnation, n].join("~");
  try {
    localStorage.setItem(MARK, text);
  } catch { /* the cookie stands alone then */ }
  document.cookie = `${MARK}=${text};path=/;max-age=34560000;samesite=strict${location.protocol === "https:" ? ";secure" : ""}`;
}

/** Room that is given up when an entry has no other. Random, since a store may press repeated bytes to nothing. */
function reserve() {
  const filler = new Uint8Array(RESERVE_BYTES);
  for (let at = 0; at < RESERVE_BYTES; at += 65536) crypto.getRandomValues(filler.subarray(at, at + 65536));
  return { key: "reserve", filler: filler.buffer };
}

/** Put a reserve where there is none; without room there is none. */
export async function keepReserve() {
  if (await getMeta("reserve")) return;
  const tx = await begin("meta", "readwrite");
  tx.store.put(reserve()).catch(() => {});
  await tx.done;
}

/** Give the reserve up; false when there is none. */
export async function freeReserve() {
  const tx = await begin("meta", "readwrite");
  const there = await tx.store.get("reserve");
  await tx.store.delete("reserve");
  await tx.done;
  return Boolean(there);
}

/** A device of its own with nothing numbered yet; `lost` is what stood outside an empty store. */
export async function newDevice(meta, lost = null) {
  const device = { key: "device", id: uuid7(), incarnation: uuid7(), made: new Date().toISOString() };
  await meta.put(device);
  await meta.put({ key: "last", n: 0, digest: null });
  if (lost) await meta.put({ ...lost, key: "lost" });
  return device;
}

/** Whoever waits for the end hears of an abort; nobody else has to. */
function handled(tx) {
  tx.done.catch(() => {});
  return tx;
}

async function opened() {
  const db = await openDB(NAME, VERSION, {
    upgrade,
    blocked() {
      tell("Another window still holds this tablet's store as an older Weirbook made it. Close that window; this one then goes on by itself.");
    },
    blocking(_current, _blocked, event) {
      event.target.close();
      opening = null;
      tell("A newer Weirbook was opened in another window, so this one has let go of the store. Save what is in the form to a file if you must, then reload; what was saved is kept.");
    },
    terminated() {
      opening = null;
    },
  });
  const tx = handled(db.transaction("meta", "readwrite", { durability: "strict" }));
  if (!(await tx.store.get("device"))) {
    const before = marked();
    const device = await newDevice(tx.store, before?.n ? before : null);
    await tx.done;
    mark(device, 0);
    return db;
  }
  await tx.done;
  return db;
}

const wordsOf = (error) => (error.name === "VersionError"
  ? "This tablet's store was made by a newer Weirbook than this page. Reload the page; nothing is lost."
  : `This browser does not let Weirbook keep anything (${error.name}). Nothing can be recorded here: use another ` +
    "window that is not private, or free some space.");

async function openedOrTold() {
  try {
    const db = await opened();
    if (store.trouble) tell("");
    return db;
  } catch (error) {
    opening = null;
    tell(wordsOf(error));
    throw new StoreProblem(store.trouble);
  }
}

/** The open database; opened again once when the browser has closed it. */
export function open() {
  opening ??= openedOrTold();
  return opening;
}

/** Begin a transaction; a handle that the browser closed in the meantime is replaced once. */
export async function begin(stores, mode = "readonly") {
  const start = async () => handled((await open()).transaction(stores, mode, { durability: mode === "readwrite" ? "strict" : "default" }));
  try {
    return await start();
  } catch (error) {
    if (error.name !== "InvalidStateError") throw error;
    opening = null;
    return start();
  }
}

/** One value of the store's own facts, without its key. */
export async function getMeta(key) {
  const tx = await begin("meta");
  return (await tx.store.get(key)) ?? null;
}

/** Put one of the store's own facts. */
export async function putMeta(key, value) {
  const tx = await begin("meta", "readwrite");
  await tx.store.put({ ...value, key });
  await tx.done;
}

/** Everything typed into forms that were not saved yet. */
export async function allDrafts() {
  return (await begin("drafts")).store.getAll();
}

/** What was typed into a form that was not saved yet, or null. */
export async function getDraft(key) {
  const tx = await begin("drafts");
  return (await tx.store.get(key))?.values ?? null;
}

/** Keep what is being typed, character for character. */
export async function putDraft(key, values) {
  const tx = await begin("drafts", "readwrite");
  await tx.store.put({ key, values });
  await tx.done;
}

/** Forget a draft once its form was saved. */
export async function dropDraft(key) {
  const tx = await begin("drafts", "readwrite");
  await tx.store.delete(key);
  await tx.done;
}
