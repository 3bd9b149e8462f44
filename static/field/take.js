// Taking a sample: the bottle's code, the moment, what was read, how it is kept.

import { html } from "../parts/html.js";
import { readCode } from "../parts/bottle_code.js";
import { CodeField } from "../parts/code_field.js";
import { Check, Choice, LongField, NumberField, Select, TextField, echo, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { dayAndTime, localInput, plain } from "../parts/format.js";
import { Empty, Problem, go, say } from "../parts/frame.js";
import { newId, state, withOffset } from "../parts/journal.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { freshCode } from "./codes.js";
import { planOf, useForecast } from "./expected.js";
import { gasGate } from "./gas.js";
import { ACTIVITIES, BLANK, cardOf, draftKey, fieldOf, nameOf, READINGS, Solids } from "./point.js";
import { CompositePart, compositeOf, compositeProblem, openVisit, samplerAt } from "./sampler.js";

const EARLY_MS = 5 * 60000;

/** What is wrong with a form, by field; empty when it can be saved. */
export function problemsOf(values, sampler = null, now = Date.now()) {
  const wrong = {};
  const { code, problem } = readCode(values.bottle);
  if (!values.bottle.trim()) wrong.bottle = "Scan or type the code on the bottle.";
  else if (problem) wrong.bottle = `${problem[0].toUpperCase()}${problem.slice(1)}.`;
  else if (one("bottle", code)?.sample) wrong.bottle = `Bottle ${code} already holds another sample: look at the label again.`;
  if (values.time && Number.isNaN(new Date(values.time).getTime())) wrong.time = "Not a day and time.";
  else if (values.time && new Date(values.time).getTime() > now + EARLY_MS) wrong.time = "This moment is still to come.";
  for (const [field, , , ] of READINGS) {
    const told = echo(values[field], "");
    if (told.problem) wrong[field] = told.problem;
  }
  if (values.acid && echo(values.acid_ph, "pH").problem) wrong.acid_ph = echo(values.acid_ph, "pH").problem;
  if (kindOf(values, sampler) === "composite") {
    const told = compositeProblem(values, sampler);
    if (told) wrong.composite = told;
  }
  if (values.purpose === "duplicate" && !values.of) wrong.of = "Say which sample it repeats.";
  if (values.factor !== null && !values.reason.trim()) wrong.reason = "Say why this dilution: it differs from the proposed one.";
  return wrong;
}

function planBody(plan, values, forecast) {
  if (!plan) return null;
  return {
    recipe: plan.recipe ?? null,
    dilution_factor: plan.factor,
    steps: plan.steps,
    p_in_range: plan.share ?? null,
    median: forecast?.median ?? null,
    low: forecast?.low ?? null,
    high: forecast?.high ?? null,
    reason: (values.factor === null ? forecast.why : values.reason.trim()).slice(0, 500),
    chosen_by: values.factor === null ? "forecast" : "person",
  };
}

/** The moment of preserving: typed, or the saving itself; null when nothing was done. */
const preservedAt = ({ acid, cooled, kept_at }) => (acid || cooled ? withOffset(kept_at ? new Date(kept_at) : new Date()) : null);

/** Grab or composite: a running sampler is picked up as a composite. */
const kindOf = (values, sampler) => values.kind || (sampler ? "composite" : "grab");

/** The body of the entry, measured values as typed. */
export function bodyOf(point, values, plan, forecast, { visit = null, sampler = null, meter = null } = {}) {
  const field = fieldOf(values);
  return {
    point: point.id,
    visit: visit?.id ?? null,
    purpose: values.purpose,
    of: values.purpose === "duplicate" ? values.of : null,
    bottle: readCode(values.bottle).code,
    sample_kind: kindOf(values, sampler),
    composite: kindOf(values, sampler) === "composite" ? compositeOf(values, sampler) : null,
    meter: Object.keys(field).length ? meter : null,
    collected_at: withOffset(values.time ? new Date(values.time) : new Date()),
    field,
    activity: values.activity,
    ...(values.solids && { solids: true }),
    appearance: values.appearance.trim(),
    preservation: { acid: values.acid, ph: values.acid ? measuredOf(values.acid_ph, "pH") : null, cooled: values.cooled, at: preservedAt(values) },
    plan: planBody(plan, values, forecast),
    note: values.note.trim(),
  };
}

function Moment({ values, set, wrong }) {
  const zone = programme()?.zone;
  const here = Intl.DateTimeFormat().resolvedOptions().timeZone;
  const moment = values.time ? new Date(values.time) : new Date();
  const elsewhere = zone && zone !== here && !Number.isNaN(moment.getTime());
  const hint = elsewhere ? `Your device is in ${here}; in the programme's zone it is ${dayAndTime(moment, zone)}.` : "";
  if (!values.time && !wrong) {
    return html`<div class="row spread"><span><strong>Taken now</strong><br /><span class="soft">the moment you save. ${hint}</span></span>
      <button type="button" onClick=${() => set("time", localInput())}>Another time</button></div>`;
  }
  return html`<div class="row moment"><${TextField} label="Taken at" type="datetime-local" value=${values.time} hint=${hint} wrong=${wrong}
      onInput=${(text) => set("time", text)} />
    <button type="button" onClick=${() => set("time", "")}>Use now</button></div>`;
}

function Kept({ values, set, wrong }) {
  return html`<section class="card stack"><h2>How it is kept</h2>
    <${Check} label="On ice or in a refrigerator" checked=${values.cooled} onChange=${(on) => set("cooled", on)} />
    <${Check} label="Acidified with sulfuric acid" checked=${values.acid} onChange=${(on) => set("acid", on)} />
    ${values.acid && html`<div class="stack"><p class="card wait"><strong>▲ Acid.</strong> Goggles and gloves; acid slowly into the sample,
      bottle held away from you; water at hand. The safety data sheet and your local rules decide.</p>
      <${NumberField} label="pH after acid" value=${values.acid_ph} unit="pH" wrong=${wrong} onInput=${(text) => set("acid_ph", text)} hint="For example < 2 from a strip. Leave it empty if not measured." /></div>`}
    ${(values.acid || values.cooled) && html`<${TextField} label="Preserved at" type="datetime-local" value=${values.kept_at} onInput=${(text) => set("kept_at", text)} hint="empty: the moment you save" />`}
    <p class="soft small">For COD: at most 6 °C and sulfuric acid to below pH 2 within 15 minutes of taking it; then 28 days (40 CFR 136.3, Table II).</p>
  </section>`;
}

function Bottle({ values, set, wrong }) {
  const { code } = readCode(values.bottle);
  const draw = () => {
    const drawn = freshCode();
    set("bottle", drawn);
    set("drawn", drawn);
  };
  const told = code === null ? "The six characters on its label; spaces do not matter."
    : code === values.drawn ? `Write ${code} on the bottle now, large, with a waterproof pen.` : `Read as ${code}. The check character agrees.`;
  return html`<section class="card stack"><${CodeField} label="Bottle" value=${values.bottle} wrong=${wrong} hint=${told} onInput=${(text) => set("bottle", text)} />
    ${!values.bottle && html`<button type="button" class="quiet" onClick=${draw}>No printed label: give me a code to write on it</button>`}
  </section>`;
}

const PURPOSES = [["sample", "Sample"], ["duplicate", "Field duplicate"], ["field blank", "Field blank"]];

/** What the bottle is for, grab or composite, and which meter gave the readings. */
function What({ point, values, set, sampler, meters, meter, wrong }) {
  const others = all("sample", point.id).filter((sample) => sample.purpose !== "field blank").slice(-6).reverse();
  return html`<section class="card stack"><h2>What it is</h2>
    <${Choice} label="Purpose" value=${values.purpose} options=${PURPOSES} onChoose=${(key) => set("purpose", key)} />
    ${values.purpose === "duplicate" && html`<${Select} label="Repeats" value=${values.of} options=${[["", "choose"], ...others.map((sample) => [sample.id, `${sample.bottle}, ${dayAndTime(sample.collected_at, programme()?.zone)}`])]} onChoose=${(id) => set("of", id)} />`}
    ${wrong.of && html`<p class="above">▲ ${wrong.of}</p>`}
    <${Choice} label="Taken as" value=${kindOf(values, sampler)} options=${[["grab", "Grab"], ["composite", "Composite"]]} onChoose=${(key) => set("kind", key)} />
    ${point.sample_kind === "composite" && kindOf(values, sampler) === "grab" && html`<p class="above">▲ This point asks for a composite; a grab is weak evidence here.</p>`}
    ${meters.length > 0 && html`<${Select} label="Meter of the readings" value=${meter ?? ""} options=${[["", "none of ours"], ...meters.map((one_) => [one_.id, one_.name])]} onChoose=${(id) => set("meter", id)} />`}</section>`;
}

function Form({ point, values, set, forget }) {
  const visit = useView(() => openVisit(point.id));
  const sampler = useView(() => samplerAt(point.id));
  const words = useWords();
  const meters = useView(() => all("instrument")).filter((one_) => one_.what === "meter");
  const meter = values.meter ?? (meters.length === 1 ? meters[0].id : null);
  const blocked = visit ? gasGate(visit, point, words).why : [];
  const forecast = useForecast(point, values);
  const plan = planOf(forecast, values);
  const { save, problem, busy } = useSaving(async () => {
    if (blocked.length) throw new Error(`No sample yet: ${blocked.join("; ")}. Enter a new gas reading in the visit.`);
    const found = problemsOf(values, sampler);
    set("asked", true);
    if (Object.keys(found).length) throw new Error("Not saved yet: see what is marked.");
    const { code } = readCode(values.bottle);
    const picked = kindOf(values, sampler) === "composite" ? sampler : null;
    await state("sample.taken", picked?.id ?? newId(), bodyOf(point, values, plan, forecast, { visit, sampler: picked, meter: meter || null }));
    await forget();
    say(`Saved on this tablet: ${code}`);
    go(visit ? `/field/visit/${visit.id}` : "/field/samples");
  });
  const wrong = values.asked ? problemsOf(values, sampler) : {};
  return html`<form class="stack" onSubmit=${save} novalidate>
    <${Bottle} values=${values} set=${set} wrong=${wrong.bottle} />
    <${What} ...${{ point, values, set, sampler, meters, meter, wrong }} />
    ${kindOf(values, sampler) === "composite" && html`<${CompositePart} v=${values} set=${set} sampler=${sampler} wrong=${wrong.composite} />`}
    ${wrong.composite && html`<p class="above">▲ ${wrong.composite}</p>`}
    <section class="card stack"><h2>When and what</h2>
      <${Moment} values=${values} set=${set} wrong=${wrong.time} />
      <${Choice} label="What goes on at the firm" value=${values.activity} options=${ACTIVITIES} onChoose=${(key) => set("activity", values.activity === key ? null : key)} />
      <div class="two">${READINGS.map(([field, label, units]) => html`<${NumberField} key=${field} label=${label} value=${values[field]} unit=${values[`${field}_unit`]}
        units=${units.length > 1 ? units : undefined} onInput=${(text) => set(field, text)} onUnit=${(unit) => set(`${field}_unit`, unit)} />`)}</div>
      <${Solids} ...${{ values, set }} />
      <${TextField} label="Colour, smell, foam, solids" value=${values.appearance} maxlength="200" onInput=${(text) => set("appearance", text)} />
    </section>
    <${Kept} values=${values} set=${set} wrong=${wrong.acid_ph} />
    <section class="card"><h2>Dilution at the bench</h2>${plan
      ? html`<p><strong>${plan.factor === 1 ? "Undiluted" : `1:${plain(plan.factor)}`}</strong>, ${values.factor === null ? "as proposed" : "your choice"}. <a href=${cardOf(point.id)}>See why or change it</a></p>`
      : html`<p class="soft">Open: it is settled at the bench. <a href=${cardOf(point.id)}>Choose one</a></p>`}
      ${values.factor !== null && html`<${TextField} label="Why this one" value=${values.reason} wrong=${wrong.reason} onInput=${(text) => set("reason", text)} />`}</section>
    <${LongField} label="Note" value=${values.note} onInput=${(text) => set("note", text)} />
    <${Problem} words=${problem} />
    <div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the sample"}</button></div>
  </form>`;
}

/** The form for a sample of one point. */
export function Take({ id }) {
  const point = useView(() => one("point", id));
  const [values, set, forget] = useForm(draftKey(id), BLANK);
  if (!point) return html`<div class="screen"><h1>Take a sample</h1><${Empty} title="This point is not on this tablet"><a href="/field">All points</a><//></div>`;
  return html`<div class="screen stack"><p class="back"><a href=${cardOf(id)}>Back to the point</a></p>
    <header><h1>Take a sample</h1><p class="soft">${nameOf(point)}</p></header>
    <${Form} ...${{ point, values, set, forget }} /></div>`;
}
