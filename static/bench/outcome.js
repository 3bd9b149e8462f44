// What the run gave: each sample in a big number, checks in words, what to decide, the waste, the end.

import { Beside, Budget, sharesOf } from "../parts/beside.js";
import { html } from "../parts/html.js";
import { Choice, TextField, useForm, useSaving } from "../parts/fields.js";
import { dilution, plain, reported } from "../parts/format.js";
import { Problem, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { one } from "../parts/view.js";
import { stepWords } from "../parts/glassware.js";
import { isExtra, tubesOfSample } from "./rack.js";
import { Experience, Fired } from "./charts.js";

const COUNTS = ["no", "the one", "both", "all three", "all four", "all five"];

/** What an over-range sample looks like: said of the colours that a person saw, else of what the curve says. */
function overWords(sample, run) {
  const tubes = tubesOfSample(run, sample).filter((tube) => !tube.excluded);
  if (!tubes.length || tubes.some((tube) => tube.colour !== "green")) return "The oxidant is spent or nearly so: no number can be given. Keep the caps on.";
  const count = COUNTS[tubes.length] ?? `all ${tubes.length}`;
  return `${count[0].toUpperCase()}${count.slice(1)} ${tubes.length === 1 ? "tube" : "tubes"} went green: the dichromate is spent and no number can be given. Keep the caps on.`;
}

/** What tubes that disagree leave: their median, which of them stands furthest off, and what to do. */
function disagreeWords({ cod, suspect, sample }, run) {
  const far = suspect === null ? null : tubesOfSample(run, { sample }).filter((tube) => tube.absorbance)[suspect];
  const median = cod === null ? "" : ` Their median is ${plain(cod)} mg/L, provisional.`;
  return `The tubes disagree: they lie further apart than this laboratory's repeatability explains.${median}${far ? ` Position ${far.position} stands furthest off, which convicts nobody: leave it out only for a cause that was seen.` : ""} Repeat this sample.`;
}

const TOLD = new Map([
  ["ok", (s) => (s.excluded.length ? `${s.used.length} tubes agree, ${s.excluded.length} left out.` : `${s.used.length} ${s.used.length === 1 ? "tube" : "tubes agree"}.`)],
  ["over", overWords],
  ["below", () => "Below the working range at this dilution."],
  ["disagree", disagreeWords],
]);

/** The next dilution as the server stated it beside the result, or what it says instead. */
function Next({ next, advice, run }) {
  if (!next) return advice && html`<p>${advice.why}</p>`;
  const other = next.recipe === run.recipe ? "" : `${one("recipe", next.recipe)?.name}. `;
  return html`<p class="next"><strong>Repeat ${next.dilution_factor === 1 ? "" : "at "}${dilution(next.dilution_factor)}.</strong> ${other}${next.why} ${next.steps.length ? `${stepWords(next.steps)}.` : ""}</p>`;
}

function Sample({ sample, run }) {
  const result = one("result", `${run.id}:${sample.sample.replaceAll(" ", ":")}`);
  const point = result?.point ? one("point", result.point) : null;
  const above = result?.verdicts?.find((verdict) => verdict.verdict === "above");
  const stop = sample.status === "over" || sample.status === "disagree";
  return html`<section class="card ${stop ? "stop" : ""}">
    <p class="soft tight">${sample.sample}${point ? `, ${point.discharger_name}, ${point.name}` : ""}</p>
    ${stop ? html`<h2>▲ ${sample.sample} ${sample.status === "over" ? "is over range" : "disagrees"}</h2>`
      : html`<p class="tight"><span class="big">${reported(result?.shown ?? String(sample.reported?.cod ?? ""))}</span> ${result?.shown_u ? html`<span class="plus">± ${reported(result.shown_u)}</span>` : ""} <span class="unit">mg/L</span></p>`}
    <p>${TOLD.get(sample.status)(sample, run)} ${above ? html`<span class="above">▲ ${above.why}</span>` : result?.verdicts?.[0]?.why ?? ""}</p>
    <${Beside} result=${result} />${sharesOf(result) && html`<details><summary>Where the uncertainty comes from</summary><${Budget} result=${result} /></details>`}
    <${Next} next=${result?.next_dilution} advice=${sample.advice} run=${run} /></section>`;
}

function Bracketing({ run }) {
  const { held = [], open = [] } = run.bracketing ?? {};
  if (!held.length && !open.length) return null;
  return html`<section class="card ${held.length ? "stop" : "wait"}"><h2>Between verifications</h2>
    ${held.length > 0 && html`<p class="above">▲ Held by a failed verification: ${held.join(", ")}. Correct, then do them again since the last good one.</p>`}
    ${open.length > 0 && html`<p>Not closed by a verification after them: ${open.join(", ")}.</p>`}</section>`;
}

const NAMES = new Map([["verification", "Verification"], ["control", "Laboratory control"], ["duplicate", "Duplicate"], ["spike", "Spike"]]);

/** Each check in words; answers of before they had words come from the sum. */
function checksOf({ checks, answer }) {
  if (checks?.length) return checks.filter((check) => !check.left_out);
  return answer.checks.verifications.map((check, i) => ({ what: "verification", subject: `${i + 1}: ${plain(check.expected)} mg/L`, ok: check.ok, words: `found ${plain(check.found)} mg/L, ${plain(check.recovery_percent)} %` }));
}

function Checks({ run }) {
  const rows = checksOf(run);
  const blank = rows.find((row) => row.what === "blank");
  return html`<section class="card"><h2>Checks</h2><ul class="plain">
    ${rows.filter((row) => row !== blank).map((row) => html`<li key=${row.what + row.subject} class=${row.ok === false ? "above" : ""}><strong>${row.ok === false ? "▲ " : ""}${NAMES.get(row.what)} ${row.subject}</strong> ${row.ok === null ? "not judged" : row.ok ? "holds" : "does not hold"}: ${row.words}.</li>`)}</ul>
    ${blank ? html`<p class="soft">${blank.words[0].toUpperCase()}${blank.words.slice(1)}, subtracted once.</p>` : ""}
    ${run.without?.length > 0 && html`<p class="soft">${run.without.map(({ role, reason }) => `No ${NAMES.get(role).toLowerCase()}: ${reason}.`).join(" ")}</p>`}</section>`;
}

const DECISIONS = ["repeat", "accept with a note", "not used"];
const keyOf = (question) => `${question.what}|${question.subject}`;

function Question({ question, v, set }) {
  const key = keyOf(question);
  const given = v[key] ?? { decision: "repeat", reason: "" };
  return html`<section class="card wait stack"><h3>To decide: ${question.what}, ${question.subject}</h3>
    <${Choice} label="Decision" value=${given.decision} options=${DECISIONS} onChoose=${(decision) => set(key, { ...given, decision })} />
    <${TextField} label="Reason" value=${given.reason} onInput=${(reason) => set(key, { ...given, reason })} /></section>`;
}

/** Closing a run: every question has a decision with a name. */
export function Close({ run }) {
  const [v, set, forget] = useForm(`close:${run.id}`, {});
  const { save, problem, busy } = useSaving(async () => {
    const decisions = run.questions.map((question) => ({ ...question, decision: "repeat", reason: "", ...v[keyOf(question)] }));
    const open = decisions.filter((decision) => !decision.reason.trim());
    if (open.length) throw new Error(`Give the reason for: ${open.map((one_) => `${one_.what} ${one_.subject}`).join(", ")}.`);
    await state("run.closed", run.id, { decisions });
    await forget().catch(() => {});
    say("Saved on this tablet: the run is closed.");
  });
  return html`<form class="stack" onSubmit=${save} novalidate>
    ${run.questions.map((question) => html`<${Question} key=${keyOf(question)} question=${question} v=${v} set=${set} />`)}
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>Close the run</button></form>`;
}

function Waste({ run }) {
  const { waste } = run;
  const container = one("container", run.container);
  if (!waste) return null;
  return html`<p class="soft">Waste of this run: ${plain(waste.mercury_mg / 1000, 2)} g mercury, ${plain(waste.chromium_mg / 1000, 2)} g chromium, ${plain(waste.silver_mg / 1000, 2)} g silver, ${plain(waste.volume_ml)} mL.${" "}
    ${run.closed ? "It went" : "It goes"} to ${container?.name}, ${container ? Math.round((100 * container.filled_ml) / container.capacity_ml) : "?"} % full.</p>`;
}

/** The results of a run. */
export function Outcome({ run }) {
  const samples = run.answer.samples.filter((sample) => !isExtra(sample)).sort((a, b) => Number(b.status !== "ok") - Number(a.status !== "ok"));
  return html`<div class="stack">
    ${samples.map((sample) => html`<${Sample} key=${sample.sample} sample=${sample} run=${run} />`)}
    <${Checks} run=${run} /><${Fired} run=${run} /><${Experience} found=${run.experience} /><${Bracketing} run=${run} /><${Waste} run=${run} />
    ${run.closed && html`<section class="card"><h2>Closed</h2><p>by ${run.closed.by}</p>${run.closed.decisions.map((d) => html`<p key=${d.what + d.subject}>${d.what}, ${d.subject}: <strong>${d.decision}</strong>. ${d.reason}</p>`)}</section>`}
  </div>`;
}
