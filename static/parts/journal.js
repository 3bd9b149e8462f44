// Making entries. The number, the digest of the entry before and the entry itself are written in one transaction;
// a promise of this module is fulfilled only when that transaction is complete.

import { begin, freeReserve, mark, StoreProblem } from "./db.js";
import { versionOf } from "./kinds.js";
import { sha256 } from "./sha256.js";
import { uuid7 } from "./uuid7.js";
import { entryAdded } from "./view.js";

/** What is told when an entry could not be kept; the form keeps what was typed. */
export class NotSaved extends Error {}

const pad = (number) => String(number).padStart(2, "0");

/** A moment as RFC 3339 with this device's offset from UTC. */
export function withOffset(moment = new Date()) {
  const offset = -moment.getTimezoneOffset();
  const sign = offset < 0 ? "-" : "+";
  const local = new Date(moment.getTime() + offset * 60000).toISOString().slice(0, 19);
  return `${local}${sign}${pad(Math.floor(Math.abs(offset) / 60))}:${pad(Math.abs(offset) % 60)}`;
}

function textOf({ kind, about, body, blobs = [] }, { device, last, person, contact, base }) {
  return JSON.stringify({
    id: uuid7(),
    device: device.id,
    incarnation: device.incarnation,
    n: last.n + 1,
    prev: last.digest,
    kind,
    version: versionOf(kind),
    about,
    at: withOffset(),
    zone: Intl.DateTimeFormat().resolvedOptions().timeZone,
    skew_ms: contact?.skew_ms ?? null,
    by: person.id,
    base,
    body,
    blobs,
  });
}

async function write(made, tx) {
  const meta = tx.objectStore("meta");
  const [device, person, contact, cursor] = await Promise.all(
    ["device", "person", "contact", "cursor"].map((key) => meta.get(key)),
  );
  if (!person?.id) throw new NotSaved("Nobody has signed in on this device yet, so nothing can be stated here.");
  let last = await meta.get("last");
  // The store's own number runs on when the device takes a new incarnation, whose entries begin with 1 again.
  let row = last.row ?? last.n;
  const rows = [];
  for (const one of made) {
    const { kind, about } = one;
    const text = textOf(one, { device, last, person, contact, base: cursor?.position ?? 0 });
    const { id, at, n } = JSON.parse(text);
    row += 1;
    last = { key: "last", n, row, digest: sha256(text) };
    rows.push({ n: row, id, kind, about, at, text, state: "tablet", position: null, told: null });
  }
  for (const row of rows) await tx.objectStore("outbox").add(row);
  await meta.put(last);
  return rows;
}

async function attempt(made) {
  const tx = await begin(["meta", "outbox"], "readwrite");
  try {
    const rows = await write(made, tx);
    const device = await tx.objectStore("meta").get("device");
    await tx.done;
    mark(device, rows.at(-1)?.n ?? 0);
    return rows;
  } catch (error) {
    try {
      tx.abort();
    } catch { /* the browser has ended it already */ }
    throw await tx.done.then(() => error, (cause) => (error.name === "AbortError" && cause ? cause : error));
  }
}

const isFull = (error) => error.name === "QuotaExceededError";

function notSaved(error) {
  if (error instanceof NotSaved) return error;
  if (error instanceof StoreProblem) return new NotSaved(`Not saved. ${error.message} What you typed is still in the form.`);
  return new NotSaved(
    isFull(error)
      ? "Not saved: this device has no room left. What you typed is still in the form; free some space and save again."
      : `Not saved (${error.name}). What you typed is still in the form; save again.`,
  );
}

/**
 * State several things at once: all are kept, or none. A full device gives up its reserve once.
 * @param {{kind: string, about: string, body: object, blobs?: string[]}[]} made
 */
export async function stateAll(made) {
  const again = async (error) => {
    if (!isFull(error) || !(await freeReserve().catch(() => false))) throw error;
    return attempt(made);
  };
  const rows = await attempt(made).catch(again).catch((error) => { throw notSaved(error); });
  entryAdded(rows);
  return rows;
}

/** State one thing; `blobs` are the digests of its photos. */
export async function state(kind, about, body, blobs = []) {
  return (await stateAll([{ kind, about, body, blobs }]))[0];
}

/** A new identity for a thing. */
export const newId = () => uuid7();
