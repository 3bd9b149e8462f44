// Push what waits, pull what is new. An entry leaves the outbox's waiting part only on our server's own word for it.

import { begin, getMeta, putMeta } from "./db.js";
import { ask, keep, NoContact, Refusal } from "./session.js";
import { sha256 } from "./sha256.js";
import { uuid7 } from "./uuid7.js";
import { outboxChanged, programme, recordsDropped, recordsPulled, sealedUpTo, subscribe } from "./view.js";

const PROTOCOL = 1;
const BATCH = 100;
const BATCH_BYTES = 2_000_000;
const PAGE = 1000;
const CALM_MS = 20_000;
const LONGEST_MS = 300_000;

/** How the last exchange went: shown as words, never guessed from navigator.onLine. */
export const health = { contact: null, problem: "", refused: "", signIn: false, running: false };
const watchers = new Set();
let again = false;
let compared = false;
let failures = 0;
let timer = 0;

/** Call back when the state of the exchange changes. */
export function watch(watcher) {
  watchers.add(watcher);
  return () => watchers.delete(watcher);
}

function tell(changes) {
  Object.assign(health, changes);
  watchers.forEach((watcher) => watcher());
}

async function nextBatch() {
  const tx = await begin("outbox");
  const rows = (await tx.store.getAll()).filter((row) => row.state === "tablet");
  const batch = [];
  let bytes = 0;
  for (const row of rows) {
    bytes += row.text.length;
    if (batch.length === BATCH || (batch.length && bytes > BATCH_BYTES)) break;
    batch.push(row);
  }
  return batch;
}

/** Change rows of the outbox in one transaction; `change` returns the new row, or null to leave it. */
async function changeOutbox(change) {
  const tx = await begin("outbox", "readwrite");
  const rows = await tx.store.getAll();
  for (let i = 0; i < rows.length; i += 1) {
    const next = change(rows[i]);
    if (!next) continue;
    rows[i] = next;
    await tx.store.put(next);
  }
  await tx.done;
  outboxChanged(rows);
}

async function acknowledge(answers) {
  const byId = new Map(answers.map((answer) => [answer.id, answer]));
  await changeOutbox((row) => {
    const answer = byId.get(row.id);
    if (!answer || row.state !== "tablet") return null;
    const held = answer.result === "held" || (answer.result === "duplicate" && answer.code);
    const told = held ? { code: answer.code, message: answer.message, fields: answer.fields } : null;
    return { ...row, state: held ? "held" : "server", position: answer.position, told };
  });
}

/** Push texts of a device; what is no answer to them throws. */
export async function push(state, device, texts) {
  const answer = await ask("POST", "/api/push", {
    protocol: PROTOCOL,
    build: state.build,
    epoch: state.epoch,
    device: device.id,
    incarnation: device.incarnation,
    entries: texts,
  });
  if (!answer.weirbook || answer.digest !== sha256(texts.join(""))) throw new NoContact();
  return answer;
}

async function pushAll(state) {
  const device = await getMeta("device");
  for (let batch = await nextBatch(); batch.length; batch = await nextBatch()) {
    const { answers } = await push(state, device, batch.map((row) => row.text));
    await acknowledge(answers);
    const forked = new Set(answers.filter((answer) => answer.code === "device_fork").map((answer) => answer.id));
    const { incarnation } = await getMeta("device");
    if (batch.some((row) => forked.has(row.id) && JSON.parse(row.text).incarnation === incarnation)) await becomeAnother();
  }
}

/**
 * This device's store is a copy, or was put back to an earlier state: another store has used its numbers. From here on it
 * is a store of its own, whose entries begin with 1; what was stated under the old name stays as it is.
 */
async function becomeAnother() {
  const tx = await begin("meta", "readwrite");
  const [device, last] = await Promise.all([tx.store.get("device"), tx.store.get("last")]);
  await tx.store.put({ ...device, incarnation: uuid7(), before: [...(device.before ?? []), device.incarnation] });
  await tx.store.put({ key: "last", n: 0, row: last.row ?? last.n, digest: null });
  await tx.done;
}

/** A server restored from a backup lacks what it once took: those entries go out again. */
async function sendAgainWhatIsMissing(state) {
  const [device, last] = await Promise.all([getMeta("device"), getMeta("last")]);
  const { expect_n: next } = await push(state, device, []);
  if (next > last.n + 1) await becomeAnother();
  let lost = false;
  await changeOutbox((row) => {
    const { n, incarnation } = JSON.parse(row.text);
    if ((row.state !== "server" && row.state !== "held") || incarnation !== device.incarnation || n < next) return null;
    lost = true;
    return { ...row, state: "tablet", position: null, told: null };
  });
  if (lost) await beginAnew();
}

