// Field: its screens by path.

import { Empty, Frame } from "../parts/frame.js";
import { html } from "../parts/html.js";

/** @param {string[]} _rest */
export function field(_rest) {
  return html`<${Frame} place="field" title="Field"><${Empty} title="No points yet">Register one in Review.<//><//>`;
}
