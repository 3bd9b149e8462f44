// Control charts: the list, one chart with the rules that fired, the freezing of a baseline; what runs set off, for other screens.

import { html, useState } from "../parts/html.js";
import { Choice, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { all, one, useView } from "../parts/view.js";
import { ControlChart, digits } from "./control_chart.js";

const NAMES = { blank: "Blank", verification: "Verification", control: "Laboratory control", duplicate: "Duplicate range", spike: "Spike recovery" };
const ORDER = Object.keys(NAMES);
const FEWEST = 20;
const LATEST = 8;
const unitOf = (chart) => (chart.what === "blank" ? "mAU" : "%");
const pathOf = (chart) => `/bench/charts/${encodeURIComponent(chart.id)}`;
const placeOf = (chart) => `${one("recipe", chart.recipe)?.name ?? ""}, ${one("instrument", chart.instrument)?.name ?? ""}`;

/** What the last run of a chart set off. */
const lastFired = (chart) => chart.points.filter((point) => point.run === chart.points.at(-1).run && point.fired.length);

/** Under What waits: charts whose last run set off a rule. */
export function ToLookAt() {
  const charts = useView(() => all("chart").filter((chart) => lastFired(chart).length));
  if (!charts.length) return null;
  return html`<section class="card stop"><h2>▲ To look at</h2><ul class="plain">${charts.map((chart) => html`<li key=${chart.id}><a href=${pathOf(chart)}>${NAMES[chart.what]}</a>, ${lastFired(chart)[0].name}: ${lastFired(chart)[0].fired.join("; ")}.</li>`)}</ul></section>`;
}

/** On a run's outcome: what it set off on the charts. */
export function Fired({ run }) {
  if (!run.fired?.length) return null;
  return html`<section class="card ${run.fired.some((row) => row.stops) ? "stop" : "wait"}"><h2>Control charts</h2><ul class="plain">${run.fired.map((row) => html`<li key=${row.subject} class=${row.stops ? "above" : ""}>${row.stops ? "▲" : "◇"} <a href=${pathOf({ id: row.chart })}>${row.subject}</a>: ${row.words.join("; ")}.</li>`)}</ul></section>`;
}

/** What the laboratory's own history gave to a run: scatter and bias with their numbers. */
export function Experience({ found }) {
  if (!found) return null;
  const { repeatability: r, bias } = found;
  const freedom = (dof) => (dof === null ? "" : `, ${plain(dof, 1)} degrees of freedom`);
  return html`<section class="card"><h2>The laboratory's own</h2>
    <p>Repeatability of one tube: a = ${plain(r.a, 2)} mg/L, k = ${plain(100 * r.k, 2)} %${freedom(r.dof)}: ${r.words}.</p>
    <p>Bias: ${plain(100 * bias.relative_u, 2)} %${freedom(bias.dof)}: ${bias.words}.</p></section>`;
}

/** For the settings: what the newest run of each recipe used. */
export function OwnValues() {
  const runs = useView(() => all("run").filter((run) => run.experience));
  const newest = [...new Map(runs.map((run) => [run.recipe, run])).values()];
  if (!newest.length) return html`<p class="soft">Repeatability and bias: start values until the first run is calculated.</p>`;
  return newest.map((run) => html`<div key=${run.recipe}><p class="soft">${one("recipe", run.recipe)?.name}, as in ${run.name}</p><${Experience} found=${run.experience} /></div>`);
}

function Row({ chart }) {
  const fired = lastFired(chart).length > 0;
  return html`<a href=${pathOf(chart)}><strong>${NAMES[chart.what]}</strong><span class="under"><span>${placeOf(chart)}</span><span>${chart.points.length} results</span>
    <span class=${fired ? "above" : ""}>${fired ? "▲ the last run set off a rule" : chart.baseline ? `limits of “${chart.baseline.name}”` : "no limits yet"}</span></span></a>`;
}

/** The list of charts. */
export function Charts() {
  const rows = useView(() => all("chart")).sort((a, b) => placeOf(a).localeCompare(placeOf(b)) || ORDER.indexOf(a.what) - ORDER.indexOf(b.what));
  return html`<${Frame} place="bench" title="Control charts"><div class="stack">
    ${rows.length ? html`<nav class="list" aria-label="Control charts">${rows.map((chart) => html`<${Row} key=${chart.id} chart=${chart} />`)}</nav>`
      : html`<${Empty} title="No chart yet">Each calculated run puts its blanks, verifications and controls on a chart of its recipe and photometer.<//>`}
    <p class="soft small">Limits are frozen from a named baseline of at least ${FEWEST} results; later results never move them.</p>
    <p><a href="/bench">What waits</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}

const BLANK = { name: "", first: "", last: "", spread: "standard deviation", out: "", cause: "", left_out: [] };

function Freeze({ chart }) {
  const [v, set, forget] = useForm(`baseline:${chart.id}`, BLANK);
  const runs = [...new Map(chart.points.map((point) => [point.run, point.name]))];
  const of = (point) => `${point.run} ${point.position}`;
  const inside = (() => {
    const at = (id, other) => (id ? runs.findIndex(([run]) => run === id) : other);
    const [from, to] = [at(v.first, 0), at(v.last, runs.length - 1)];
    return chart.points.filter((point) => runs.findIndex(([run]) => run === point.run) >= from && runs.findIndex(([run]) => run === point.run) <= to);
  })();
  const gone = (point) => v.left_out.find((row) => of(row) === of(point))?.reason || point.left_out;
  const { save, problem, busy } = useSaving(async () => {
    if (!v.name.trim()) throw new Error("Give the baseline a name, such as the months it covers.");
    const failed = inside.filter((point) => point.ok === false && !gone(point));
    if (failed.length) throw new Error(`A failed check enters no limit: leave it out with its cause (${failed.map((point) => point.name).join(", ")}).`);
    const used = inside.filter((point) => !gone(point)).length;
    if (used < FEWEST) throw new Error(`${used} results: a baseline needs at least ${FEWEST}.`);
    await state("baseline.frozen", chart.id, { name: v.name.trim(), first: v.first || runs[0][0], last: v.last || runs.at(-1)[0], spread: v.spread, left_out: v.left_out });
    await forget().catch(() => {});
    say("Saved on this tablet: the limits come with the server's answer.");
  });
  const leave = () => {
    const point = inside.find((row) => of(row) === v.out);
    if (!point || !v.cause.trim()) return;
    set("left_out", [...v.left_out, { run: point.run, position: point.position, reason: v.cause.trim() }]);
    set("out", "");
    set("cause", "");
  };
  return html`<details><summary>${chart.baseline ? "Freeze another baseline" : "Freeze a baseline"}</summary><form class="stack" onSubmit=${save} novalidate>
    <${TextField} label="Name of the baseline" value=${v.name} onInput=${(text) => set("name", text)} />
    <div class="two"><${Select} label="First run" value=${v.first || runs[0]?.[0]} options=${runs} onChoose=${(id) => set("first", id)} /><${Select} label="Last run" value=${v.last || runs.at(-1)?.[0]} options=${runs} onChoose=${(id) => set("last", id)} /></div>
    <p role="status">${inside.filter((point) => !gone(point)).length} results enter it.</p>
    ${chart.what !== "duplicate" && html`<${Choice} label="Width of the limits" value=${v.spread} options=${[["standard deviation", "3 standard deviations"], ["moving range", "2.66 moving ranges"]]} onChoose=${(spread) => set("spread", spread)} />`}
    <${Select} label="Leave a result out" value=${v.out} options=${[["", "none"], ...inside.filter((point) => !gone(point)).map((point) => [of(point), `${point.name}: ${digits(point.value)} ${unitOf(chart)}${point.ok === false ? ", failed" : ""}`])]} onChoose=${(id) => set("out", id)} />
    ${v.out && html`<${TextField} label="Its cause" value=${v.cause} onInput=${(text) => set("cause", text)} /><button type="button" onClick=${leave}>Leave it out</button>`}
    ${v.left_out.map((row) => html`<p key=${of(row)}>Left out: ${one("run", row.run)?.name}, ${row.reason}. <button type="button" class="quiet" onClick=${() => set("left_out", v.left_out.filter((other) => other !== row))}>Take it in again</button></p>`)}
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Freeze these limits"}</button></form></details>`;
}

function Points({ chart }) {
  const [all_, setAll] = useState(false);
  const every = [...chart.points].reverse();
  const rows = all_ ? every : every.filter((point, i) => i < LATEST || point.fired.length || point.left_out);
  const wordsOf = (point) => (point.left_out ? `left out: ${point.left_out}` : point.fired.length ? `▲ ${point.fired.join("; ")}` : point.base ? "baseline" : point.ok === false ? "▲ failed its check" : chart.baseline ? "within" : "");
  return html`<table><thead><tr><th>Run</th><th class="right">${unitOf(chart)}</th><th>Judged</th></tr></thead><tbody>${rows.map((point) => html`<tr key=${`${point.run} ${point.position}`}>
    <td><a href="/bench/run/${encodeURIComponent(point.run)}">${point.name}</a>${point.position ? html` <span class="soft">position ${point.position}</span>` : ""}</td><td class="right">${digits(point.value)}</td><td class=${point.fired.length ? "above" : ""}>${wordsOf(point)}</td></tr>`)}</tbody></table>
    ${rows.length < every.length && html`<button type="button" onClick=${() => setAll(true)}>All ${every.length} results</button>`}`;
}

const VIEWS = [["single", "Single results"], ["average", "Moving average"], ["sums", "Cumulative sums"]];

function Body({ chart }) {
  const [view, setView] = useState("single");
  const { baseline } = chart;
  const waits = chart.asked && chart.asked.at !== baseline?.at;
  return html`<section class="card stack"><h2>${NAMES[chart.what]}</h2><p class="soft tight">${placeOf(chart)}</p>
      ${baseline?.average && html`<${Choice} label="View" value=${view} options=${VIEWS} onChoose=${setView} />`}
      <${ControlChart} chart=${chart} view=${view} unit=${unitOf(chart)} name=${NAMES[chart.what]} />
      <p class="soft small">Open circle: baseline. Full: judged. ▲ set off a rule. × left out with its cause.${view === "single" ? "" : " It shows small shifts that last, which single results hide."}</p></section>
    <section class="card stack"><h2>Limits</h2>${waits ? html`<p role="status">Asked for: “${chart.asked.name}”. <${Where} about=${chart.id} /></p>` : ""}
      ${baseline ? html`<ul>${baseline.words.map((words) => html`<li key=${words}>${words}</li>`)}</ul>` : html`<p>None yet: ${chart.points.length} of at least ${FEWEST} results.</p>`}
      <${Freeze} chart=${chart} /></section>
    <section class="card"><h2>Results</h2><${Points} chart=${chart} /></section>`;
}

/** One chart. */
export function Chart({ id }) {
  const chart = useView(() => one("chart", id));
  return html`<${Frame} place="bench" title="Control chart"><div class="stack">
    ${chart ? html`<${Body} chart=${chart} />` : html`<${Empty} title="No such chart here">It comes with the first calculated run.<//>`}
    <p><a href="/bench/charts">Control charts</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}