const OTHER = "It was made for another programme than the one this server runs now. It is kept on this tablet only.";

const offered = (row) => (row.state === "server" || row.state === "held" ? { ...row, state: "tablet", position: null, told: null } : null);

/**
 * The server is in another state than the one this device knew: read all again, and after a restore offer every entry again.
 * Its positions are given anew from the copy on, so none that this device knew says anything any more; the same bytes
 * answer as duplicates.
 */
async function beginWith(state, epoch) {
  const before = programme()?.id;
  // Before the new epoch is kept: a device that stops in between offers them all the same.
  if (epoch.split(".")[0] !== state.epoch.split(".")[0]) await changeOutbox(offered);
  await pullAll(state.epoch);
  const now = programme()?.id;
  if (before && now && before !== now) {
    await changeOutbox((row) => ({ ...row, state: "other", told: { code: "other_programme", message: OTHER, fields: {} } }));
  }
}

async function keepPage(page, epoch) {
  const tx = await begin(["records", "meta"], "readwrite");
  const records = tx.objectStore("records");
  for (const record of page.records) {
    if (record.body === null) await records.delete([record.type, record.id]);
    else await records.put(record);
  }
  await tx.objectStore("meta").put({ key: "cursor", position: page.next, epoch });
  await tx.done;
  recordsPulled(page.records, page.next);
}

async function beginAnew() {
  const tx = await begin(["records", "meta"], "readwrite");
  await tx.objectStore("records").clear();
  await tx.objectStore("meta").delete("cursor");
  await tx.done;
  recordsDropped();
}

async function pullAll(epoch) {
  let cursor = await getMeta("cursor");
  if (cursor && cursor.epoch !== epoch) {
    await beginAnew();
    cursor = null;
    compared = false;
  }
  let after = cursor?.position ?? 0;
  for (let more = true; more;) {
    const page = await ask("GET", `/api/pull?epoch=${epoch}&after=${after}&limit=${PAGE}`);
    if (!page.weirbook) throw new NoContact();
    if (page.records.length || page.next !== after) await keepPage(page, epoch);
    after = page.next;
    more = page.more;
  }
}

async function exchange() {
  const state = await keep(await ask("GET", "/api/state"));
  if (!state.person) {
    tell({ signIn: state.started, contact: new Date().toISOString(), problem: "" });
    return;
  }
  sealedUpTo(state.sealed ?? 0);
  const cursor = await getMeta("cursor");
  if (cursor && cursor.epoch !== state.epoch) await beginWith(state, cursor.epoch);
  if (!compared) await sendAgainWhatIsMissing(state);
  compared = true;
  await pushAll(state);
  await pullAll(state.epoch);
  tell({ contact: new Date().toISOString(), problem: "", refused: "", signIn: false });
}

async function attempt() {
  try {
    await exchange();
    failures = 0;
  } catch (error) {
    failures += 1;
    const known = error instanceof Refusal || error instanceof NoContact;
    const refused = error instanceof Refusal && error.status !== 401 ? error.message : "";
    tell({ problem: known ? error.message : `The exchange failed (${error.name}). Nothing is lost.`, refused });
    if (error instanceof Refusal && error.status === 401) tell({ signIn: true });
  }
}

function later() {
  clearTimeout(timer);
  const wait = Math.min(LONGEST_MS, CALM_MS * 2 ** Math.min(failures, 4)) * (0.75 + Math.random() / 2);
  timer = setTimeout(() => { sync().catch(() => {}); }, failures ? Math.min(wait, failures < 4 ? 5000 : wait) : wait);
}

async function locked(work) {
  if (!navigator.locks) return work();
  return navigator.locks.request("weirbook-sync", { ifAvailable: true }, (lock) => (lock ? work() : undefined));
}

/** Exchange with the server now; calls during an exchange lead to one more after it. */
export async function sync() {
  if (health.running) {
    again = true;
    return;
  }
  tell({ running: true });
  do {
    again = false;
    await locked(attempt);
  } while (again && !health.problem);
  tell({ running: false });
  later();
}

const soon = () => { sync().catch(() => {}); };

/** Exchange at the start, whenever the page comes to the front, and after each entry. */
export async function startSync() {
  health.contact = (await getMeta("contact"))?.at ?? null;
  addEventListener("online", soon);
  addEventListener("pageshow", soon);
  document.addEventListener("visibilitychange", () => { if (!document.hidden) soon(); });
  subscribe((why) => { if (why === "entry") soon(); });
  soon();
}

/** Forget who is here, on this device and on the server; entries that wait stay. */
export async function signOut() {
  await ask("DELETE", "/api/session");
  await putMeta("person", {});
}
