// One point: its history, its limits, its results.

import { html } from "../parts/html.js";
import { day, plain } from "../parts/format.js";
import { Empty } from "../parts/frame.js";
import { all, one, programme, useView } from "../parts/view.js";
import { History } from "./history.js";
import { Number_, stageOf, Verdict } from "./words.js";

const BASIS = new Map([["daily_maximum", "Daily maximum"], ["monthly_average", "Monthly average"]]);

function Limits({ point }) {
  if (!point.limits.length) return html`<p>No limit is set for this point: results cannot be judged.</p>`;
  return html`<table><thead><tr><th>Basis</th><th class="right">mg/L</th><th>From</th><th>Source</th></tr></thead><tbody>
    ${point.limits.map((limit) => html`<tr key=${limit.basis + limit.from}><td>${BASIS.get(limit.basis) ?? limit.basis}</td><td class="right">${plain(limit.value)}</td><td>${limit.from}</td><td>${limit.source}</td></tr>`)}
  </tbody></table>`;
}

function Row({ result, zone }) {
  return html`<tr><td>${day(result.collected_at, zone)}</td><td class="right"><${Number_} result=${result} /></td><td><${Verdict} result=${result} /></td>
    <td>${result.source === "run" ? html`<a href="/review/result/${encodeURIComponent(result.id)}">${stageOf(result)}</a>` : result.source}</td></tr>`;
}

/** The detail of a point. */
export function PointReview({ id }) {
  const point = useView(() => one("point", id));
  const results = useView(() => all("result", id));
  const zone = useView(programme)?.zone;
  if (!point) return html`<div class="screen"><${Empty} title="This point is not on this tablet">It appears after the next contact.<//></div>`;
  const recent = [...results].reverse().slice(0, 24);
  return html`<div class="screen wide stack">
    <div><h1>${point.discharger_name}, ${point.name}</h1><p class="soft">${point.sector ?? "sector not stated"}${point.access && ` · ${point.access}`}</p></div>
    <section class="card">${results.length ? html`<${History} results=${results} limits=${point.limits} zone=${zone} />` : html`<${Empty} title="No result yet">Take a sample in <a href="/field/point/${encodeURIComponent(id)}">Field</a>.<//>`}</section>
    <section class="card stack"><h2>Limits</h2><${Limits} point=${point} /><a class="button" href="/review/point/${encodeURIComponent(id)}/limit">Set a limit</a></section>
    ${recent.length > 0 && html`<section class="card"><h2>Results</h2><table><thead><tr><th>Taken</th><th class="right">COD</th><th>Verdict</th><th>State</th></tr></thead>
      <tbody>${recent.map((result) => html`<${Row} key=${result.id} result=${result} zone=${zone} />`)}</tbody></table></section>`}
    <p><a href="/review">All of Review</a></p>
  </div>`;
}
