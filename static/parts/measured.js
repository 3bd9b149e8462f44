// Typed numbers: kept as typed, read by one rule, the same as the server's; both are held to the same vectors.

const SPACES = /[\u00a0\u2007\u2009\u202f]/gu;
const NUMBER = /^([<>]?)(-?(?:\d{1,3}(?: \d{3})+|\d+)(?:[.,]\d+)?|-?[.,]\d+)([eE][+-]?\d{1,3})?$/u;

/**
 * Read a typed number.
 * @param {string} text
 * @returns {{sign: string, value: number} | {problem: string}}
 */
export function read(text) {
  const plain = text
    .replace(SPACES, " ")
    .replaceAll("≤", "<")
    .replaceAll("≥", ">")
    .replaceAll("−", "-")
    .trim()
    .replace(/^([<>])\s+/u, "$1");
  if (plain.includes(".") && plain.includes(",")) {
    return { problem: `“${text}” has both a point and a comma: write 1234.5 or 1234,5.` };
  }
  const found = NUMBER.exec(plain);
  if (!found) return { problem: `“${text}” is not a number.` };
  const value = Number(found[2].replaceAll(" ", "").replace(",", ".") + (found[3] ?? ""));
  if (!Number.isFinite(value)) return { problem: `“${text}” is too large.` };
  return { sign: found[1] || "=", value };
}

/** The number of a measured value {text, unit} in another unit of its quantity, or null. */
export function valueOf(measured, unit, units) {
  if (!measured) return null;
  const reading = read(measured.text);
  const from = units[measured.unit];
  const into = units[unit];
  if (reading.problem || !from || !into || from.quantity !== into.quantity) return null;
  if (measured.unit === unit) return reading.value;
  return (reading.value * from.factor + (from.offset ?? 0) - (into.offset ?? 0)) / into.factor;
}
