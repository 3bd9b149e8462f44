// The device's store. Whatever a screen shows comes from here; "saved" means that a transaction of this store is complete.

import { openDB } from "../vendor/idb.js";
import { uuid7 } from "./uuid7.js";

const NAME = "weirbook";
const VERSION = 1;
let opening = null;

/** What is told when the store cannot be used; forms keep what was typed. */
export class StoreProblem extends Error {}

function upgrade(db) {
  const records = db.createObjectStore("records", { keyPath: ["type", "id"] });
  records.createIndex("type", "type");
  db.createObjectStore("outbox", { keyPath: "n" });
  db.createObjectStore("drafts", { keyPath: "key" });
  db.createObjectStore("meta", { keyPath: "key" });
}

async function opened() {
  const db = await openDB(NAME, VERSION, {
    upgrade,
    blocking(_current, _blocked, event) {
      event.target.close();
      opening = null;
    },
    terminated() {
      opening = null;
    },
  });
  const tx = db.transaction("meta", "readwrite", { durability: "strict" });
  if (!(await tx.store.get("device"))) {
    await tx.store.put({ key: "device", id: uuid7(), incarnation: uuid7(), made: new Date().toISOString() });
    await tx.store.put({ key: "last", n: 0, digest: null });
  }
  await tx.done;
  return db;
}

/** The open database; opened again once when the browser has closed it. */
export function open() {
  opening ??= opened().catch((error) => {
    opening = null;
    throw new StoreProblem(
      `This browser does not let Weirbook keep anything (${error.name}). Nothing can be recorded here: use another ` +
        "window that is not private, or free some space.",
    );
  });
  return opening;
}

/** Begin a transaction; a handle that the browser closed in the meantime is replaced once. */
export async function begin(stores, mode = "readonly") {
  const options = { durability: mode === "readwrite" ? "strict" : "default" };
  try {
    return (await open()).transaction(stores, mode, options);
  } catch (error) {
    if (error.name !== "InvalidStateError") throw error;
    opening = null;
    return (await open()).transaction(stores, mode, options);
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
