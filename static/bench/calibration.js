// Entering a calibration: standards and their absorbances as they were read.

import { html } from "../parts/html.js";
import { Choice, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Frame, Problem, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";

const row = (cod) => ({ cod, read: "" });
const MOST = 20;
const WEIGHTS = [["equal", "Equal"], ["inverse", "1/x"], ["inverse_square", "1/x²"]];

const readingsOf = (text) => text.trim().split(/[\s;]+/u).filter(Boolean);

/** Levels for a recipe: zero, round numbers of its working range, its top. */
export function levelsOf(recipe) {
  const top = recipe?.working_high ?? 900;
  const under = (shares) => [-1, 0, 1, 2, 3].flatMap((power) => shares.map((share) => Number((share * 10 ** power).toPrecision(2)))).filter((cod) => cod < 0.9 * top);
  return [...new Set([0, ...under([1, 2.5, 5]).slice(-4), ...under([7.5]).slice(-1), top])].sort((a, b) => a - b).map(String);
}

/** Everything that is wrong with the standards as typed, in words. */
function wrongOf(used) {
  const texts = used.flatMap((one_) => [one_.cod, ...readingsOf(one_.read)]);
  const bad = texts.filter((text) => !text.trim() || read(text).problem || read(text).sign !== "=");
  const off = used.flatMap((one_) => readingsOf(one_.read)).filter((text) => Math.abs(read(text).value - 2) > 3);
  const many = used.filter((one_) => readingsOf(one_.read).length > MOST);
  const levels = new Set(used.map((one_) => read(one_.cod).value).filter((cod) => cod >= 0)).size;
  return [
    bad.length && `Not a number: ${bad.map((text) => text || "a level without its COD").join(", ")}.`,
    off.length && `No absorbance between -1 and 5: ${off.join(", ")}.`,
    used.some((one_) => read(one_.cod).value < 0) && "A standard cannot hold less than 0 mg/L.",
    many.length && `More than ${MOST} readings at ${many.map((one_) => one_.cod).join(", ")} mg/L: put the rest on a line of its own.`,
    levels < 5 && !bad.length && `At least five different levels are needed; there ${levels === 1 ? "is" : "are"} ${levels}.`,
  ];
}

/** The form for a calibration. */
export function AddCalibration() {
  const today = day(new Date(), programme()?.zone);
  const recipes = useView(() => all("recipe")).sort((a, b) => b.working_high - a.working_high);
  const photometers = useView(() => all("instrument")).filter((one_) => one_.what === "photometer");
  const [v, set, forget] = useForm("add:calibration", { recipe: "", lot: "", instrument: "", model: "linear", weights: "equal", valid_until: "", rows: [] });
  const recipe = v && (one("recipe", v.recipe) ?? recipes[0]);
  const lots = useView(() => all("lot")).filter((lot) => lot.recipe === recipe?.id && lot.expires_on >= today);
  const lot = (lots.find((one_) => one_.id === v.lot) ?? lots[0])?.id;
  const instrument = (photometers.find((one_) => one_.id === v.instrument) ?? photometers[0])?.id;
  const rows = v.rows.length ? v.rows : levelsOf(recipe).map(row);
  const { save, problem, busy } = useSaving(async () => {
    const used = rows.filter((one_) => one_.read.trim());
    const wrong = [
      (!recipe || !lot || !instrument) && "A recipe, a reagent lot that has not expired and a photometer are needed first.",
      !v.valid_until ? "Say until when the curve holds." : v.valid_until < today && "The curve's last day is past.", ...wrongOf(used),
    ].filter(Boolean);
    if (wrong.length) throw new Error(wrong.join(" "));
    const id = newId();
    await state("calibration.made", id, {
      recipe: recipe.id, lot, instrument, wavelength_nm: String(recipe.wavelength_nm), model: v.model, weights: v.weights, valid_until: v.valid_until, standards: used.map((one_) => ({ cod: one_.cod.trim(), absorbance: readingsOf(one_.read) })),
    });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go(`/bench/curve/${id}`);
  });
  const change = (i, name) => (event) => {
    const text = event.target.value;
    // Two fields may change before the next drawing: each change begins with what the form holds by then.
    set("rows", (held) => (held.length ? held : levelsOf(recipe).map(row)).map((one_, k) => (k === i ? { ...one_, [name]: text } : one_)));
  };
  const choose = (id) => {
    set("recipe", id);
    set("lot", "");
    if (rows.every((one_) => !one_.read.trim())) set("rows", []);
  };
  return html`<${Frame} place="bench" title="Enter a calibration"><form class="stack" onSubmit=${save} novalidate>
    <${Select} label="Recipe" value=${recipe?.id} options=${recipes.map((one_) => [one_.id, one_.name])} onChoose=${choose} />
    <${Select} label="Reagent lot" value=${lot} options=${lots.map((row_) => [row_.id, row_.name])} onChoose=${(id) => set("lot", id)} />
    <${Select} label="Photometer" value=${instrument} options=${photometers.map((one_) => [one_.id, one_.name])} onChoose=${(id) => set("instrument", id)} />
    <${Choice} label="Curve" value=${v.model} options=${["linear", "quadratic"]} onChoose=${(model) => set("model", model)} />
    <${Choice} label="Weights of the standards" value=${v.weights} options=${WEIGHTS} onChoose=${(weights) => set("weights", weights)} />
    <p class="soft small">Begin with a line and equal weights: what the standards say for another choice stands on the curve's page.</p>
    <${TextField} label="Holds until" type="date" value=${v.valid_until} onInput=${(text) => set("valid_until", text)} />
    <section class="card"><h2>Standards</h2><p class="soft">Digested like samples, read at ${plain(recipe?.wavelength_nm)} nm${recipe?.derived?.response === "falls" ? ", where absorbance falls as COD rises: less than the blank is a minus" : ""}; absorbances with the digested blank already subtracted, several of one level set apart by spaces (ten at the lowest and the highest test the scatter, ISO 8466-1). A level without a reading is left out.</p>
      <table><thead><tr><th>COD, mg/L</th><th>Absorbances, AU</th></tr></thead><tbody>${rows.map((one_, i) => html`<tr key=${i}>
        <td class="narrow"><input aria-label="COD of level ${i + 1}" inputmode="decimal" value=${one_.cod} onInput=${change(i, "cod")} /></td>
        <td><input aria-label="Absorbances of level ${i + 1}" inputmode="decimal" autocomplete="off" value=${one_.read} onInput=${change(i, "read")} /></td></tr>`)}</tbody></table>
      <button type="button" onClick=${() => set("rows", [...rows, row("")])}>Another level</button></section>
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save on this tablet"}</button><p><a href="/emergency">Emergency and first aid</a></p></form><//>`;
}
