// The Review place: results beside their limits, certificates, points, people, held entries.

import { html } from "../parts/html.js";
import { Devices } from "./devices.js";
import { Held } from "./held.js";
import { People } from "./people.js";
import { PointReview } from "./point.js";
import { Register, RegisterPoint, SetLimit } from "./register.js";
import { ResultReview } from "./result.js";
import { Overview } from "./overview.js";
import { Trust } from "./trust.js";

/**
 * The screen of a path below /review.
 * @param {string[]} rest the path's parts after the place
 */
export function review([what, id, more]) {
  if (what === "point" && more === "limit") return html`<${SetLimit} key=${id} id=${id} />`;
  if (what === "point") return html`<${Overview} id=${id} detail=${html`<${PointReview} key=${id} id=${id} />`} />`;
  if (what === "result") return html`<${ResultReview} key=${id} id=${id} />`;
  if (what === "register" && id) return html`<${RegisterPoint} key=${id} id=${id} />`;
  if (what === "register") return html`<${Register} />`;
  if (what === "people") return html`<${People} />`;
  if (what === "trust") return html`<${Trust} id=${id} />`;
  if (what === "devices") return html`<${Devices} />`;
  if (what === "held") return html`<${Held} />`;
  return html`<${Overview} />`;
}
