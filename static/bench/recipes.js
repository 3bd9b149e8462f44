// Recipes: what follows from one, adopting one from a published form, and the sheet that says what to weigh.

import { html, useState } from "../parts/html.js";
import { LongField, NumberField, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { ask } from "../parts/session.js";
import { one, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { capacityOf, doubts } from "./recipe_sums.js";

/** The numbers of a recipe: [name, label]. */
export const RECIPE_FIELDS = [
  ["sample_ml", "Sample, mL"], ["digestion_solution_ml", "Digestion solution, mL"], ["acid_reagent_ml", "Acid reagent, mL"],
  ["dichromate_g_per_l", "Potassium dichromate, g"], ["mercury_sulfate_g_per_l", "Mercury sulfate, g"],
  ["silver_sulfate_g_per_l", "Silver sulfate, g per litre of acid reagent"], ["wavelength_nm", "Wavelength, nm"],
  ["working_low", "Working range from, mg/L in the tube"], ["working_high", "Working range to, mg/L in the tube"],
  ["temperature_c", "Block temperature, °C"], ["minutes", "Digestion, minutes"],
];
const PER_LITRE = ["dichromate_g_per_l", "mercury_sulfate_g_per_l"];
const EMPTY = {
  name: "", source: "", form: "", tube: "", final_ml: "1000", digestion_acid_ml_per_l: "", order: "sample, digestion solution, acid reagent",
  ...Object.fromEntries(RECIPE_FIELDS.map(([name]) => [name, ""])),
};

const rangeOf = (recipe) => `${plain(recipe.working_low)} to ${plain(recipe.working_high)} mg/L in the tube at ${plain(recipe.wavelength_nm)} nm`;

/** A recipe in the list of the stores. */
export function RecipeRow({ recipe }) {
  const warnings = recipe.derived?.warnings.length ?? 0;
  return html`<li><a href="/bench/recipe/${encodeURIComponent(recipe.id)}"><strong>${recipe.name}</strong><span class="under"><span>${rangeOf(recipe)}</span>
    <span>${recipe.derived ? `capacity ${plain(recipe.derived.oxidant_capacity, 1)} mg/L` : "not computed yet"}${warnings ? html` <strong class="above">▲ ${warnings} to read</strong>` : ""}</span></span></a></li>`;
}

function Facts({ recipe, d }) {
  const waste = d.per_tube_mg;
  return html`<dl class="facts"><dt>Oxidant capacity</dt><dd><strong>${plain(d.oxidant_capacity, 1)} mg/L</strong>; readings count up to ${plain(Math.min(recipe.working_high, 0.9 * d.oxidant_capacity))} mg/L</dd>
    <dt>Chloride limit</dt><dd>${plain(d.chloride_limit)} mg/L in what goes into the tube</dd>
    <dt>In each tube</dt><dd>${plain(waste.mercury, 1)} mg mercury, ${plain(waste.chromium, 2)} mg chromium, ${plain(waste.silver, 1)} mg silver, ${plain(d.per_tube_acid_ml, 1)} mL acid reagent; ${plain(d.tube_volume_ml, 1)} mL in all</dd>
    <dt>Colour</dt><dd>${{ rises: "green of chromium(III): absorbance rises with COD", falls: "orange of dichromate: absorbance falls with COD" }[d.response] ?? "read at an unusual wavelength"}</dd>
    <dt>Volumes</dt><dd>${plain(recipe.sample_ml, 2)} mL sample, ${plain(recipe.digestion_solution_ml, 2)} mL digestion solution, ${plain(recipe.acid_reagent_ml, 2)} mL acid reagent${recipe.tube && `, ${recipe.tube} tube`}</dd>
    <dt>Digestion</dt><dd>${plain(recipe.minutes)} min at ${plain(recipe.temperature_c)} °C</dd><dt>Order</dt><dd>${recipe.order.join(", then ")}</dd></dl>`;
}

const SHEET = { digestion_ml: "1000", acid_ml: "1000", stock: "1000", stock_ml: "1000", levels: "0, 50, 100, 250, 500, 750, 900", dichromate: "100", mercury_sulfate: "100", silver_sulfate: "100", phthalate: "100" };
const PURE = [["dichromate", "potassium dichromate"], ["mercury_sulfate", "mercury sulfate"], ["silver_sulfate", "silver sulfate"], ["phthalate", "potassium hydrogen phthalate"]];

function queryOf(v) {
  const wrong = Object.keys(SHEET).filter((name) => name !== "levels" && v[name].trim() && read(v[name]).problem);
  if (wrong.length) throw new Error(`Not a number: ${wrong.map((name) => v[name]).join(", ")}.`);
  const number = (name) => String(read(v[name]).value ?? 0);
  const query = new URLSearchParams({ digestion_ml: number("digestion_ml"), acid_ml: number("acid_ml"), levels: v.levels.split(/[;\s]+|,\s+|,(?=\d*$)/u).filter(Boolean).join(",") });
  for (const [name] of PURE) query.set(name, String((read(v[name]).value ?? 100) / 100));
  if (v.stock.trim()) {
    query.set("stock", number("stock"));
    query.set("stock_ml", number("stock_ml"));
  }
  return query.toString();
}

const amount = (value) => Number(value.toPrecision(5)).toString();

function Sheet({ sheet, paper }) {
  const cautions = [...new Set([...sheet.weigh, ...(sheet.stock ? [sheet.stock] : [])].map((line) => line.caution))];
  return html`<div class="stack" aria-live="polite"><div class="card wait">${cautions.map((words) => html`<p key=${words}>▲ ${words}</p>`)}</div>
    <table><thead><tr><th>Take</th><th>of</th><th>into</th></tr></thead><tbody>${[...sheet.weigh, ...(sheet.stock ? [sheet.stock] : [])].map((line, i) => html`<tr key=${i}><td class="right"><strong>${amount(line.amount)} ${line.unit}</strong></td><td>${line.substance}</td><td>${line.into}</td></tr>`)}</tbody></table>
    ${sheet.standards.length > 0 && html`<h3>Standards</h3><table><thead><tr><th>COD, mg/L</th><th>How, class A glassware</th></tr></thead><tbody>${sheet.standards.map((row, i) => html`<tr key=${i}><td class="right"><strong>${amount(row.cod)}</strong>${Math.abs(row.cod - row.wanted) > 1e-6 ? ` (${amount(row.wanted)} asked)` : ""}</td><td>${row.words}</td></tr>`)}</tbody></table>`}
    <p class="row"><a class="button" href=${paper} target="_blank">Print this sheet</a><a class="button" href="${paper}&paper=letter" target="_blank">on Letter</a></p></div>`;
}

function Preparation({ recipe }) {
  const [v, set] = useForm(`sheet:${recipe.id}`, SHEET);
  const [sheet, setSheet] = useState(null);
  const at = `/api/papers/preparation/${encodeURIComponent(recipe.id)}`;
  const { save, problem, busy } = useSaving(async () => {
    setSheet(null);
    const query = queryOf(v);
    setSheet({ found: await ask("GET", `${at}?${query}`), paper: `${at}.pdf?${query}` });
  });
  const number = (name, label, unit) => html`<${NumberField} label=${label} unit=${unit} value=${v[name]} onInput=${(text) => set(name, text)} />`;
  return html`<form class="card stack" onSubmit=${save} novalidate><h2>Prepare reagents and standards</h2>
    <div class="two">${number("digestion_ml", "Digestion solution wanted", "mL")}${number("acid_ml", "Acid reagent wanted", "mL")}${number("stock", "Stock of phthalate", "mg/L")}${number("stock_ml", "Volume of the stock", "mL")}</div>
    <${TextField} label="Standards, mg/L" value=${v.levels} onInput=${(text) => set("levels", text)} hint="set apart by spaces" />
    <details><summary>Purity on the bottles</summary><div class="two">${PURE.map(([name, label]) => number(name, label, "%"))}</div></details>
    ${recipe.digestion_acid_ml_per_l === null && html`<p class="soft">How much acid the digestion solution itself takes is not recorded for this recipe: see its source.</p>`}
    <${Problem} words=${problem} /><button disabled=${busy}>${busy ? "Working it out…" : "What to weigh and measure"}</button>
    <p class="soft small">Worked out by the server; without it the last printed sheet is the one to follow.</p>${sheet && html`<${Sheet} sheet=${sheet.found} paper=${sheet.paper} />`}</form>`;
}

/** One recipe. */
export function RecipePage({ id }) {
  const recipe = useView(() => one("recipe", id));
  if (!recipe) return html`<${Frame} place="bench" title="Recipe"><${Empty} title="This recipe is not on this tablet"><a href="/bench/stores">Stores</a><//><//>`;
  return html`<${Frame} place="bench" title=${recipe.name}><div class="stack"><p class="soft">${recipe.source}</p>${recipe.local && html`<p><${Where} about=${id} /></p>`}
    <section class="card stack"><h2>What follows from it</h2>${recipe.derived ? html`<${Facts} recipe=${recipe} d=${recipe.derived} />${recipe.derived.warnings.map((words) => html`<p class="above" key=${words}>▲ ${words}</p>`)}` : html`<p class="soft">It is computed when the server has this recipe.</p>`}
      <p>Working range: ${rangeOf(recipe)}.</p></section>
    ${!recipe.local && html`<${Preparation} recipe=${recipe} />`}<p><a href="/bench/stores">Stores</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}

const value = (v, name) => read(v[name] ?? "").value;

/** A typed amount for a final volume, as grams per litre; as typed when the volume is a litre. */
function perLitre(v, name) {
  const final = value(v, "final_ml");
  return final === 1000 ? v[name].trim() : String(Number(((value(v, name) * 1000) / final).toPrecision(12)));
}

function numbersOf(v) {
  return Object.fromEntries(RECIPE_FIELDS.map(([name]) => [name, PER_LITRE.includes(name) ? perLitre(v, name) : v[name].trim()]));
}

function problemsOf(v) {
  const missing = [["name", "name"], ["source", "source"], ...RECIPE_FIELDS].filter(([name]) => !v[name].trim()).map(([, label]) => label.toLowerCase());
  const wrong = [...RECIPE_FIELDS, ["final_ml", "final volume"]].filter(([name]) => v[name].trim() && read(v[name]).problem).map(([, label]) => label);
  if (!(value(v, "final_ml") > 0)) wrong.push("the volume that the digestion solution is made up to");
  return [missing.length && `Still missing: ${missing.join(", ")}.`, wrong.length && `Not a number: ${wrong.join(", ")}.`].filter(Boolean).join(" ");
}

function Preview({ v }) {
  const numbers = Object.fromEntries(RECIPE_FIELDS.map(([name]) => [name, PER_LITRE.includes(name) ? (value(v, name) * 1000) / value(v, "final_ml") : value(v, name)]));
  const capacity = capacityOf(numbers);
  if (!Number.isFinite(capacity)) return html`<p class="soft">Capacity and limits stand here once the amounts are typed.</p>`;
  return html`<p role="status">Oxidant capacity <strong>${plain(capacity, 1)} mg/L</strong> in the tube.</p>${doubts(numbers).map((words) => html`<p class="above" key=${words}>▲ ${words}</p>`)}`;
}

/** The form that adopts a recipe. */
export function AddRecipe() {
  const words = useWords();
  const [v, set, forget] = useForm("add:recipe", EMPTY);
  const saving = useSaving(async () => {
    const problem = problemsOf(v);
    if (problem) throw new Error(problem);
    const order = v.order.split(",").map((text) => text.trim()).filter(Boolean);
    const stated = value(v, "final_ml") === 1000 ? "" : `${v.dichromate_g_per_l} g K2Cr2O7 and ${v.mercury_sulfate_g_per_l} g HgSO4 in ${v.final_ml} mL`;
    await state("recipe.adopted", newId(), { name: v.name.trim(), source: v.source.trim(), order, ...numbersOf(v), digestion_acid_ml_per_l: v.digestion_acid_ml_per_l.trim() || null, tube: v.tube, stated });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go("/bench/stores");
  });
  const forms = words?.recipes ?? [];
  const take = (name) => {
    set("form", name);
    set("final_ml", "1000");
    Object.entries(forms.find((form) => form.name === name) ?? {}).forEach(([key, text]) => set(key, text));
  };
  const fit = (name) => {
    set("tube", name);
    const tube = words.tubes[name];
    if (!tube) return;
    const volumes = ["sample_ml", "digestion_solution_ml", "acid_reagent_ml"];
    const own = volumes.map((field) => value(v, field));
    const kept = own.every((ml) => ml > 0);
    volumes.forEach((field, i) => set(field, String(kept ? Number(((own[i] * tube[0]) / own[0]).toPrecision(12)) : tube[i])));
  };
  const line = (name, label, hint) => html`<${TextField} key=${name} label=${label} inputmode="decimal" value=${v[name]} onInput=${(text) => set(name, text)} hint=${hint} />`;
  const labels = new Map(RECIPE_FIELDS);
  return html`<${Frame} place="bench" title="Adopt a recipe"><form class="stack" onSubmit=${saving.save} novalidate>
    <${Select} label="Begin from a published form" value=${v.form} options=${[["", "none: type every number"], ...forms.map((form) => [form.name, form.name])]} onChoose=${take}
      hint="What the method does not state stays blank. Check the amounts against the method's own text and your lot." />
    <${TextField} label="Name" value=${v.name} onInput=${(text) => set("name", text)} /><${LongField} label="Source" value=${v.source} onInput=${(text) => set("source", text)} />
    <section class="card stack"><h2>The tube</h2><${Select} label="Tube" value=${v.tube} options=${[["", "another one"], ...Object.keys(words?.tubes ?? {}).map((name) => [name, name])]} onChoose=${fit} hint="keeps the ratios of the volumes, and so capacity and limits" />
      ${["sample_ml", "digestion_solution_ml", "acid_reagent_ml"].map((name) => line(name, labels.get(name)))}</section>
    <section class="card stack"><h2>The reagents</h2>${line("final_ml", "Digestion solution made up to, mL", "the grams below are for this volume; some methods print them for 500 mL")}
      ${PER_LITRE.map((name) => line(name, `${labels.get(name)} in that volume`))}${line("digestion_acid_ml_per_l", "Sulfuric acid in a litre of digestion solution, mL", "for the preparation sheet; may stay empty")}${line("silver_sulfate_g_per_l", labels.get("silver_sulfate_g_per_l"))}</section>
    <section class="card stack"><h2>Reading and range</h2>${["wavelength_nm", "working_low", "working_high", "temperature_c", "minutes"].map((name) => line(name, labels.get(name)))}<${Preview} v=${v} /></section>
    <${TextField} label="Order of addition, separated by commas" value=${v.order} onInput=${(text) => set("order", text)} hint="texts differ; it is shown at the gate from here" />
    <${Problem} words=${saving.problem} /><button class="main" disabled=${saving.busy}>${saving.busy ? "Saving…" : "Save on this tablet"}</button><p><a href="/bench/stores">Stores</a> · <a href="/emergency">Emergency and first aid</a></p></form><//>`;
}
