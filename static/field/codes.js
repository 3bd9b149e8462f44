// A bottle code for a bottle without a printed label: drawn by lot, never one that this device knows.

import { ALPHABET, makeCode } from "../parts/bottle_code.js";
import { one } from "../parts/view.js";

const BODY = 5;

/** A new bottle code. Two devices draw the same one about once in fourteen million draws; the server then holds the second. */
export function freshCode() {
  for (;;) {
    const body = [...crypto.getRandomValues(new Uint8Array(BODY * 4))]
      .filter((byte) => byte < 256 - (256 % ALPHABET.length))
      .slice(0, BODY)
      .map((byte) => ALPHABET[byte % ALPHABET.length])
      .join("");
    const code = body.length === BODY ? makeCode(body) : null;
    if (code && !one("bottle", code)) return code;
  }
}
