// Taking a sample: code, time, readings, preservation. "Saved on this tablet" only when it is.

import { html } from "../parts/html.js";
import { readCode } from "../parts/bottle_code.js";
import { dropDraft } from "../parts/db.js";
import { Check, Choice, LongField, NumberField, TextField, useForm, useSaving } from "../parts/fields.js";
import { day, localInput } from "../parts/format.js";
import { Empty, Frame, Problem, go, say } from "../parts/frame.js";
import { newId, state, withOffset } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { limitToday, outlookOf, READINGS } from "./outlook.js";
import { noReadings, pointDraft, pointStart, Readings } from "./point_card.js";

const start = () => ({ code: "", at: localInput(), acid: true, ph: "", cooled: true, appearance: "", note: "" });

/** Readings that were typed, as the entry carries them. */
function typed(field) {
  return Object.fromEntries(READINGS.filter(({ key }) => field[key]?.text?.trim()).map(({ key }) => [key, field[key]]));
}

/** The plan as it was settled at the manhole, or null where nothing was expected. */
function planOf(outlook, point) {
  const choice = outlook.planned?.choice ?? outlook.planned?.plans[0];
  if (!choice) return null;
  const factor = point.chosen ?? choice.dilution_factor;
  const found = outlook.planned.plans.find((plan) => plan.dilution_factor === factor);
  const by = point.chosen === null ? "forecast" : "person";
  return {
    recipe: outlook.ranges[0].recipe,
    dilution_factor: factor,
    steps: found.steps ?? [],
    p_in_range: found.p_in_range,
    median: outlook.predictive.quantile(0.5),
    low: outlook.predictive.quantile(0.05),
    high: outlook.predictive.quantile(0.95),
    reason: by === "person" ? point.why || "chosen at the point" : outlook.planned.why,
    chosen_by: by,
  };
}

function wrongIn(v, point) {
  const problems = [];
  const { problem } = readCode(v.code);
  if (problem) problems.push(`Bottle code: ${problem}.`);
  if (Number.isNaN(new Date(v.at).getTime())) problems.push("Collected at: choose the date and time.");
  for (const { key, label } of READINGS) {
    const text = point.field[key]?.text ?? "";
    if (text.trim() && read(text).problem) problems.push(`${label}: ${read(text).problem}`);
  }
  if (v.ph.trim() && read(v.ph).problem) problems.push(`pH after acid: ${read(v.ph).problem}`);
  return problems;
}

function bodyOf(id, v, point, outlook) {
  return {
    point: id,
    bottle: readCode(v.code).code,
    sample_kind: "grab",
    collected_at: withOffset(new Date(v.at)),
    field: typed(point.field),
    activity: point.activity,
    appearance: v.appearance,
    preservation: { acid: v.acid, ph: v.ph.trim() ? { text: v.ph, unit: "pH" } : null, cooled: v.cooled },
    plan: planOf(outlook, point),
    note: v.note,
  };
}

/** The form for a grab sample at a point. */
export function TakeSample({ id }) {
  const point = useView(() => one("point", id));
  const known = useView(() => one("outlook", id));
  const settings = useView(programme);
  const [p, setP] = useForm(pointDraft(id), pointStart());
  const [v, set, forget] = useForm(`take:${id}`, start());
  const { save, problem, busy } = useSaving(async () => {
    const problems = wrongIn(v, p);
    if (problems.length) throw new Error(problems.join(" "));
    const { code } = readCode(v.code);
    const other = all("sample").find((sample) => sample.bottle === code);
    if (other) throw new Error(`Bottle ${code} already holds another sample (${day(other.collected_at, settings?.zone)}). Look at the label again.`);
    const limit = limitToday(point, day(new Date(), settings?.zone));
    await state("sample.taken", newId(), bodyOf(id, v, p, outlookOf(known?.pack, p.field, p.activity, limit)));
    await Promise.all([forget(), dropDraft(pointDraft(id))]).catch(() => {});
    say(`Saved on this tablet: ${code}.`);
    go("/field/samples");
  });
  if (!point) return html`<${Frame} place="field" title="Take the sample"><${Empty} title="This point is not on this tablet"><a href="/field">All points</a><//><//>`;
  if (!v || !p) return html`<${Frame} place="field" title="Take the sample"><//>`;
  const code = readCode(v.code);
  return html`<${Frame} place="field" title="Take the sample" about="${point.discharger_name}, ${point.name}">
    <form class="stack" onSubmit=${save}>
      <${TextField} label="Bottle code" value=${v.code} onInput=${(text) => set("code", text)} class="code" maxlength="12" autocomplete="off" autocapitalize="characters"
        hint=${code.code ? `read as ${code.code}` : "six characters on the label"} wrong=${v.code.length >= 6 && code.problem ? code.problem : ""} />
      <${TextField} label="Collected at" type="datetime-local" value=${v.at} onInput=${(text) => set("at", text)} />
      <${Choice} label="Activity" value=${p.activity} options=${[["production", "Production"], ["cleaning", "Cleaning"], ["idle", "Idle"]]} onChoose=${(activity) => setP("activity", activity)} />
      <${Readings} field=${p.field ?? noReadings()} onChange=${(field) => setP("field", field)} />
      <section class="card stack"><h2>Preservation</h2>
        <p class="soft small">Sulfuric acid to pH below 2 and at most 6 °C, within 15 minutes (40 CFR 136.3, Table II). Acid: goggles and gloves; add it slowly; the safety data sheet decides.</p>
        <${Check} label="Acid added" checked=${v.acid} onChange=${(acid) => set("acid", acid)} />
        <${NumberField} label="pH after acid" unit="pH" value=${v.ph} onInput=${(ph) => set("ph", ph)} />
        <${Check} label="On ice or refrigerated" checked=${v.cooled} onChange=${(cooled) => set("cooled", cooled)} /></section>
      <${TextField} label="Appearance" value=${v.appearance} onInput=${(appearance) => set("appearance", appearance)} hint="colour, solids, foam, odour" />
      <${LongField} label="Note" value=${v.note} onInput=${(note) => set("note", note)} />
      <${Problem} words=${problem} />
      <div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save on this tablet"}</button></div>
      <p><a href="/field/point/${encodeURIComponent(id)}">Back to the point</a></p>
    </form><//>`;
}
