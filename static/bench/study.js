// One study: what is missing, its results as they come, the limit and what it is due for.

import { html } from "../parts/html.js";
import { Check, Choice, NumberField, Select, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { dutiesOf } from "./duties.js";
import { Due } from "./studies.js";

const instrumentName = (id) => one("instrument", id)?.name ?? id;

function Limit({ limit }) {
  return html`<section class="card"><h2>Detection limit</h2>
    <p class="tight"><span class="big">${limit.shown}</span> <span class="unit">mg/L in the tube</span></p>
    <p>Calculated ${limit.computed_on}${limit.stood ? "; the one before it stands" : ""}. To be calculated again by <strong>${limit.again_by}</strong>.</p>
    <ul>${limit.words.map((words) => html`<li key=${words}>${words}</li>`)}</ul>
    <p class="soft small">40 CFR 136 Appendix B, revision 2. Under it a number is not told from a blank; after dilution it rises with the dilution.</p></section>`;
}

function Missing({ study }) {
  if (study.gaps === null) return html`<section class="card wait"><h2>What is missing</h2><p>It is told when the server is reached.</p></section>`;
  if (!study.gaps.length) return html`<section class="card"><h2>What is missing</h2><p>● Nothing: numbers, batches and dates suffice.</p></section>`;
  return html`<section class="card wait"><h2>What is missing</h2><ul>${study.gaps.map((words) => html`<li key=${words}>${words}</li>`)}</ul></section>`;
}

function gave(row) {
  if (row.waits) return "from the run";
  if (row.mg_l !== null) return plain(row.mg_l, 1);
  return row.result ? row.result.text : "no number";
}

function Results({ study, onCorrect }) {
  if (!study.rows.length) return html`<${Empty} title="No result yet">Type each spike and blank as it is read, or take it from a run.<//>`;
  return html`<table><thead><tr><th>Tube</th><th class="right nowrap">mg/L</th><th><span class="unseen">Correct it</span></th></tr></thead><tbody>${study.rows.map((row) => html`<tr key=${row.row}>
    <td><strong>${row.tube}</strong>, <span class="nowrap">${row.on}</span><br /><span class="soft">${row.batch}${study.instruments.length > 1 ? `, ${instrumentName(row.instrument)}` : ""}</span>${row.left_out && html`<br /><span class="above">left out: ${row.left_out}</span>`}${row.before.length > 0 && html`<br /><span class="soft small">corrected: ${row.reason}</span>`}</td>
    <td class="right nowrap">${gave(row)}</td><td>${!row.run && html`<button type="button" class="quiet" onClick=${() => onCorrect(row)}>Correct<span class="unseen"> ${row.tube} of ${row.on}</span></button>`}</td></tr>`)}</tbody></table>`;
}

const fresh = (study, today) => ({ row: "", tube: "spike", on: today, batch: "", instrument: study.instruments[0], result: "", none: false, left_out: "", reason: "" });

function Add({ study, v, set, setAll }) {
  const { save, problem, busy } = useSaving(async () => {
    const bad = v.none ? "" : read(v.result).problem;
    if (bad) throw new Error(`Result: ${v.result.trim() ? bad : "type it, or say that it gave no number."}`);
    if (v.on > day(new Date(), programme()?.zone)) throw new Error("The day of a result cannot lie ahead.");
    if (!v.batch.trim()) throw new Error("Name the batch: the digestion that the tube was in.");
    if (v.row && !v.reason.trim()) throw new Error("Say why the result changes.");
    const { row, none, result, ...said } = v;
    await state("study.result", study.id, { ...said, batch: v.batch.trim(), row: row || newId(), result: none ? null : measuredOf(result, "mg/L"), run: null, position: null });
    setAll({ ...v, row: "", result: "", none: false, left_out: "", reason: "" });
    say("Saved on this tablet.");
  });
  return html`<form class="card stack" onSubmit=${save} novalidate><h2>${v.row ? "Correct a result" : "Add a result"}</h2>
    <${Choice} label="Tube" value=${v.tube} options=${["spike", "blank"]} onChoose=${(tube) => set("tube", tube)} />
    ${!v.none && html`<${NumberField} label="Result" unit="mg/L" value=${v.result} onInput=${(text) => set("result", text)} hint="In the tube, as the curve gives it; a negative number is a number." />`}
    <${Check} label="It gave no number" checked=${v.none} onChange=${(on) => set("none", on)} />
    <div class="two"><${TextField} label="Day" type="date" value=${v.on} onInput=${(text) => set("on", text)} /><${TextField} label="Batch" value=${v.batch} onInput=${(text) => set("batch", text)} /></div>
    ${study.instruments.length > 1 && html`<${Select} label="Photometer" value=${v.instrument} options=${study.instruments.map((id) => [id, instrumentName(id)])} onChoose=${(id) => set("instrument", id)} />`}
    ${v.row && html`<${TextField} label="Left out for the cause" value=${v.left_out} onInput=${(text) => set("left_out", text)} hint="Blank: it counts. Only a cause that was seen, such as a leaking cap." /><${TextField} label="Why it changes" value=${v.reason} onInput=${(text) => set("reason", text)} />`}
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${v.row ? "Save the correction" : "Save the result"}</button></form>`;
}

/** The tubes of calculated runs that could stand for this study's spikes and blanks. */
export function candidates(study) {
  const taken = new Set(study.rows.map((row) => `${row.run} ${row.position}`));
  return all("run").filter((run) => run.answer && run.recipe === study.recipe && study.instruments.includes(run.instrument)).flatMap((run) => {
    const kept = run.tubes.filter((tube) => tube.absorbance && !tube.excluded && !taken.has(`${run.id} ${tube.position}`));
    const level = (tube) => tube.role !== "sample" && tube.expected !== null && Math.abs(read(tube.expected).value - study.level_mg_l) <= 0.005 * study.level_mg_l;
    const of = (tube) => (tube.role === "blank" ? "blank" : level(tube) ? "spike" : null);
    return kept.filter(of).map((tube) => ({ run, position: tube.position, tube: of(tube) }));
  });
}

function Candidate({ study, run, position, tube }) {
  const { save, problem, busy } = useSaving(() => state("study.result", study.id, {
    row: newId(), tube, on: day(run.heating.started_at, programme()?.zone), batch: run.name, instrument: run.instrument, result: null, run: run.id, position, left_out: "", reason: "",
  }));
  const words = `${tube}, position ${position} of ${run.name}`;
  return html`<li class="row spread"><span>${words}</span><button type="button" disabled=${busy} onClick=${save}>Take it<span class="unseen"> ${words}</span></button><${Problem} words=${problem} /></li>`;
}

function FromRuns({ study }) {
  const rows = useView(() => candidates(study));
  return html`<details><summary>From runs: ${rows.length} ${rows.length === 1 ? "tube" : "tubes"}</summary><p class="soft">Digested blanks, each read against the other blanks of its run, and tubes that hold ${plain(study.level_mg_l, 1)} mg/L.</p>
    <ul class="plain">${rows.map((row) => html`<${Candidate} key=${row.run.id + row.position} study=${study} ...${row} />`)}</ul></details>`;
}

function Finish({ study }) {
  const [v, set] = useForm(`finish:${study.id}`, { keep: false });
  const problemOf = useView(() => one("problem", `detection limit:${study.id}`));
  const { save, problem, busy } = useSaving(async () => {
    await state("study.finished", study.id, { keep: v.keep, note: "" });
    say("Saved on this tablet: the limit comes with the server's answer.");
  });
  if (!v || study.gaps === null || study.gaps.length) return null;
  const again = study.limits.length > 0;
  return html`<section class="card stack"><h2>${again ? "Calculate it again" : "Calculate the limit"}</h2>
    ${again && html`<${Check} label="Keep the limit in force where the procedure lets it stand" checked=${v.keep} onChange=${(on) => set("keep", on)} />`}
    ${problemOf && html`<p class="above">▲ ${problemOf.error}</p>`}
    <${Problem} words=${problem} /><button class="main" type="button" onClick=${save} disabled=${busy}>${again ? "Calculate again" : "Calculate the detection limit"}</button></section>`;
}

function Body({ study, today }) {
  const [v, set] = useForm(`study:${study.id}`, { form: fresh(study, today) });
  const setAll = (form) => set("form", form);
  const correct = (row) => setAll({ ...fresh(study, today), row: row.row, tube: row.tube, on: row.on, batch: row.batch, instrument: row.instrument, result: row.result?.text ?? "", none: !row.result, left_out: row.left_out });
  const due = dutiesOf(study, today).map((duty) => ({ ...duty, study }));
  const limit = study.limits.at(-1);
  return html`<div class="stack"><p>${one("recipe", study.recipe)?.name}; ${study.instruments.map(instrumentName).join(", ")}. Spike ${plain(study.level_mg_l, 1)} mg/L, estimate ${plain(study.estimate_mg_l, 1)} mg/L. ${study.local && html`<${Where} about=${study.id} />`}</p>
    ${limit && html`<${Limit} limit=${limit} />`}${due.length > 0 && html`<section class="card"><h2>Due</h2><${Due} rows=${due} today=${today} link=${false} /></section>`}
    ${study.state === "open" && html`<${Missing} study=${study} />`}<${Finish} study=${study} />
    ${study.state === "open" && study.plan && html`<p class="soft">Planned: ${study.plan.map((one_) => `${one_.on}: ${one_.spikes} spikes, ${one_.blanks} blanks`).join("; ")}.</p>`}
    <${Add} study=${study} v=${v.form} set=${(name, value) => setAll({ ...v.form, [name]: value })} setAll=${setAll} />
    <section class="card"><h2>Results</h2><${Results} study=${study} onCorrect=${correct} /></section><${FromRuns} study=${study} />
    ${study.limits.length > 1 && html`<details><summary>Earlier limits</summary><ul>${study.limits.slice(0, -1).reverse().map((one_) => html`<li key=${one_.computed_on + one_.mg_l}>${one_.shown} mg/L, calculated ${one_.computed_on}</li>`)}</ul></details>`}
    <p><a href="/bench/studies">Detection limits</a> · <a href="/emergency">Emergency and first aid</a></p></div>`;
}

/** The screen of a study. */
export function Study({ id }) {
  const study = useView(() => one("study", id));
  const zone = useView(programme)?.zone;
  if (!study) return html`<${Frame} place="bench" title="Study"><${Empty} title="This study is not on this tablet"><a href="/bench/studies">All studies</a><//><//>`;
  return html`<${Frame} place="bench" title=${study.name}><${Body} study=${study} today=${day(new Date(), zone)} /><//>`;
}
