// SHA-256 (FIPS 180-4), synchronous: an entry's digest is needed inside an IndexedDB transaction,
// and awaiting crypto.subtle there would close the transaction.

const K = new Uint32Array(64);
const START = new Uint32Array(8);

/** The first 32 bits of the fraction of a root. */
const fraction = (x) => ((x - Math.floor(x)) * 2 ** 32) >>> 0;

for (let candidate = 2, found = 0; found < 64; candidate += 1) {
  let prime = true;
  for (let d = 2; d * d <= candidate; d += 1) if (candidate % d === 0) prime = false;
  if (!prime) continue;
  if (found < 8) START[found] = fraction(Math.sqrt(candidate));
  K[found] = fraction(Math.cbrt(candidate));
  found += 1;
}

const turn = (x, by) => (x >>> by) | (x << (32 - by));

function padded(bytes) {
  const blocks = new Uint8Array(((bytes.length + 8) >> 6) * 64 + 64);
  blocks.set(bytes);
  blocks[bytes.length] = 0x80;
  const view = new DataView(blocks.buffer);
  view.setUint32(blocks.length - 8, Math.floor(bytes.length / 2 ** 29));
  view.setUint32(blocks.length - 4, (bytes.length << 3) >>> 0);
  return view;
}

function schedule(view, offset, w) {
  for (let i = 0; i < 16; i += 1) w[i] = view.getUint32(offset + i * 4);
  for (let i = 16; i < 64; i += 1) {
    const a = w[i - 15];
    const b = w[i - 2];
    const s0 = turn(a, 7) ^ turn(a, 18) ^ (a >>> 3);
    const s1 = turn(b, 17) ^ turn(b, 19) ^ (b >>> 10);
    w[i] = w[i - 16] + s0 + w[i - 7] + s1;
  }
}

function compress(state, w) {
  let [a, b, c, d, e, f, g, h] = state;
  for (let i = 0; i < 64; i += 1) {
    const t1 = (h + (turn(e, 6) ^ turn(e, 11) ^ turn(e, 25)) + ((e & f) ^ (~e & g)) + K[i] + w[i]) | 0;
    const t2 = ((turn(a, 2) ^ turn(a, 13) ^ turn(a, 22)) + ((a & b) ^ (a & c) ^ (b & c))) | 0;
    [h, g, f, e, d, c, b, a] = [g, f, e, (d + t1) | 0, c, b, a, (t1 + t2) | 0];
  }
  [a, b, c, d, e, f, g, h].forEach((value, i) => { state[i] += value; });
}

/** The SHA-256 of a text's UTF-8 bytes, or of bytes, in hexadecimal. */
export function sha256(given) {
  const bytes = typeof given === "string" ? new TextEncoder().encode(given) : given;
  const view = padded(bytes);
  const state = START.slice();
  const w = new Uint32Array(64);
  for (let offset = 0; offset < view.byteLength; offset += 64) {
    schedule(view, offset, w);
    compress(state, w);
  }
  return [...state].map((x) => x.toString(16).padStart(8, "0")).join("");
}
