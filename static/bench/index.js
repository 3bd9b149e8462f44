// The Bench: its screens by path.

import { Empty, Frame } from "../parts/frame.js";
import { html } from "../parts/html.js";

/**
 * The screen of a path below /bench.
 * @param {string[]} _rest the path's parts after the place
 */
export function bench(_rest) {
  return html`<${Frame} place="bench" title="Bench"><${Empty} title="Nothing here yet">This place has no screens in this build.<//><//>`;
}
