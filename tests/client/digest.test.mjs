// SHA-256 against the examples of FIPS 180-4 and against Node's own; UUID version 7 against RFC 9562.

import assert from "node:assert/strict";
import { createHash } from "node:crypto";
import { test } from "node:test";
import { sha256 } from "../../static/parts/sha256.js";
import { uuid7 } from "../../static/parts/uuid7.js";

test("the examples published with the standard (NIST, SHA-256 examples)", () => {
  assert.equal(sha256("abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  assert.equal(
    sha256("abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq"),
    "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1",
  );
});

test("every length around the block's edges, and text beyond ASCII", () => {
  for (let length = 0; length < 200; length += 1) {
    const text = "µ".repeat(length % 7) + "x".repeat(length);
    assert.equal(sha256(text), createHash("sha256").update(text, "utf8").digest("hex"), `length ${length}`);
  }
});

test("a large entry", () => {
  const text = "Abwasser ".repeat(50_000);
  assert.equal(sha256(text), createHash("sha256").update(text, "utf8").digest("hex"));
});

test("version 7: the time in front, version and variant where RFC 9562 puts them", () => {
  const id = uuid7(0x017f22e279b0); // the example's time, RFC 9562 appendix A.6
  assert.match(id, /^017f22e2-79b0-7[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/u);
  assert.equal(new Set(Array.from({ length: 1000 }, () => uuid7())).size, 1000);
});
