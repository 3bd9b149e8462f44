// The Field place: points, a point's card, taking a sample, my samples, handing over.

import { html } from "../parts/html.js";
import { HandOver } from "./hand_over.js";
import { Points } from "./points.js";
import { Samples } from "./samples.js";
import { TakeSample } from "./take_sample.js";

/** The screen of a path within Field. */
export function field([what, id, act]) {
  if (what === "point" && act === "take") return html`<${TakeSample} key=${id} id=${id} />`;
  if (what === "point") return html`<${Points} id=${id} />`;
  if (what === "samples") return html`<${Samples} />`;
  if (what === "hand-over") return html`<${HandOver} />`;
  return html`<${Points} />`;
}
