// The tablet reads typed numbers as the server does: the same vectors, and the same units.

import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { test } from "node:test";
import { read, valueOf } from "../../static/parts/measured.js";

const json = (path) => JSON.parse(readFileSync(new URL(path, import.meta.url), "utf8"));
const units = json("../../static/units.json");

for (const { text, sign, value } of json("../journal/measured_vectors.json")) {
  test(`${JSON.stringify(text)} is ${sign ? "read" : "refused"}`, () => {
    const reading = read(text);
    if (sign) assert.deepEqual(reading, { sign, value });
    else assert.ok(reading.problem);
  });
}

test("a value is converted within its quantity, never across", () => {
  assert.equal(valueOf({ text: "1,5", unit: "g/L" }, "mg/L", units), 1500);
  assert.ok(Math.abs(valueOf({ text: "50", unit: "degF" }, "Cel", units) - 10) < 1e-9);
  assert.equal(valueOf({ text: "5", unit: "NTU" }, "mg/L", units), null);
  assert.equal(valueOf(null, "mg/L", units), null);
});
