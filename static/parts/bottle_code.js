// Bottle codes: ISO/IEC 7064 MOD 37-2 over an alphabet that is not misread.
// The same rules and the same words as app/compliance/codes.py; both are tested on the same vectors.

const STANDARD = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ*";
export const ALPHABET = "23456789ACDEFGHJKMNPQRTVWXY";
const MODULUS = 37;
const RADIX = 2;
const LENGTH = 6;
const SLIPS = { Z: "2", S: "5", B: "8" };

const sum = (text) => [...text].reduce((total, c) => ((total + STANDARD.indexOf(c)) * RADIX) % MODULUS, 0);

/** The check character of a text of digits and capital letters. */
export function checkCharacter(text) {
  return STANDARD[(MODULUS + 1 - sum(text)) % MODULUS];
}

/** The code of a body of five characters, or null for a body that is never issued. */
export function makeCode(body) {
  if (body.length !== LENGTH - 1 || [...body].some((c) => !ALPHABET.includes(c))) return null;
  const last = checkCharacter(body);
  return ALPHABET.includes(last) ? body + last : null;
}

/** What was typed or scanned: {code, problem}; problem is empty when code is a bottle code. */
export function readCode(text) {
  const code = [...text.replace(/\s+/gu, "").replaceAll("-", "").toUpperCase()].map((c) => SLIPS[c] ?? c).join("");
  const characters = [...code];
  const unknown = [...new Set(characters.filter((c) => !ALPHABET.includes(c)))].sort();
  if (unknown.length) {
    return { code: null, problem: `${unknown.join(" ")} is never printed in a bottle code: look at the label again` };
  }
  if (characters.length !== LENGTH) {
    return { code: null, problem: `a bottle code has six characters, not ${characters.length}` };
  }
  if ((sum(code.slice(0, -1)) + STANDARD.indexOf(code.at(-1))) % MODULUS !== 1) {
    return { code: null, problem: "one character is wrong or two are swapped: compare with the label" };
  }
  return { code, problem: "" };
}
