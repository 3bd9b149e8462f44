// Field: the points beside what is done at one of them.

import { Empty, Frame, Sides } from "../parts/frame.js";
import { html } from "../parts/html.js";
import { one } from "../parts/view.js";
import { Card } from "./card.js";
import { HandOver } from "./hand_over.js";
import { Points } from "./points.js";
import { Meters } from "./meters.js";
import { PlanRound, Round, Rounds } from "./round.js";
import { SetSampler } from "./sampler.js";
import { Samples } from "./samples.js";
import { Take } from "./take.js";
import { Arrive, Split, Visit } from "./visit.js";

function Nothing() {
  return html`<div class="screen"><${Empty} title="Choose a point">Its dangers, what to expect there and the dilution stand here.<//></div>`;
}

const TITLES = { samples: "My samples", "hand-over": "Hand over", rounds: "Rounds", round: "Round", visit: "Visit", split: "Split", meters: "Meters" };

function ofRound(id, act, stop) {
  if (id === "new") return html`<${PlanRound} />`;
  const planned = act === "arrive" ? one("round", id)?.stops.find((one_) => one_.id === stop) : null;
  return planned ? html`<${Arrive} key=${stop} id=${planned.point} stop=${stop} round=${id} />` : html`<${Round} key=${id} id=${id} />`;
}

function ofPoint(id, act) {
  const screen = { take: Take, sampler: SetSampler, arrive: Arrive }[act] ?? Card;
  return html`<${screen} key=${id} id=${id} />`;
}

function detailOf([first, id, act, stop]) {
  if (first === "rounds") return html`<${Rounds} />`;
  if (first === "meters") return html`<${Meters} />`;
  if (first === "round" && id) return ofRound(id, act, stop);
  if (first === "visit" && id) return html`<${Visit} key=${id} id=${id} />`;
  if (first === "split" && id) return html`<${Split} key=${id} id=${id} />`;
  if (first === "samples") return html`<${Samples} />`;
  if (first === "hand-over") return html`<${HandOver} />`;
  if (first === "point" && id) return ofPoint(id, act);
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
