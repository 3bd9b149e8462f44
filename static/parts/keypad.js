// A big keypad for the bench: one thumb, gloves, no keyboard that covers the screen.

import { html } from "./html.js";

const ROWS = ["7", "8", "9", "4", "5", "6", "1", "2", "3"];

/**
 * What a text becomes when a key is pressed.
 * @param {string} text what stands in the field
 * @param {string} key a digit, a decimal mark, "<", "-" or "back"
 */
export function typeKey(text, key) {
  if (key === "back") return text.slice(0, -1);
  if (key === "<") return text.startsWith("<") ? text.slice(1) : `<${text}`;
  if (key === "-") return text.startsWith("-") ? text.slice(1) : `-${text}`;
  if (key === "." || key === ",") return /[.,]/u.test(text) ? text : `${text}${key}`;
  return text + key;
}

/**
 * The keypad. `less` adds the sign for a bound, `minus` the sign for a number under zero.
 * @param {{text: string, onText: (text: string) => void, decimal?: string, less?: boolean, minus?: boolean,
 *          next?: () => void, nextWords?: string}} props
 */
export function Keypad({ text, onText, decimal = ".", less = false, minus = false, next, nextWords = "Next" }) {
  const press = (key) => () => onText(typeKey(text, key));
  const key = (name, words = name, label) => html`<button type="button" key=${name} aria-label=${label} onClick=${press(name)}>${words}</button>`;
  return html`<div class="keypad" role="group" aria-label="Keypad">
    ${ROWS.map((digit) => key(digit))}
    ${key(decimal, decimal, decimal === "," ? "decimal comma" : "decimal point")}${key("0")}${key("back", "⌫", "Delete the last character")}
    ${less && key("<", "<", "below")}${minus && key("-", "−", "minus")}
    ${next && html`<button type="button" class="next" key="next" onClick=${next}>${nextWords}</button>`}
  </div>`;
}
