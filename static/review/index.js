// The Review: its screens by path.

import { Empty, Frame } from "../parts/frame.js";
import { html } from "../parts/html.js";

/**
 * The screen of a path below /review.
 * @param {string[]} _rest the path's parts after the place
 */
export function review(_rest) {
  return html`<${Frame} place="review" title="Review"><${Empty} title="Nothing here yet">This place has no screens in this build.<//><//>`;
}
