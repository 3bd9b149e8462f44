// Entering a calibration: standards and their absorbances as they were read.

import { html } from "../parts/html.js";
import { Choice, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day } from "../parts/format.js";
import { Frame, Problem, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";

const LEVELS = ["0", "50", "100", "250", "500", "750", "900"];
const row = (cod) => ({ cod, a: "", b: "" });

function standardsOf(rows) {
  const used = rows.filter((one_) => one_.a.trim() || one_.b.trim());
  const wrong = used.flatMap((one_) => [one_.cod, one_.a, one_.b].filter((text) => text.trim() && read(text).problem));
  if (wrong.length) throw new Error(`Not a number: ${wrong.join(", ")}.`);
  if (used.length < 5) throw new Error("At least five levels are needed.");
  return used.map((one_) => ({ cod: one_.cod.trim(), absorbance: [one_.a, one_.b].map((text) => text.trim()).filter(Boolean) }));
}

/** The form for a calibration. */
export function AddCalibration() {
  const today = day(new Date(), programme()?.zone);
  const recipes = useView(() => all("recipe")).sort((a, b) => b.working_high - a.working_high);
  const photometers = useView(() => all("instrument")).filter((one_) => one_.what === "photometer");
  const [v, set, forget] = useForm("add:calibration", { recipe: "", lot: "", instrument: "", model: "linear", valid_until: "", rows: LEVELS.map(row) });
  const recipe = v && (one("recipe", v.recipe) ?? recipes[0]);
  const lots = useView(() => all("lot")).filter((lot) => lot.recipe === recipe?.id && lot.expires_on >= today);
  const { save, problem, busy } = useSaving(async () => {
    const lot = v.lot || lots[0]?.id;
    const instrument = v.instrument || photometers[0]?.id;
    if (!recipe || !lot || !instrument) throw new Error("A recipe, a reagent lot and a photometer are needed first.");
    if (!v.valid_until) throw new Error("Say until when the curve holds.");
    await state("calibration.made", newId(), {
      recipe: recipe.id, lot, instrument, wavelength_nm: String(recipe.wavelength_nm), model: v.model, valid_until: v.valid_until, standards: standardsOf(v.rows),
    });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go("/bench/stores");
  });
  if (!v) return html`<${Frame} place="bench" title="Enter a calibration"><//>`;
  const change = (i, name) => (event) => set("rows", v.rows.map((one_, k) => (k === i ? { ...one_, [name]: event.target.value } : one_)));
  return html`<${Frame} place="bench" title="Enter a calibration"><form class="stack" onSubmit=${save} novalidate>
    <${Select} label="Recipe" value=${recipe?.id} options=${recipes.map((one_) => [one_.id, one_.name])} onChoose=${(id) => set("recipe", id)} />
    <${Select} label="Reagent lot" value=${v.lot || lots[0]?.id} options=${lots.map((one_) => [one_.id, one_.name])} onChoose=${(id) => set("lot", id)} />
    <${Select} label="Photometer" value=${v.instrument || photometers[0]?.id} options=${photometers.map((one_) => [one_.id, one_.name])} onChoose=${(id) => set("instrument", id)} />
    <${Choice} label="Curve" value=${v.model} options=${["linear", "quadratic"]} onChoose=${(model) => set("model", model)} />
    <${TextField} label="Holds until" type="date" value=${v.valid_until} onInput=${(text) => set("valid_until", text)} />
    <section class="card"><h2>Standards</h2><p class="soft">Absorbances with the digested blank already subtracted. A level without a reading is left out.</p>
      <table><thead><tr><th>COD, mg/L</th><th>first, AU</th><th>second, AU</th></tr></thead><tbody>${v.rows.map((one_, i) => html`<tr key=${i}>
        ${["cod", "a", "b"].map((name, k) => html`<td key=${name}><input aria-label="${["COD", "First absorbance", "Second absorbance"][k]} of level ${i + 1}" inputmode="decimal" value=${one_[name]} onInput=${change(i, name)} /></td>`)}</tr>`)}</tbody></table>
      <button type="button" onClick=${() => set("rows", [...v.rows, row("")])}>Another level</button></section>
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save on this tablet"}</button><p><a href="/emergency">Emergency and first aid</a></p></form><//>`;
}
