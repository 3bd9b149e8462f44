// Detection limits: what is due, the studies, and the plan of a new one.

import { html } from "../parts/html.js";
import { Check, NumberField, Select, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { dueList } from "./duties.js";

/** What is due, in words; what is late comes with a shape. */
export function Due({ rows, today, link = true }) {
  return html`<ul class="plain">${rows.map((row) => html`<li key=${row.study.id + row.what} class=${row.due < today ? "above" : ""}>${row.due < today ? "▲ late, " : ""}by <strong>${row.due}</strong>: ${row.what} ${link && html`<span class="soft">(<a href="/bench/study/${encodeURIComponent(row.study.id)}">${row.study.name}</a>)</span>`}</li>`)}</ul>`;
}

function Row({ study }) {
  const limit = study.limits.at(-1);
  return html`<a href="/bench/study/${encodeURIComponent(study.id)}"><strong>${study.name}</strong>
    <span class="under"><span>${one("recipe", study.recipe)?.name}</span><span>${limit ? `${limit.shown} mg/L, calculated ${limit.computed_on}` : `${study.rows.length} results so far`}</span>${study.local ? html`<${Where} about=${study.id} />` : ""}</span></a>`;
}

/** The list of studies. */
export function Studies() {
  const today = day(new Date(), useView(programme)?.zone);
  const studies = useView(() => all("study")).reverse();
  const due = useView(() => dueList(today));
  return html`<${Frame} place="bench" title="Detection limits"><div class="stack">
    <section class="card"><h2>Due</h2>${due.length ? html`<${Due} rows=${due} today=${today} />` : html`<p class="soft">Nothing is due: a finished study asks for two spikes a quarter on each instrument, and for a new calculation within 13 months.</p>`}</section>
    <h2>Studies</h2>${studies.length ? html`<nav class="list" aria-label="Studies">${studies.map((study) => html`<${Row} key=${study.id} study=${study} />`)}</nav>`
      : html`<${Empty} title="No study yet">Seven spikes and seven blanks in three batches on three dates give the first detection limit.<//>`}
    <a class="button" href="/bench/studies/new">Plan a study</a>
    <p class="soft small">Method detection limit by 40 CFR 136 Appendix B, revision 2.</p>
    <p><a href="/bench">What waits</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}

const BLANK = { name: "", recipe: "", instruments: null, estimate: "", level: "", days: ["", "", ""], note: "" };
const number = (text) => (text.trim() && !read(text).problem ? read(text).value : null);

/** The form for a study. */
export function PlanStudy() {
  const [v, set, forget] = useForm("study", BLANK);
  const recipes = useView(() => all("recipe")).sort((a, b) => b.working_high - a.working_high);
  const photometers = useView(() => all("instrument")).filter((row) => row.what === "photometer");
  const estimate = number(v.estimate);
  const level = number(v.level);
  const chosen = v.instruments ?? photometers.slice(0, 1).map((row) => row.id);
  const recipe = v.recipe || recipes[0]?.id;
  const outside = estimate !== null && level !== null && (level < 2 * estimate || level > 10 * estimate);
  const range = estimate ? `2 to 10 times the estimate: ${plain(2 * estimate, 1)} to ${plain(10 * estimate, 1)} mg/L.` : "2 to 10 times the estimate.";
  const { save, problem, busy } = useSaving(async () => {
    const days = [...new Set(v.days.filter(Boolean))].sort();
    if (!v.name.trim()) throw new Error("Give the study a name.");
    if (!recipe || !chosen.length) throw new Error("A recipe and a photometer are needed first.");
    if (!estimate || level === null) throw new Error("Type the estimated limit and the spike, in mg/L.");
    if (outside) throw new Error(`The spike must lie at ${range}`);
    if (days.length < 3) throw new Error("Choose at least three different days.");
    const id = newId();
    await state("study.planned", id, { name: v.name.trim(), recipe, instruments: chosen, estimate: measuredOf(v.estimate, "mg/L"), level: measuredOf(v.level, "mg/L"), days, note: v.note.trim() });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go(`/bench/study/${id}`);
  });
  return html`<${Frame} place="bench" title="Plan a study"><form class="stack" onSubmit=${save} novalidate>
    <${TextField} label="Name" value=${v.name} onInput=${(text) => set("name", text)} />
    <${Select} label="Recipe" value=${recipe} options=${recipes.map((row) => [row.id, row.name])} onChoose=${(id) => set("recipe", id)} />
    <section class="card"><h2>Photometers</h2><p class="soft">Of several, each needs two spikes and two blanks on different dates.</p>${photometers.map((row) => html`<${Check} key=${row.id} label=${row.name} checked=${chosen.includes(row.id)} onChange=${(on) => set("instruments", on ? [...chosen, row.id] : chosen.filter((id) => id !== row.id))} />`)}
      ${!photometers.length && html`<p class="soft">Add one under <a href="/bench/stores">Stores</a>.</p>`}</section>
    <${NumberField} label="Estimated limit" unit="mg/L" value=${v.estimate} onInput=${(text) => set("estimate", text)} hint="In the tube: for example three times the scatter of blanks." />
    <${NumberField} label="Spike" unit="mg/L" value=${v.level} wrong=${outside ? `Not at ${range}` : ""} onInput=${(text) => set("level", text)} hint=${`Reagent water spiked at ${range}`} />
    <section class="card stack"><h2>Days</h2><p class="soft">At least three batches on three dates: seven spikes and seven blanks, each through the whole procedure.</p>
      ${v.days.map((text, i) => html`<${TextField} key=${i} label=${`Day ${i + 1}`} type="date" value=${text} onInput=${(value) => set("days", v.days.map((one_, k) => (k === i ? value : one_)))} />`)}
      <button type="button" onClick=${() => set("days", [...v.days, ""])}>Another day</button></section>
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the plan of the study"}</button>
    <p><a href="/bench/studies">Detection limits</a> · <a href="/emergency">Emergency and first aid</a></p></form><//>`;
}
