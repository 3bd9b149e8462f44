// Composites: setting a sampler up, its pacing sum, the pick-up, and volumes shared out by hand.

import { html } from "../parts/html.js";
import { Choice, NumberField, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { aliquotsOf, sharesOf } from "../parts/field_sums.js";
import { dayAndTime, localInput, plain } from "../parts/format.js";
import { Empty, Problem, go, say } from "../parts/frame.js";
import { newId, state, withOffset } from "../parts/journal.js";
import { read, valueOf } from "../parts/measured.js";
import { units } from "../parts/units.js";
import { all, one, programme, useView } from "../parts/view.js";
import { flowUnits, volumeUnits } from "./flow_form.js";
import { cardOf, nameOf } from "./point.js";

const BLANK = {
  paced_by: "time", minutes: "15", every: "", every_unit: "", expected: "", expected_unit: "", aliquot: "", bottle: "", bottle_unit: "L", planned: "",
  intake: "", tubing: "", cooling: "ice", temperature: "", seal: "", lock: "", time: "",
};

/** The sampler that runs at a point, or null. */
export const samplerAt = (point) => all("sampler", point).findLast((sampler) => sampler.state === "running") ?? null;

/** Aliquots that the pacing gives and the litres they make; null while something is missing. */
export function pacingOf(v) {
  const litres = (text, unit) => valueOf(measuredOf(text, unit), "L", units());
  const aliquot = valueOf(measuredOf(v.aliquot, "mL"), "mL", units());
  const byFlow = v.paced_by === "flow";
  const expected = byFlow ? litres(v.expected, v.expected_unit) : 24 * 60;
  const every = byFlow ? litres(v.every, v.every_unit) : read(v.minutes).value;
  if (!(expected > 0) || !(every > 0)) return null;
  return aliquotsOf(expected, every, aliquot, litres(v.bottle, v.bottle_unit));
}

function Pacing({ v }) {
  const found = pacingOf(v);
  if (!found) return html`<p class="soft">The number of aliquots stands here once the pacing is typed.</p>`;
  return html`<p role="status">${v.paced_by === "time" && "In 24 h: "}<strong>${found.aliquots} aliquots</strong>${found.collected !== null && `, ${plain(found.collected, 2)} L`}.
    ${found.fits === false && html`<strong class="above"> ▲ More than the bottle holds.</strong>`}${found.fits && " It fits into the bottle."}</p>`;
}

function Form({ point, visit, v, set, forget }) {
  const { save, problem, busy } = useSaving(async () => {
    const flow = v.paced_by === "flow";
    const texts = [v.minutes, v.every, v.expected, v.aliquot, v.bottle, v.temperature].filter((text) => text.trim() && read(text).problem);
    if (texts.length) throw new Error(`Not a number: ${texts.join(", ")}.`);
    if (flow && !(v.every.trim() && v.expected.trim())) throw new Error("A flow-paced sampler needs the volume between aliquots and the volume expected.");
    const planned = v.planned.trim() ? Number(v.planned) : (pacingOf(v)?.aliquots ?? null);
    if (planned !== null && !(Number.isInteger(planned) && planned > 0)) throw new Error("The planned number of aliquots is a whole number.");
    await state("sampler.set", newId(), {
      point: point.id, visit: visit?.id ?? null, started_at: withOffset(v.time ? new Date(v.time) : new Date()), paced_by: v.paced_by,
      every_minutes: v.paced_by === "time" ? v.minutes.trim() || null : null, every_volume: flow ? measuredOf(v.every, v.every_unit) : null,
      expected_volume: flow ? measuredOf(v.expected, v.expected_unit) : null, aliquot: measuredOf(v.aliquot, "mL"), bottle_volume: measuredOf(v.bottle, v.bottle_unit), planned,
      intake: v.intake.trim(), tubing: v.tubing.trim(), cooling: v.cooling, temperature: measuredOf(v.temperature, "Cel"), seal: v.seal.trim(), lock: v.lock.trim(),
    });
    await forget();
    say("Saved on this tablet: the sampler runs");
    go(visit ? `/field/visit/${visit.id}` : cardOf(point.id));
  });
  const number = (name, label, unit, hint) => html`<${NumberField} label=${label} unit=${unit} value=${v[name]} onInput=${(text) => set(name, text)} hint=${hint} />`;
  const volume = (name, label) => html`<${NumberField} label=${label} value=${v[name]} unit=${v[`${name}_unit`]} units=${volumeUnits()} onInput=${(text) => set(name, text)} onUnit=${(unit) => set(`${name}_unit`, unit)} />`;
  const line = (name, label, hint) => html`<${TextField} label=${label} value=${v[name]} maxlength="60" onInput=${(text) => set(name, text)} hint=${hint} />`;
  return html`<form class="stack" onSubmit=${save} novalidate>
    <section class="card stack"><h2>Pacing</h2>
      <${Choice} label="Paced by" value=${v.paced_by} options=${[["time", "Time"], ["flow", "Flow"], ["hand", "Hand"]]} onChoose=${(key) => set("paced_by", key)} />
      ${v.paced_by === "time" && number("minutes", "Minutes between aliquots", "min")}
      ${v.paced_by === "flow" && html`${volume("every", "One aliquot each")}${volume("expected", "Discharge expected")}`}
      ${number("aliquot", "One aliquot", "mL")}${volume("bottle", "The bottle holds")}
      ${v.paced_by !== "hand" && html`<${Pacing} v=${v} />`}
      <${TextField} label="Aliquots planned" inputmode="numeric" value=${v.planned} onInput=${(text) => set("planned", text)} hint="empty: as the pacing gives" />
      <${TextField} label="Started at" type="datetime-local" value=${v.time} onInput=${(text) => set("time", text)} hint="empty: the moment you save" /></section>
    <section class="card stack"><h2>The sampler</h2>
      <${Choice} label="Kept cold by" value=${v.cooling} options=${[["ice", "Ice"], ["refrigerated", "Refrigeration"], ["none", "Nothing"]]} onChoose=${(key) => set("cooling", key)} />
      ${v.cooling === "none" && html`<p class="above">▲ 40 CFR 136.3, Table II: at most 6 °C while it collects.</p>`}
      ${number("temperature", "Temperature inside", "Cel")}${line("intake", "Intake", "where and how deep")}${line("tubing", "Tubing", "new, or cleaned how")}${line("seal", "Seal number")}${line("lock", "Lock number")}</section>
    <${Problem} words=${problem} /><div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "The sampler runs"}</button></div></form>`;
}

/** The form that sets a sampler up at a point. */
export function SetSampler({ id }) {
  const point = useView(() => one("point", id));
  const visit = useView(() => openVisit(id));
  const unit = volumeUnits()[0];
  const [v, set, forget] = useForm(`sampler:${id}`, { ...BLANK, every_unit: unit, expected_unit: unit });
  if (!point) return html`<div class="screen"><h1>Set a sampler up</h1><${Empty} title="This point is not on this tablet"><a href="/field">All points</a><//></div>`;
  return html`<div class="screen stack"><p class="back"><a href=${visit ? `/field/visit/${visit.id}` : cardOf(id)}>Back</a></p>
    <header><h1>Set a sampler up</h1><p class="soft">${nameOf(point)}</p></header><${Form} ...${{ point, visit, v, set, forget }} /></div>`;
}

/** The visit that is going on at a point, or null. */
export const openVisit = (point) => all("visit", point).findLast((visit) => !visit.ended) ?? null;

const hours = (from, until) => (new Date(until).getTime() - new Date(from).getTime()) / 3_600_000;

function Portions({ v, set }) {
  const unit = flowUnits()[0];
  const flows = v.portions.map((row) => read(row.flow).value ?? NaN);
  const total = valueOf(measuredOf(v.c_volume, v.c_volume_unit), "mL", units());
  const shares = total && flows.every((flow) => flow >= 0) ? sharesOf(total, flows) : [];
  const change = (i, flow) => set("portions", v.portions.map((row, k) => (k === i ? { ...row, flow } : row)));
  return html`<div class="stack"><h3>Grabs, each by its flow</h3>${v.portions.map((row, i) => html`<${NumberField} key=${row.at} label=${`Grab ${i + 1}, ${row.at.slice(11, 16)}: flow`} unit=${unit} value=${row.flow} onInput=${(text) => change(i, text)}
      hint=${shares[i] === undefined ? "" : `pour ${plain(shares[i])} mL of it`} />`)}
    ${shares.length > 0 && html`<p role="status">${shares.map((ml, i) => `grab ${i + 1}: ${plain(ml, 1)} mL`).join("; ")}</p>`}
    <button type="button" onClick=${() => set("portions", [...v.portions, { at: withOffset(), flow: "" }])}>A grab was taken now</button></div>`;
}

/** The composite part of the sample's form: when it began, what was taken, what was missed. */
export function CompositePart({ v, set, sampler, wrong }) {
  const start = sampler?.started_at ?? (v.c_start && withOffset(new Date(v.c_start)));
  const end = v.time ? new Date(v.time) : new Date();
  const long = start ? hours(start, end) : null;
  const planned = sampler?.planned ?? (Number(v.c_planned) || null);
  const taken = Number(v.c_taken);
  const count = (name, label, hint) => html`<${TextField} label=${label} inputmode="numeric" value=${v[name]} onInput=${(text) => set(name, text)} hint=${hint} />`;
  return html`<section class="card stack"><h2>The composite</h2>
    ${sampler ? html`<p>Set up ${dayAndTime(sampler.started_at, programme()?.zone)} by ${sampler.by_name}${sampler.seal && `, seal ${sampler.seal}`}.</p>`
      : html`<${TextField} label="Began at" type="datetime-local" value=${v.c_start} wrong=${wrong} onInput=${(text) => set("c_start", text)} max=${localInput()} />`}
    ${long !== null && long > 0 && html`<p role="status">${plain(long, 1)} h from beginning to end, by elapsed time.</p>`}
    ${!sampler && html`<${Choice} label="Paced by" value=${v.c_paced} options=${[["time", "Time"], ["flow", "Flow"], ["hand", "Hand"]]} onChoose=${(key) => set("c_paced", key)} />${count("c_planned", "Aliquots planned")}`}
    ${count("c_taken", "Aliquots taken", planned && taken >= 0 && v.c_taken ? `${plain((100 * taken) / planned, 1)} % of ${planned}` : "")}
    <${TextField} label="Missed ones, and why" value=${v.c_missed} maxlength="500" onInput=${(text) => set("c_missed", text)} />
    <${NumberField} label="Volume in the bottle" value=${v.c_volume} unit=${v.c_volume_unit} units=${volumeUnits()} onInput=${(text) => set("c_volume", text)} onUnit=${(unit) => set("c_volume_unit", unit)} />
    ${(sampler?.paced_by ?? v.c_paced) === "hand" && html`<${Portions} v=${v} set=${set} />`}
    <${NumberField} label="Temperature at pick-up" unit="Cel" value=${v.c_temperature} onInput=${(text) => set("c_temperature", text)} />
    <${Choice} label="Seal" value=${v.c_seal} options=${["intact", "broken", "none"]} onChoose=${(key) => set("c_seal", key)} /></section>`;
}

/** The composite of a sample's entry. */
export function compositeOf(v, sampler) {
  const whole = (text) => (text.trim() ? Number(text) : null);
  return {
    started_at: sampler?.started_at ?? withOffset(new Date(v.c_start)), paced_by: sampler?.paced_by ?? v.c_paced, planned: sampler?.planned ?? whole(v.c_planned), taken: whole(v.c_taken),
    missed: v.c_missed.trim(), volume: measuredOf(v.c_volume, v.c_volume_unit), temperature: measuredOf(v.c_temperature, "Cel"), seal: v.c_seal,
    portions: v.portions.filter((row) => row.flow.trim()).map((row) => ({ at: row.at, flow: measuredOf(row.flow, flowUnits()[0]) })),
  };
}

/** What is wrong with a composite, in words, or "". */
export function compositeProblem(v, sampler) {
  const start = sampler?.started_at ?? v.c_start;
  if (!start) return "Say when the composite began.";
  if (!(new Date(start) < (v.time ? new Date(v.time) : new Date()))) return "A composite ends after it began.";
  const counts = [v.c_planned, v.c_taken].filter((text) => text.trim() && !/^\d+$/u.test(text.trim()));
  if (counts.length) return `Aliquots are counted in whole numbers: ${counts.join(", ")}.`;
  const texts = [v.c_volume, v.c_temperature, ...v.portions.map((row) => row.flow)].filter((text) => text.trim() && read(text).problem);
  return texts.length ? `Not a number: ${texts.join(", ")}.` : "";
}
