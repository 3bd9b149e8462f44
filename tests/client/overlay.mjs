// Lays entries over records as the tablet does; reads {records, texts} and writes the records as JSON.

import { readFileSync } from "node:fs";
import { overlay } from "../../static/parts/overlay.js";

const { records, texts, units } = JSON.parse(readFileSync(0, "utf8"));
const base = new Map();
for (const record of records) {
  if (!base.has(record.type)) base.set(record.type, new Map());
  base.get(record.type).set(record.id, record);
}
const before = JSON.stringify([...base].map(([type, all]) => [type, [...all]]));
const after = overlay(base, texts.map((text) => ({ text })), units);
const untouched = before === JSON.stringify([...base].map(([type, all]) => [type, [...all]]));
const found = [...after.values()].flatMap((all) => [...all.values()]);
console.log(JSON.stringify({ untouched, records: found }));
