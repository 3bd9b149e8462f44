// The stores: recipes with what follows from them, lots, instruments, containers, curves.

import { html } from "../parts/html.js";
import { Choice, LongField, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { CurveRow } from "./curve_page.js";
import { AddRecipe, RecipeRow } from "./recipes.js";

function Rows({ title, rows, words, what, to }) {
  return html`<h2>${title}</h2>${rows.length ? html`<ul class="plain list">${rows.map((row) => html`<li class="item" key=${row.id}>${to ? html`<a class="inline" href=${to(row)}><strong>${row.name}</strong></a>` : html`<strong>${row.name}</strong>`}<div class="soft">${words(row)}</div>${what === "container" && !row.local && html`<a href="/api/papers/container/${encodeURIComponent(row.id)}.pdf" target="_blank">Waste label to print</a>`}${what === "lot" && !row.local && html`<a href="/api/papers/lot/${encodeURIComponent(row.id)}.pdf" target="_blank">Reagent labels to print</a>`}</li>`)}</ul>` : html`<${Empty} title="None yet">Add the first one.<//>`}
    <a class="button" href="/bench/stores/${what}">Add</a>`;
}

const lotWords = (row) => `${one("recipe", row.recipe)?.name}, ${row.origin} ${row.made_on}, expires ${row.expires_on}${row.standardised_on ? `; standardised ${row.standardised_on}${row.standardised ? `: ${row.standardised}` : ""}` : "; not standardised"}`;

const filled = (row) => `${plain(row.filled_ml)} of ${plain(row.capacity_ml)} mL (${Math.round((100 * row.filled_ml) / row.capacity_ml)} %): ${plain(row.mercury_mg / 1000, 2)} g mercury, ${plain(row.chromium_mg / 1000, 2)} g chromium, ${plain(row.silver_mg / 1000, 2)} g silver`;

/** The stores. */
export function Stores() {
  const recipes = useView(() => all("recipe"));
  const curves = useView(() => all("calibration")).reverse();
  return html`<${Frame} place="bench" title="Stores"><div class="stack">
    <p><a class="button" href="/api/papers/labels.pdf" target="_blank">Bottle labels to print</a> <span class="soft small">a sheet of codes that are free</span></p>
    <h2>Recipes</h2>${recipes.length ? html`<ul class="plain list">${recipes.map((recipe) => html`<${RecipeRow} key=${recipe.id} recipe=${recipe} />`)}</ul>` : html`<${Empty} title="No recipe yet">Everything a tube can do follows from it.<//>`}
    <a class="button" href="/bench/stores/recipe">Adopt a recipe</a>
    <${Rows} title="Reagent lots" what="lot" rows=${useView(() => all("lot"))} words=${lotWords} />
    <${Rows} title="Instruments" what="instrument" to=${(row) => `/bench/instrument/${encodeURIComponent(row.id)}`} rows=${useView(() => all("instrument"))} words=${(row) => `${row.what}${row.positions ? `, ${row.positions} positions` : ""}`} />
    <h2>Curves</h2>${curves.length ? html`<ul class="plain list">${curves.map((curve) => html`<${CurveRow} key=${curve.id} curve=${curve} />`)}</ul>` : html`<${Empty} title="No curve yet">A run needs one: standards of its recipe, lot and photometer.<//>`}<a class="button" href="/bench/stores/calibration">Enter a calibration</a>
    <${Rows} title="Waste containers" what="container" rows=${useView(() => all("container"))} words=${filled} />
    <p><a href="/bench">Back to what waits</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}

function need(v, fields) {
  const missing = fields.filter(([name]) => !String(v[name] ?? "").trim()).map(([, label]) => label.toLowerCase());
  if (missing.length) throw new Error(`Still missing: ${missing.join(", ")}.`);
}

function useAdding(key, blank, make) {
  const [v, set, forget] = useForm(`add:${key}`, blank);
  const saving = useSaving(async () => {
    const [kind, body] = make(v);
    await state(kind, newId(), body);
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go("/bench/stores");
  });
  return { v, set, saving };
}

function Shell({ title, saving, children }) {
  return html`<${Frame} place="bench" title=${title}><form class="stack" onSubmit=${saving.save} novalidate>${children}
    <${Problem} words=${saving.problem} /><button class="main" disabled=${saving.busy}>${saving.busy ? "Saving…" : "Save on this tablet"}</button><p><a href="/bench/stores">Stores</a> · <a href="/emergency">Emergency and first aid</a></p></form><//>`;
}

function AddLot() {
  const recipes = useView(() => all("recipe"));
  const today = day(new Date(), programme()?.zone);
  const { v, set, saving } = useAdding("lot", { recipe: "", origin: "made", name: "", made_on: today, expires_on: "", standardised_on: "", standardised: "" }, (given) => {
    need(given, [["name", "Name"], ["made_on", "Made on"], ["expires_on", "Expires on"]]);
    return ["lot.made", { ...given, recipe: given.recipe || recipes[0]?.id, standardised_on: given.standardised_on || null }];
  });
  return html`<${Shell} title="A reagent lot" saving=${saving}>
    <${Select} label="Recipe" value=${v.recipe || recipes[0]?.id} options=${recipes.map((row) => [row.id, row.name])} onChoose=${(id) => set("recipe", id)} />
    <${Choice} label="The lot was" value=${v.origin} options=${["made", "bought"]} onChoose=${(origin) => set("origin", origin)} />
    <${TextField} label="Name on the bottle" value=${v.name} onInput=${(text) => set("name", text)} />
    <${TextField} label="Made on" type="date" value=${v.made_on} onInput=${(text) => set("made_on", text)} />
    <${TextField} label="Expires on" type="date" value=${v.expires_on} onInput=${(text) => set("expires_on", text)} />
    <${TextField} label="Standardised on" type="date" value=${v.standardised_on} onInput=${(text) => set("standardised_on", text)} hint="may stay empty" />
    <${TextField} label="With what, and what came out" value=${v.standardised} maxlength="300" onInput=${(text) => set("standardised", text)} /><//>`;
}

function AddInstrument() {
  const { v, set, saving } = useAdding("instrument", { name: "", what: "photometer", positions: "25" }, (given) => {
    need(given, [["name", "Name"]]);
    const body = { name: given.name.trim(), what: given.what };
    return ["instrument.added", given.what === "block" ? { ...body, positions: Math.round(read(given.positions).value) } : body];
  });
  return html`<${Shell} title="An instrument" saving=${saving}>
    <${Choice} label="Kind" value=${v.what} options=${["photometer", "block", "pipette", "meter"]} onChoose=${(what) => set("what", what)} />
    <${TextField} label="Name" value=${v.name} onInput=${(text) => set("name", text)} />
    ${v.what === "block" && html`<${TextField} label="Positions" inputmode="numeric" value=${v.positions} onInput=${(text) => set("positions", text)} />`}<//>`;
}

function AddContainer() {
  const { v, set, saving } = useAdding("container", { name: "", capacity_ml: "5000" }, (given) => {
    need(given, [["name", "Name"], ["capacity_ml", "Capacity"]]);
    if (read(given.capacity_ml).problem) throw new Error(read(given.capacity_ml).problem);
    return ["container.opened", given];
  });
  return html`<${Shell} title="A waste container" saving=${saving}>
    <p class="card wait">Acid COD digest only: acid-resistant, closed, labelled with its contents and hazards. Keep bases, cyanide, sulfide, metals and organics away. State and local rules decide on labels, amounts and days.</p>
    <${TextField} label="Name" value=${v.name} onInput=${(text) => set("name", text)} />
    <${TextField} label="Capacity, mL" inputmode="decimal" value=${v.capacity_ml} onInput=${(text) => set("capacity_ml", text)} /><//>`;
}

const ADD = { lot: AddLot, instrument: AddInstrument, container: AddContainer, recipe: AddRecipe };

/** The form for something new. */
export function AddThing({ what }) {
  return ADD[what] ? html`<${ADD[what]} />` : html`<${Stores} />`;
}
