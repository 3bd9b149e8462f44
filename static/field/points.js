// The list of points: searched by any word, the firm first.

import { html, useState } from "../parts/html.js";
import { useName } from "../parts/fields.js";
import { ago, reported } from "../parts/format.js";
import { Empty } from "../parts/frame.js";
import { all, one, programme, useView } from "../parts/view.js";
import { cardOf, matches } from "./point.js";
import { Today } from "./round.js";

function Last({ point }) {
  const outlook = one("outlook", point.id);
  const last = outlook?.recent?.at(-1);
  if (!last) return html`<span>no result yet</span>`;
  return html`<span>last ${reported(last.shown)} mg/L, ${ago(last.at)}</span>`;
}

function Row({ point, here }) {
  return html`<li><a href=${cardOf(point.id)} aria-current=${here ? "true" : undefined}>
    <strong>${point.discharger_name}</strong>
    <span class="under"><span>${point.name}</span><${Last} point=${point} /></span>
  </a></li>`;
}

const byName = (a, b) => `${a.discharger_name} ${a.name}`.localeCompare(`${b.discharger_name} ${b.name}`);

function NoPoints() {
  if (!programme()) {
    return html`<${Empty} title="Nothing is on this tablet yet">The points come with the first contact to the server after
      you <a href="/sign-in">sign in</a>.<//>`;
  }
  return html`<${Empty} title="No discharge points yet">A coordinator registers dischargers and points in
    <a href="/review">Review</a>; they appear here by themselves.<//>`;
}

/** The list, with the search above it. `here` is the point that is shown beside it. */
export function Points({ here }) {
  const [text, setText] = useState("");
  const points = useView(() => all("point")).sort(byName);
  const name = useName();
  const found = points.filter((point) => matches(point, text));
  return html`<div class="screen">
    <div class="row spread head"><${here ? "h2" : "h1"}>Points<//>
      <span class="row"><a class="button" href="/field/rounds">Rounds</a><a class="button" href="/field/samples">My samples</a></span></div>
    <${Today} />
    ${points.length > 0 && html`<div class="field search"><label for=${name}>Find a point</label>
      <input id=${name} type="search" autocomplete="off" value=${text} onInput=${(event) => setText(event.target.value)} /></div>`}
    ${points.length === 0 && html`<${NoPoints} />`}
    ${points.length > 0 && found.length === 0 && html`<${Empty} title="No point has these words">Try part of the firm's name, or the outlet.<//>`}
    <ul class="plain list">${found.map((point) => html`<${Row} key=${point.id} point=${point} here=${point.id === here} />`)}</ul>
  </div>`;
}
