// The gates of a run: the server's words, filled from the recipe, confirmed one by one.

import { html, useState } from "../parts/html.js";
import { NumberField, useSaving } from "../parts/fields.js";
import { plain } from "../parts/format.js";
import { Problem } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { one } from "../parts/view.js";

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

/** One gate to confirm. */
export function Gate({ gate, run, words }) {
  const [value, setValue] = useState("");
  const recipe = one("recipe", run.recipe);
  const container = one("container", run.container);
  const { save, problem, busy } = useSaving(async () => {
    const body = { gate: gate.id };
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
    ${gate.asks === "container" && html`<p><strong>${container?.name}</strong>, ${container ? Math.round((100 * container.filled_ml) / container.capacity_ml) : "?"} % full.</p>`}
    <${Problem} words=${problem} />
    <button class="main" disabled=${busy}>Confirm: ${gate.title}</button></form>`;
}

/** The gates that were confirmed, with who and when. */
export function Confirmed({ run, words }) {
  const rows = (words?.gates ?? []).filter((gate) => run.gates[gate.id]);
  if (!rows.length) return null;
  return html`<details><summary>${rows.length} gates confirmed</summary><ul>${rows.map((gate) => html`<li key=${gate.id}>${gate.title}: ${run.gates[gate.id].by}${run.gates[gate.id].value === null ? "" : `, ${run.gates[gate.id].value} °C`}</li>`)}</ul></details>`;
}
