// What needs a decision first, then the points; beside it one point's history.

import { html, useState } from "../parts/html.js";
import { TextField } from "../parts/fields.js";
import { day } from "../parts/format.js";
import { Empty, Frame, Sides } from "../parts/frame.js";
import { all, one, programme, useView } from "../parts/view.js";
import { Number_, stageOf, Verdict } from "./words.js";

const OPEN = new Set(["to review", "accepted"]);

function ResultRow({ result, zone }) {
  const point = one("point", result.point);
  return html`<a href="/review/result/${encodeURIComponent(result.id)}"><strong>${point?.discharger_name ?? "sample not on the server yet"}</strong>
    <span class="under"><span>${point?.name ?? result.bottle}, ${day(result.collected_at, zone)}</span><${Number_} result=${result} /></span>
    <span class="under"><span>${stageOf(result)}</span><${Verdict} result=${result} /></span></a>`;
}

function PointRow({ point, latest, current, zone }) {
  return html`<a href="/review/point/${encodeURIComponent(point.id)}" aria-current=${current ? "true" : undefined}><strong>${point.discharger_name}</strong>
    <span class="under"><span>${point.name}</span>${latest ? html`<span>${day(latest.collected_at, zone)} <${Number_} result=${latest} /></span>` : html`<span>no result yet</span>`}</span>
    ${latest && html`<span class="under"><span></span><${Verdict} result=${latest} /></span>`}</a>`;
}

function List({ id }) {
  const [words, setWords] = useState("");
  const zone = useView(programme)?.zone;
  const results = useView(() => all("result"));
  const held = useView(() => all("held")).filter((entry) => entry.state === "held");
  const points = useView(() => all("point")).sort((a, b) => (a.discharger_name < b.discharger_name ? -1 : 1));
  const open = results.filter((result) => result.source === "run" && OPEN.has(stageOf(result)) && (result.sample || stageOf(result) === "to review")).reverse();
  const latest = new Map(results.map((result) => [result.point, result]));
  const found = points.filter((point) => `${point.discharger_name} ${point.name}`.toLowerCase().includes(words.toLowerCase()));
  return html`<div class="screen stack">
    ${id ? html`<h2>What needs a decision</h2>` : html`<h1>What needs a decision</h1>`}
    ${held.length > 0 && html`<p class="card stop"><a href="/review/held">▲ ${held.length} held ${held.length === 1 ? "entry" : "entries"} to settle</a></p>`}
    ${open.length ? html`<nav class="list" aria-label="Results to decide on">${open.map((result) => html`<${ResultRow} key=${result.id} result=${result} zone=${zone} />`)}</nav>`
      : html`<${Empty} title="No result waits">Results appear here when a run is calculated.<//>`}
    <h2>Points</h2>
    <${TextField} label="Find" type="search" value=${words} onInput=${setWords} />
    ${points.length === 0 && html`<${Empty} title="No discharge points yet"><a href="/review/register">Register a discharger and its points</a><//>`}
    <nav class="list" aria-label="Points">${found.map((point) => html`<${PointRow} key=${point.id} point=${point} latest=${latest.get(point.id)} current=${point.id === id} zone=${zone} />`)}</nav>
    <div class="row"><a class="button" href="/review/register">Register</a><a class="button" href="/review/people">People</a><a class="button" href="/review/trust">Trust in the plan</a></div>
  </div>`;
}

/** The overview, with one point beside it. */
export function Overview({ id, detail }) {
  const settings = useView(programme);
  return html`<${Frame} place="review" title=${id ? "Point" : "What needs a decision"} about=${settings?.name} wide>
    <${Sides} front=${id ? "detail" : "list"} list=${html`<${List} id=${id} />`}
      detail=${detail ?? html`<div class="screen"><${Empty} title="Choose a result or a point">Its number, its limit and its history appear here.<//></div>`} />
  <//>`;
}
