// Field: the points beside what is done at one of them.

import { Empty, Frame, Sides } from "../parts/frame.js";
import { html } from "../parts/html.js";
import { one } from "../parts/view.js";
import { Card } from "./card.js";
import { HandOver } from "./hand_over.js";
import { Points } from "./points.js";
import { Samples } from "./samples.js";
import { Take } from "./take.js";

function Nothing() {
  return html`<div class="screen"><${Empty} title="Choose a point">Its dangers, what to expect there and the dilution stand here.<//></div>`;
}

const TITLES = { samples: "My samples", "hand-over": "Hand over" };

function detailOf([first, id, act]) {
  if (first === "samples") return html`<${Samples} />`;
  if (first === "hand-over") return html`<${HandOver} />`;
  if (first === "point" && id) return act === "take" ? html`<${Take} key=${id} id=${id} />` : html`<${Card} key=${id} id=${id} />`;
  return null;
}

/**
 * The screen of a path below /field.
 * @param {string[]} rest the path's parts after the place
 */
export function field(rest) {
  const detail = detailOf(rest);
  const point = rest[0] === "point" ? rest[1] : null;
  const title = point ? (one("point", point)?.discharger_name ?? "Point") : (TITLES[rest[0]] ?? "Points");
  return html`<${Frame} place="field" title=${title} wide>
    <${Sides} front=${detail ? "detail" : "list"} list=${html`<${Points} here=${detail ? (point ?? "none") : null} />`} detail=${detail ?? html`<${Nothing} />`} />
  <//>`;
}
