// What the screens see: the server's records with this device's own unsent entries laid over them.

import { useEffect, useState } from "../vendor/hooks.js";
import { begin } from "./db.js";
import { overlay } from "./overlay.js";

/** @type {Map<string, Map<string, object>>} records as the server gave them, by type and id */
const base = new Map();
/** @type {object[]} this device's entries, oldest first */
let outbox = [];
let cursor = 0;
let shown = base;
const listeners = new Set();
const channel = new BroadcastChannel("weirbook");

const table = (type) => base.get(type) ?? base.set(type, new Map()).get(type);

function put(record) {
  if (record.body === null) table(record.type).delete(record.id);
  else table(record.type).set(record.id, record);
}

/** Entries that the records do not show yet. */
const pending = () => outbox.filter((row) => row.state === "tablet" || (row.state === "server" && row.position > cursor));

function changed() {
  shown = overlay(base, pending());
  listeners.forEach((listener) => listener());
}

/** Read everything from the device's store. */
export async function load() {
  const tx = await begin(["records", "outbox", "meta"]);
  const [records, rows, at] = await Promise.all([
    tx.objectStore("records").getAll(),
    tx.objectStore("outbox").getAll(),
    tx.objectStore("meta").get("cursor"),
  ]);
  base.clear();
  records.forEach(put);
  outbox = rows;
  cursor = at?.position ?? 0;
  changed();
}

channel.onmessage = () => { load().catch(() => {}); };

/** Tell this page and the other tabs that entries were made here. */
export function entryAdded(rows) {
  outbox = [...outbox, ...rows];
  changed();
  channel.postMessage("entry");
  listeners.forEach((listener) => listener("entry"));
}

/** Records were pulled and are in the store. */
export function recordsPulled(records, position) {
  records.forEach(put);
  cursor = position;
  changed();
  channel.postMessage("records");
}

/** The outbox changed in the store. */
export function outboxChanged(rows) {
  outbox = rows;
  changed();
  channel.postMessage("outbox");
}

/** All begins anew: the server's records are another state. */
export function recordsDropped() {
  base.clear();
  cursor = 0;
  changed();
}

/** Call back on every change; returns how to stop. */
export function subscribe(listener) {
  listeners.add(listener);
  return () => listeners.delete(listener);
}

const flat = (record) => ({ ...record.body, id: record.id, parent: record.parent, local: record.local ?? false });

/** All things of a type (of one parent), in the order of their times. */
export function all(type, parent) {
  const found = [...(shown.get(type)?.values() ?? [])].filter((r) => parent === undefined || r.parent === parent);
  return found.sort((a, b) => (a.at < b.at ? -1 : a.at > b.at ? 1 : 0)).map(flat);
}

/** One thing, or null. */
export function one(type, id) {
  const record = shown.get(type)?.get(id);
  return record ? flat(record) : null;
}

/** The programme of this device's server, or null before the first contact. */
export const programme = () => all("programme")[0] ?? null;

/** This device's own entries, newest first. */
export const entries = () => [...outbox].reverse();

/** How many entries are on this device only, and the oldest of them. */
export function waiting() {
  const here = outbox.filter((row) => row.state === "tablet");
  return { count: here.length, oldest: here[0]?.at ?? null, held: outbox.filter((row) => row.state === "held").length };
}

let sealed = 0;

/** Everything up to a position of the server lies in a verified backup. */
export function sealedUpTo(position) {
  if (position === sealed) return;
  sealed = position;
  changed();
  listeners.forEach((listener) => listener("sealed"));
}

/** Where an entry of this device is: "tablet", "server", "backup", "held" or "other". */
export const placeOf = (row) => (row.state === "server" && row.position && row.position <= sealed ? "backup" : row.state);

/** Where the newest entry about a thing is; null when it was not stated here. */
export function whereIs(about) {
  const row = outbox.findLast((one_) => one_.about === about);
  return row ? placeOf(row) : null;
}

/** Draw again when anything changes, and return what a function finds. */
export function useView(find) {
  const [, draw] = useState(0);
  useEffect(() => subscribe(() => draw((n) => n + 1)), []);
  return find();
}
