// The gates of a run: the server's words, filled from the recipe, confirmed one by one.

import { html, useState } from "../parts/html.js";
import { NumberField, TextField, useSaving } from "../parts/fields.js";
import { plain } from "../parts/format.js";
import { Problem } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { one, useView } from "../parts/view.js";
import { ChlorideLine, gateOf } from "./measure.js";

const STAGES = ["before tubes", "before heating", "before reading", "before closing"];

/** A gate's words with the run's own numbers in them. */
export function filled(text, recipe, defaults) {
  const words = {
    chloride_limit: plain(recipe?.derived?.chloride_limit ?? 0, 0),
    order: (recipe?.order ?? []).join(", then "),
    temperature: plain(recipe?.temperature_c ?? defaults.temperature),
    tolerance: plain(defaults.tolerance),
    cooling_minutes: plain(defaults.cooling_minutes),
    cool_to: plain(defaults.cool_to),
  };
  return text.replace(/\{(\w+)\}/gu, (whole, name) => words[name] ?? whole);
}

/** The gates up to a stage that are not confirmed yet, in their order. */
export function openGates(words, run, stage) {
  const until = STAGES.indexOf(stage);
  return (words?.gates ?? []).filter((gate) => STAGES.indexOf(gate.stage) <= until && !run.gates[gate.id]);
}

/** Each sample of a rack once a dilution: [code, factor]. */
const samplesOf = (run) => [...new Map(run.tubes.filter((tube) => tube.bottle && tube.dilution).map((tube) => [`${tube.bottle} ${tube.dilution.factor}`, [tube.bottle, tube.dilution.factor]])).values()];

/** One gate to confirm. */
export function Gate({ gate, run, words }) {
  const [value, setValue] = useState("");
  const recipe = one("recipe", run.recipe);
  const container = one("container", run.container);
  const [note, setNote] = useState("");
  const samples = gate.id === "chloride_within_limit" ? samplesOf(run) : [];
  const closed = useView(() => samples.some(([code, factor]) => gateOf(code, factor, recipe).verdict === "closed"));
  const { save, problem, busy } = useSaving(async () => {
    const body = { gate: gate.id };
    if (closed) {
      if (!note.trim()) throw new Error("Chloride is over the limit: dilute it more in another run, or say why it is digested all the same.");
      body.note = note.trim();
    }
    if (gate.asks === "temperature") {
      const reading = read(value);
      if (reading.problem) throw new Error("Type what the independent probe reads.");
      const wanted = recipe?.temperature_c ?? words.defaults.temperature;
      if (Math.abs(reading.value - wanted) > words.defaults.tolerance) {
        throw new Error(`The probe reads ${value} °C, not ${plain(wanted)} within ${plain(words.defaults.tolerance)}: wait or adjust the block, then measure again.`);
      }
      body.value = { text: value.trim(), unit: "Cel" };
    }
    await state("gate.confirmed", run.id, body);
    setValue("");
  });
  return html`<form class="card stack" onSubmit=${save} novalidate><h2>${gate.title}</h2>
    <p>${filled(gate.question, recipe, words.defaults)}</p>
    <p class="card wait">▲ ${filled(gate.caution, recipe, words.defaults)}</p>
    ${gate.asks === "temperature" && html`<${NumberField} label="Independent probe" unit="Cel" value=${value} onInput=${setValue} />`}
    ${samples.map(([code, factor]) => html`<div key=${code + factor}><strong>${code}</strong><${ChlorideLine} code=${code} factor=${factor} recipe=${recipe} /></div>`)}
    ${closed && html`<${TextField} label="Why it is digested all the same" value=${note} maxlength="500" onInput=${setNote} hint="Its result carries the letter CX: it may be too high." />`}
    ${gate.asks === "container" && html`<p><strong>${container?.name}</strong>, ${container ? Math.round((100 * container.filled_ml) / container.capacity_ml) : "?"} % full.</p>`}
    <${Problem} words=${problem} />
    <button class="main" disabled=${busy}>Confirm: ${gate.title}</button></form>`;
}

/** The gates that were confirmed, with who and when. */
export function Confirmed({ run, words }) {
  const rows = (words?.gates ?? []).filter((gate) => run.gates[gate.id]);
  if (!rows.length) return null;
  return html`<details><summary>${rows.length} gates confirmed</summary><ul>${rows.map((gate) => html`<li key=${gate.id}>${gate.title}: ${run.gates[gate.id].by}${run.gates[gate.id].value === null ? "" : `, ${run.gates[gate.id].value} °C`}${run.gates[gate.id].note ? `: ${run.gates[gate.id].note}` : ""}</li>`)}</ul></details>`;
}
