// One curve: what it is valid for, how it fits, what is the matter with it, and the standards of another source read against it.

import { html } from "../parts/html.js";
import { Choice, TextField, keepDraft, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, go, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { one, programme, useView } from "../parts/view.js";
import { CurveChart, Findings } from "./curve.js";

const WEIGHTS = { equal: "equal weights", inverse: "weights 1/x", inverse_square: "weights 1/x²" };

/** The newest judged check of a kind, or null. */
const lastCheck = (curve, what) => (curve.checks ?? []).findLast((check) => check.what === what) ?? null;

const late = (due) => due < day(new Date(), programme()?.zone);

/** What speaks against working with a curve though it may be used; "" when nothing does. */
export function curveDoubt(curve) {
  const check = lastCheck(curve, "second source");
  if (!check) return "no standard of another source yet";
  if (!check.judged) return "its second source is judged when the server has it";
  if (!check.judged.ok) return "its second source was not found again";
  return late(check.judged.due_on) ? `second source due since ${check.judged.due_on}` : "";
}

/** A curve in the list of the stores. */
export function CurveRow({ curve }) {
  const f = curve.fitted;
  const worst = f?.error ? "no curve" : (f?.findings ?? []).find((one_) => one_.severity !== "note") ? "advice to read" : "";
  const doubt = curveDoubt(curve);
  return html`<li><a href="/bench/curve/${encodeURIComponent(curve.id)}"><strong>${one("recipe", curve.recipe)?.name ?? "Curve"}</strong>
    <span class="under"><span>${one("lot", curve.lot)?.name}, ${one("instrument", curve.instrument)?.name}, until ${curve.valid_until}</span><span>${curve.model}, ${WEIGHTS[curve.weights ?? "equal"]}</span></span>
    ${(worst || doubt) && html`<span class="above">▲ ${[worst, doubt].filter(Boolean).join("; ")}</span>`}</a></li>`;
}

const share = (value) => (value === null || value === undefined ? "–" : `${plain(value, 1)} %`);

function Numbers({ f }) {
  const test = (found) => (found ? `F ${found.f < 1000 ? Number(found.f.toPrecision(3)) : "over 1000"}, p ${found.p < 0.001 ? "< 0.001" : found.p.toFixed(3)}` : "–");
  return html`<dl class="facts"><dt>Coefficients</dt><dd>${f.coefficients.map((b, i) => `b${i} ${b.toPrecision(5)} ± ${f.standard_errors[i].toPrecision(2)}`).join("; ")}</dd>
    <dt>Residual scatter</dt><dd>${(f.residual_sd * 1000).toFixed(2)} mAU, ${f.dof} degrees of freedom</dd><dt>Relative standard error</dt><dd>${share(f.relative_standard_error_percent)}</dd>
    <dt>Lack of fit</dt><dd>${test(f.lack_of_fit)}</dd><dt>Line or parabola (Mandel)</dt><dd>${test(f.mandel)}</dd><dt>R²</dt><dd>${f.r_squared.toFixed(6)}; by itself it proves nothing</dd></dl>`;
}

function Levels({ f }) {
  const leverage = new Map((f.residuals ?? []).map((row) => [row.cod, row.leverage]));
  return html`<details><summary>Every standard, read back</summary><p class="soft small">Recovery in %; lever: the leverage of one reading.</p><table><thead><tr><th>COD</th><th>AU</th><th>found</th><th>recovery</th><th>lever</th></tr></thead><tbody>${f.standards.map((row, i) => {
    const off = row.recovery_percent !== null && Math.abs(row.recovery_percent - 100) > 10;
    const weight = leverage.get(row.cod);
    return html`<tr key=${i}><td class="right">${plain(row.cod)}</td><td class="right">${row.absorbance.toFixed(4)}</td><td class="right">${plain(row.back_calculated, 1)}</td><td class="right ${off ? "above" : ""}">${off ? "▲" : ""}${plain(row.recovery_percent, 1)}</td><td class="right">${weight === undefined ? "–" : weight.toFixed(2)}</td></tr>`;
  })}</tbody></table></details>`;
}

function Due({ curve }) {
  return Object.entries(curve.due).map(([what, due]) => html`<p class="tight ${late(due) ? "above" : ""}" key=${what}>${late(due) ? `▲ ${what} was due on ${due}` : `${what} due on ${due}`}</p>`);
}

function Checks({ curve }) {
  if (!curve.checks?.length) return html`<${Empty} title="No standard of another source was read">Read one after each calibration and every quarter; the linear range every six months (EPA 410.4, 9.2).<//>`;
  return html`<ul class="plain past">${[...curve.checks].reverse().map((check, i) => {
    const judged = check.judged;
    return html`<li key=${i}>${day(check.at, programme()?.zone)}, ${check.what}, ${check.source}: ${!judged ? "judged when the server has it" : html`<strong class=${judged.ok ? "" : "above"}>${judged.ok ? "○ holds" : "▲ does not hold"}</strong>, ${judged.cod === null ? "no number" : `${plain(judged.cod, 1)} of ${check.expected} mg/L, ${share(judged.recovery_percent)}`}, at most ${plain(judged.limit_percent)} % off; due again ${judged.due_on}`}</li>`;
  })}</ul>`;
}

function AddCheck({ curve }) {
  const [v, set, forget] = useForm(`check:${curve.id}`, { what: "second source", source: "", expected: "", absorbance: "", note: "" });
  const { save, problem, busy } = useSaving(async () => {
    const readings = v.absorbance.trim().split(/[\s;]+/u).filter(Boolean);
    const wrong = [v.expected, ...readings].filter((text) => !text.trim() || read(text).problem);
    if (!v.source.trim()) throw new Error("Name the standard: maker's lot, or who made it from what.");
    if (!readings.length || wrong.length) throw new Error("Type the stated COD and at least one absorbance, blank already subtracted.");
    await state("curve.checked", curve.id, { what: v.what, source: v.source.trim(), expected: v.expected.trim(), absorbance: readings, note: v.note.trim() });
    await forget();
    say("Saved on this tablet.");
  });
  return html`<details><summary>Record a check of this curve</summary><form class="stack" onSubmit=${save} novalidate>
    <${Choice} label="What" value=${v.what} options=${[["second source", "Second source"], ["linear range", "Linear range"]]} onChoose=${(what) => set("what", what)} />
    <${TextField} label="Standard" value=${v.source} maxlength="200" onInput=${(text) => set("source", text)} hint="of another lot or maker than the calibration's" />
    <${TextField} label="Its COD, mg/L" inputmode="decimal" value=${v.expected} onInput=${(text) => set("expected", text)} />
    <${TextField} label="Absorbances, AU" inputmode="decimal" value=${v.absorbance} onInput=${(text) => set("absorbance", text)} hint="blank subtracted; several set apart by spaces" />
    <${Problem} words=${problem} /><button disabled=${busy}>${busy ? "Saving…" : "Save the check"}</button></form></details>`;
}

async function again(curve) {
  const rows = curve.standards.map((level) => ({ cod: level.cod, read: level.absorbance.join(" ") }));
  const { recipe, lot, instrument, model, weights = "equal", valid_until } = curve;
  await keepDraft("add:calibration", { recipe, lot, instrument, model, weights, valid_until, rows });
  go("/bench/stores/calibration");
}

/** One curve. */
export function CurvePage({ id }) {
  const curve = useView(() => one("calibration", id));
  if (!curve) return html`<${Frame} place="bench" title="Curve"><${Empty} title="This curve is not on this tablet"><a href="/bench/stores">Stores</a><//><//>`;
  const recipe = one("recipe", curve.recipe);
  const f = curve.fitted;
  return html`<${Frame} place="bench" title="Curve of ${recipe?.name ?? "a recipe"}"><div class="stack">
    <section class="card"><h2>Valid for</h2><dl class="facts"><dt>Recipe</dt><dd>${recipe?.name}</dd><dt>Reagent lot</dt><dd>${one("lot", curve.lot)?.name}</dd><dt>Photometer</dt><dd>${one("instrument", curve.instrument)?.name} at ${plain(curve.wavelength_nm)} nm</dd>
      ${curve.tube && html`<dt>Tube</dt><dd>${curve.tube}</dd>`}<dt>From, until</dt><dd>${day(curve.made_at, programme()?.zone)} to <strong>${curve.valid_until}</strong></dd><dt>Model</dt><dd>${curve.model}, ${WEIGHTS[curve.weights ?? "equal"]}</dd><dt>Made by</dt><dd>${curve.made_by}</dd></dl>
      <p class="soft small">A run with another recipe, lot, photometer or tube, or after the last day, does not take it.</p>${curve.local && html`<${Where} about=${id} />`}</section>
    ${f?.error ? html`<section class="card stop"><p><strong>▲ ${f.error}</strong></p></section>` : f ? html`<section class="card stack"><h2>What is the matter with it</h2><${Findings} curve=${curve} /></section>` : html`<p class="soft">Fitted when the server has it.</p>`}
    ${f && html`<section class="card stack"><h2>Curve and residuals</h2><${CurveChart} curve=${curve} />${!f.error && html`<${Numbers} f=${f} /><${Levels} f=${f} />`}</section>`}
    <section class="card stack"><h2>Other source and range</h2><${Due} curve=${curve} /><${Checks} curve=${curve} /><${AddCheck} curve=${curve} /></section>
    <button type="button" onClick=${() => again(curve)}>Another curve from these standards</button>
    <p><a href="/bench/stores">Stores</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}
