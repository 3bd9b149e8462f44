// Entering a calibration: standards and their absorbances as they were read.

import { html } from "../parts/html.js";
import { Choice, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day } from "../parts/format.js";
import { Frame, Problem, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";

const LEVELS = { high: ["0", "50", "100", "250", "500", "750", "900"], low: ["0", "10", "20", "40", "60", "80", "90"] };
const row = (cod) => ({ cod, read: "" });
const WEIGHTS = [["equal", "Equal"], ["inverse", "1/x"], ["inverse_square", "1/x²"]];

const readingsOf = (text) => text.trim().split(/[\s;]+/u).filter(Boolean);

function standardsOf(rows) {
  const used = rows.filter((one_) => one_.read.trim());
  const wrong = used.flatMap((one_) => [one_.cod, ...readingsOf(one_.read)].filter((text) => !text.trim() || read(text).problem));
  if (wrong.length) throw new Error(`Not a number: ${wrong.map((text) => text || "a level without its COD").join(", ")}.`);
  if (used.length < 5) throw new Error("At least five levels are needed.");
  return used.map((one_) => ({ cod: one_.cod.trim(), absorbance: readingsOf(one_.read) }));
}

/** The form for a calibration. */
export function AddCalibration() {
  const today = day(new Date(), programme()?.zone);
  const recipes = useView(() => all("recipe")).sort((a, b) => b.working_high - a.working_high);
  const photometers = useView(() => all("instrument")).filter((one_) => one_.what === "photometer");
  const [v, set, forget] = useForm("add:calibration", { recipe: "", lot: "", instrument: "", model: "linear", weights: "equal", valid_until: "", rows: LEVELS.high.map(row) });
  const recipe = v && (one("recipe", v.recipe) ?? recipes[0]);
  const lots = useView(() => all("lot")).filter((lot) => lot.recipe === recipe?.id && lot.expires_on >= today);
  const { save, problem, busy } = useSaving(async () => {
    const lot = v.lot || lots[0]?.id;
    const instrument = v.instrument || photometers[0]?.id;
    if (!recipe || !lot || !instrument) throw new Error("A recipe, a reagent lot and a photometer are needed first.");
    if (!v.valid_until) throw new Error("Say until when the curve holds.");
    const id = newId();
    await state("calibration.made", id, {
      recipe: recipe.id, lot, instrument, wavelength_nm: String(recipe.wavelength_nm), model: v.model, weights: v.weights, valid_until: v.valid_until, standards: standardsOf(v.rows),
    });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go(`/bench/curve/${id}`);
  });
  if (!v) return html`<${Frame} place="bench" title="Enter a calibration"><//>`;
  const change = (i, name) => (event) => set("rows", v.rows.map((one_, k) => (k === i ? { ...one_, [name]: event.target.value } : one_)));
  const choose = (id) => {
    set("recipe", id);
    set("lot", "");
    const falls = one("recipe", id)?.derived?.response === "falls";
    if (v.rows.every((one_) => !one_.read.trim())) set("rows", LEVELS[falls ? "low" : "high"].map(row));
  };
  return html`<${Frame} place="bench" title="Enter a calibration"><form class="stack" onSubmit=${save} novalidate>
    <${Select} label="Recipe" value=${recipe?.id} options=${recipes.map((one_) => [one_.id, one_.name])} onChoose=${choose} />
    <${Select} label="Reagent lot" value=${v.lot || lots[0]?.id} options=${lots.map((one_) => [one_.id, one_.name])} onChoose=${(id) => set("lot", id)} />
    <${Select} label="Photometer" value=${v.instrument || photometers[0]?.id} options=${photometers.map((one_) => [one_.id, one_.name])} onChoose=${(id) => set("instrument", id)} />
    <${Choice} label="Curve" value=${v.model} options=${["linear", "quadratic"]} onChoose=${(model) => set("model", model)} />
    <${Choice} label="Weights of the standards" value=${v.weights} options=${WEIGHTS} onChoose=${(weights) => set("weights", weights)} />
    <p class="soft small">Begin with a line and equal weights: what the standards say for another choice stands on the curve's page.</p>
    <${TextField} label="Holds until" type="date" value=${v.valid_until} onInput=${(text) => set("valid_until", text)} />
    <section class="card"><h2>Standards</h2><p class="soft">Digested like samples; absorbances with the digested blank already subtracted, several of one level set apart by spaces (ten at the lowest and the highest test the scatter, ISO 8466-1). A level without a reading is left out.</p>
      <table><thead><tr><th>COD, mg/L</th><th>Absorbances, AU</th></tr></thead><tbody>${v.rows.map((one_, i) => html`<tr key=${i}>
        <td class="narrow"><input aria-label="COD of level ${i + 1}" inputmode="decimal" value=${one_.cod} onInput=${change(i, "cod")} /></td>
        <td><input aria-label="Absorbances of level ${i + 1}" inputmode="decimal" autocomplete="off" value=${one_.read} onInput=${change(i, "read")} /></td></tr>`)}</tbody></table>
      <button type="button" onClick=${() => set("rows", [...v.rows, row("")])}>Another level</button></section>
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save on this tablet"}</button><p><a href="/emergency">Emergency and first aid</a></p></form><//>`;
}
