// Gas at the opening, tested from outside. A reading at an alarm point blocks the sample of the visit.

import { html, useState } from "../parts/html.js";
import { NumberField, TextField, useForm, useSaving } from "../parts/fields.js";
import { GASES, alarmsOf } from "../parts/field_sums.js";
import { clock } from "../parts/format.js";
import { Problem } from "../parts/frame.js";
import { state, withOffset } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { programme } from "../parts/view.js";

const GAS_HAZARDS = ["gases", "confined_space"];

/** Why the visit's gas readings do not allow a sample; empty when they do. `confirm` says that a person must confirm. */
export function gasGate(visit, point, words) {
  if (!visit.gas.length) return { why: point.hazards.some((id) => GAS_HAZARDS.includes(id)) ? ["no gas reading was taken"] : [], confirm: false };
  if (!words) return { why: ["the alarm points are not read yet"], confirm: false };
  const now = alarmsOf(visit.gas.at(-1), words.gas);
  if (now.length) return { why: now, confirm: false };
  const alarmed = !visit.gas_confirmed && visit.gas.some((reading) => alarmsOf(reading, words.gas).length);
  return { why: alarmed ? ["an earlier reading alarmed: a person must confirm"] : [], confirm: alarmed };
}

const BLANK = { meter: "", oxygen_percent: "", lel_percent: "", h2s_ppm: "", co_ppm: "" };

function Test({ visit, done }) {
  const [v, set, forget] = useForm(`gas:${visit.id}`, BLANK);
  const { save, problem, busy } = useSaving(async () => {
    const wrong = GASES.filter(([name]) => v[name].trim() && read(v[name]).problem);
    if (wrong.length) throw new Error(`Not a number: ${wrong.map(([, label]) => label).join(", ")}.`);
    if (GASES.every(([name]) => !v[name].trim())) throw new Error("Type what the gas meter shows.");
    const typed = Object.fromEntries(GASES.map(([name]) => [name, v[name].trim() || null]));
    await state("gas.tested", visit.id, { at: withOffset(), meter: v.meter.trim(), ...typed });
    await forget();
    done();
  });
  return html`<form class="stack" onSubmit=${save} novalidate><div class="two">${GASES.map(([name, label, unit]) => html`<${NumberField} key=${name} label=${label} unit=${unit} value=${v[name]} onInput=${(text) => set(name, text)} />`)}</div>
    <${TextField} label="Gas meter" value=${v.meter} maxlength="200" onInput=${(text) => set("meter", text)} hint="its name or serial number; bump-tested today" />
    <${Problem} words=${problem} /><button disabled=${busy}>Save the gas reading</button></form>`;
}

function Confirm({ visit }) {
  const [note, setNote] = useState("");
  const { save, problem, busy } = useSaving(async () => {
    if (!note.trim()) throw new Error("Say what was done before sampling goes on.");
    await state("gas.confirmed", visit.id, { note: note.trim() });
  });
  return html`<form class="stack" onSubmit=${save} novalidate><${TextField} label="What was done since the alarm" value=${note} maxlength="500" onInput=${setNote} />
    <${Problem} words=${problem} /><button disabled=${busy}>I confirm: sampling from outside goes on</button></form>`;
}

/** The gas readings of a visit, each with what it means. */
export function GasReadings({ visit, words }) {
  const zone = programme()?.zone;
  return html`${visit.gas.length > 0 && html`<ul class="plain past">${visit.gas.map((reading) => {
      const alarms = words ? alarmsOf(reading, words.gas) : [];
      return html`<li key=${reading.at}>${clock(reading.at, zone)}: O₂ ${reading.oxygen_percent ?? "–"} %, LEL ${reading.lel_percent ?? "–"} %, H₂S ${reading.h2s_ppm ?? "–"} ppm, CO ${reading.co_ppm ?? "–"} ppm
        ${alarms.length ? html`<strong class="above"> ▲ alarm</strong>` : html`<span> ○ below every alarm point</span>`}</li>`;
    })}</ul>`}
    ${visit.gas_confirmed && html`<p class="soft">Confirmed by ${visit.gas_confirmed.by}: ${visit.gas_confirmed.note}</p>`}`;
}

/** The gas part of a visit. */
export function Gas({ visit, point, words }) {
  const gate = gasGate(visit, point, words);
  const needed = gate.why.length > 0 && !gate.confirm;
  const [open, setOpen] = useState(false);
  return html`<section class="card stack ${gate.why.length ? "stop" : ""}"><h2>Gas, from outside</h2>
    ${gate.why.length > 0 && html`<p><strong>▲ No sample yet: ${gate.why.join("; ")}.</strong></p>`}
    ${words && html`<p class="small">${words.no_entry} Test before the lid is off: oxygen, then combustible, then toxic gas. Leave at an alarm, upwind, and call.</p>`}
    <${GasReadings} visit=${visit} words=${words} />
    ${gate.confirm && html`<${Confirm} visit=${visit} />`}
    ${needed || open ? html`<${Test} key=${visit.gas.length} visit=${visit} done=${() => setOpen(false)} />` : html`<button type="button" onClick=${() => setOpen(true)}>${visit.gas.length ? "Another gas reading" : "Enter a gas reading"}</button>`}
  </section>`;
}
