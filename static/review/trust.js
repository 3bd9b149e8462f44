// Whether to trust the plan: every result forecast from those before it, beside the rules of thumb. The server judges; offline the last
// judgement stands here with its day.

import { html } from "../parts/html.js";
import { day, percent } from "../parts/format.js";
import { Empty, Frame } from "../parts/frame.js";
import { all, one, programme, useView } from "../parts/view.js";

const RULES = [["forecast", "The plan"], ["last_value", "Dilute as the last result asks"], ["median_of_five", "As the median of the last five"], ["same_dilution", "Always the best single dilution"], ["oracle", "If the answer were known"]];
const STANDS = new Map([[true, ["good", "●", "predictable"]], [false, ["stop", "▲", "not predictable"]], [null, ["wait", "◐", "too few results"]]]);

function Stands({ judged }) {
  const [kind, sign, words] = STANDS.get(judged?.predictable ?? null);
  return html`<span class="tag ${kind}"><span aria-hidden="true">${sign}</span>${words}</span>`;
}

function Judged({ judged, zone }) {
  const { n, right, unknown } = judged.forecast;
  return html`<section class="card stack">
    <p class="tight"><span class="big">${right}</span> <span class="unit">of ${n} right at the first digestion${n ? `, ${percent(right / n)}` : ""}</span></p>
    <p><${Stands} judged=${judged} /></p>
    ${judged.words.map((words, i) => html`<p key=${words}>${i ? words : html`<strong>${words}</strong>`}</p>`)}
    <table><thead><tr><th>Rule</th><th class="right">Right</th><th class="right">Over</th><th class="right">Under</th></tr></thead><tbody>
      ${RULES.map(([key, name]) => html`<tr key=${key}><td>${key === "forecast" ? html`<strong>${name}</strong>` : name}</td><td class="right">${judged[key].right}\u00a0of\u00a0${judged[key].n}</td><td class="right">${judged[key].over}</td><td class="right">${judged[key].below}</td></tr>`)}</tbody></table>
    ${judged.measured > 0 && html`<p>Inside the range that should hold half: ${judged.inside_50} of ${judged.measured}; nine in ten: ${judged.inside_90} of ${judged.measured}.</p>`}
    <p class="soft">Each result was forecast from those before it at its point only, the latest ${judged.latest}; the first ${judged.first} are only learnt from.${unknown > 0 ? ` ${unknown} more are bounds that do not tell which dilution was right.` : ""} Judged by the server on ${day(judged.judged_at, zone)} from ${judged.results} results; made again when a tenth more are known.</p>
  </section>`;
}

function Points({ here }) {
  const rows = useView(() => all("point")).map((point) => [point, one("trust", point.id)]).sort(([a], [b]) => (a.discharger_name < b.discharger_name ? -1 : 1));
  if (!rows.length) return html`<${Empty} title="No discharge points yet"><a href="/review/register">Register a discharger and its points</a><//>`;
  return html`<nav class="list" aria-label="Points">${rows.map(([point, judged]) => html`<a key=${point.id} href="/review/trust/${encodeURIComponent(point.id)}" aria-current=${point.id === here ? "true" : undefined}><strong>${point.discharger_name}</strong>
    <span class="under"><span>${point.name}</span>${judged && html`<span>${judged.forecast.right} of ${judged.forecast.n} right</span>`}<${Stands} judged=${judged} /></span></a>`)}</nav>`;
}

/** The page of the programme, or of one point. */
export function Trust({ id }) {
  const zone = useView(programme)?.zone;
  const point = useView(() => (id ? one("point", id) : null));
  const judged = useView(() => one("trust", id ?? programme()?.id ?? ""));
  return html`<${Frame} place="review" title="How far to trust the plan">
    <div class="stack"><p class="soft">${point ? `${point.discharger_name}, ${point.name}` : "All points together"}</p>
      ${judged ? html`<${Judged} judged=${judged} zone=${zone} />`
        : html`<${Empty} title="Not judged yet">The server judges ${id ? "a point with more than five results" : "once a recipe and ten results are there"}. Until then the ranges rest on the sector.<//>`}
      ${point && html`<p class="row"><a class="button" href="/field/point/${encodeURIComponent(id)}">Back to the point</a><a class="button" href="/review/trust">All points together</a></p>`}
      <h2>By point</h2><${Points} here=${id} />
      <p><a href="/review">All of Review</a></p></div><//>`;
}
