// The list of discharge points, searchable by what people remember, and beside it the card of one.

import { html, useState } from "../parts/html.js";
import { TextField } from "../parts/fields.js";
import { dayAndTime } from "../parts/format.js";
import { Empty, Frame, Sides } from "../parts/frame.js";
import { all, programme, useView } from "../parts/view.js";
import { PointCard } from "./point_card.js";

const matches = (point, words) => {
  const text = `${point.discharger_name} ${point.name} ${point.access} ${point.sector ?? ""}`.toLowerCase();
  return words.toLowerCase().split(/\s+/u).every((word) => text.includes(word));
};

function Row({ point, current, latest, zone }) {
  return html`<a href="/field/point/${encodeURIComponent(point.id)}" aria-current=${current ? "true" : undefined}>
    <strong>${point.discharger_name}</strong>
    <span class="under"><span>${point.name}</span><span>${latest ? `${latest.state}, ${dayAndTime(latest.collected_at, zone)}` : ""}</span></span></a>`;
}

/** The points, and the card of the one with this id. */
export function Points({ id }) {
  const [words, setWords] = useState("");
  const points = useView(() => all("point")).sort((a, b) => (a.discharger_name < b.discharger_name ? -1 : 1));
  const samples = useView(() => all("sample"));
  const settings = useView(programme);
  const latest = new Map(samples.map((sample) => [sample.point, sample]));
  const found = points.filter((point) => matches(point, words));
  const list = html`<div class="screen stack"><h1>Discharge points</h1>
    <div class="row"><a class="button" href="/field/samples">Samples</a><a class="button" href="/field/hand-over">Hand over</a></div>
    <${TextField} label="Find" value=${words} onInput=${setWords} type="search" placeholder="firm, outlet, street" />
    ${points.length === 0 && html`<${Empty} title="No discharge points on this tablet yet">A coordinator registers dischargers and points under <a href="/review/register">Review</a>; they appear after the next contact.<//>`}
    <nav class="list" aria-label="Points">${found.map((point) => html`<${Row} key=${point.id} point=${point} current=${point.id === id} latest=${latest.get(point.id)} zone=${settings?.zone} />`)}</nav>
    ${points.length > 0 && found.length === 0 && html`<${Empty} title="Nothing found">Try a part of the firm's name or the outlet.<//>`}
  </div>`;
  const detail = id ? html`<${PointCard} key=${id} id=${id} />`
    : html`<div class="screen"><${Empty} title="Choose a point">Its expected COD, the dilution and its hazards appear here.<//></div>`;
  return html`<${Frame} place="field" title=${id ? "Point" : "Discharge points"} about=${settings?.name} wide>
    <${Sides} front=${id ? "detail" : "list"} list=${list} detail=${detail} />
  <//>`;
}
