// Planning a run: which bottles, how diluted, and a rack that fills itself.

import { html } from "../parts/html.js";
import { Check, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day, dilution, plain } from "../parts/format.js";
import { Empty, Frame, Problem, go, say } from "../parts/frame.js";
import { Hold } from "../parts/hold.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { stepWords } from "../parts/glassware.js";
import { curveDoubt } from "./curve_page.js";
import { dilutionOf } from "./dilutions.js";
import { waitingBottles } from "./home.js";
import { CONTROLS, Controls, Places, controlsOf, lackingOf, swapped, withoutOf } from "./controls.js";
import { ChlorideLine, gateOf } from "./measure.js";
import { Outlook, firstFactor } from "./outlook.js";

const BLANKS = 3;
const BRACKET = 10; // verification after at most ten analyses and at the end: EPA 410.4 rev 2.0, 9.3.4
const BATCH = 20; // samples, its controls not counted: 40 CFR 136.7, common practice
const POSITIONS = 25;

const confirmed = (curve) => !programme()?.settings?.second_source_required || !curveDoubt(curve);
const usable = (curve) => confirmed(curve) && !curve.fitted?.error && !curve.fitted?.findings?.some((one_) => one_.severity === "stop");

/** The curves that a run may be read with: of the recipe, and not past their date. */
export function curvesFor(recipe, today) {
  return all("calibration").filter((curve) => curve.recipe === recipe && curve.valid_until >= today && usable(curve));
}

/** The level of the verification: the middle of the working range, as a round standard. */
export const checkLevel = (recipe) => (recipe.working_high >= 500 ? "500" : String(Math.round(recipe.working_high / 2)));

/** The dilution that a bottle would be digested at, or what is wrong with it. */
const dilutionFor = (bottle, factor) => dilutionOf(factor, bottle.sampled?.plan ?? null, bottle.again?.why ?? "chosen at the bench", { solids: bottle.sampled?.solids, volume_ml: bottle.volume_ml });

/** The tubes of a run, placed by themselves: blanks, verifications around every ten, and in each batch of 20 samples a control, a duplicate, a spike. */
export function tubesOf(recipe, bottles, factors, replicates, controls = {}) {
  const tubes = Array.from({ length: BLANKS }, () => ({ role: "blank" }));
  let since = 0;
  const verify = () => { tubes.push({ role: "verification", expected: checkLevel(recipe) }); since = 0; };
  const add = (tube, count = 1) => {
    if (since && since + count > BRACKET) verify();
    for (let i = 0; i < count; i += 1) tubes.push(tube);
    since += count;
  };
  verify();
  bottles.forEach((bottle, i) => {
    const batch = bottles.slice(i - (i % BATCH), i - (i % BATCH) + BATCH);
    const chosen = (code) => bottle === (batch.find((one_) => one_.code === code) ?? batch[0]);
    const of = { bottle: bottle.code, dilution: dilutionFor(bottle, factors[bottle.code]) };
    if (batch[0] === bottle && controls.control) add({ role: "control", ...controls.control });
    add({ role: "sample", ...of }, replicates);
    if (controls.duplicate && chosen(controls.duplicate.bottle)) add({ role: "duplicate", ...of });
    if (controls.spike && chosen(controls.spike.bottle)) add({ role: "spike", ...of, spike: controls.spike.made });
  });
  if (since) verify();
  return tubes.map((tube, i) => ({ position: i + 1, ...tube }));
}

function Bottle({ bottle, v, set, factors, recipe }) {
  const picked = v.picked.includes(bottle.code);
  const factor = v.factors[bottle.code] ?? firstFactor(bottle, recipe);
  const name = bottle.place ? `${bottle.place.discharger_name}, ${bottle.place.name}` : "sample not here yet";
  const options = [...new Set([...factors, factor])].sort((a, b) => a - b).map((f) => [String(f), dilution(f)]);
  const { steps, problem } = dilutionFor(bottle, factor);
  return html`<div class="item stack">
    <${Check} label=${html`<strong>${bottle.code}</strong> ${name} (${bottle.again?.why ?? bottle.state})`} checked=${picked}
      onChange=${(on) => set("picked", on ? [...v.picked, bottle.code] : v.picked.filter((code) => code !== bottle.code))} />
    <${Hold} sample=${bottle.sampled} />
    ${picked && html`<${Select} label="Dilution of ${bottle.code}" value=${String(factor)} options=${options} onChoose=${(text) => set("factors", { ...v.factors, [bottle.code]: Number(text) })}
      hint=${`${problem ? `▲ ${problem} ` : ""}${steps?.length ? `${stepWords(steps)}. ` : ""}${bottle.sampled?.plan ? `At the manhole: ${dilution(bottle.sampled.plan.dilution_factor)}, ${bottle.sampled.plan.reason}` : "Nothing was planned at the manhole."}`} />
      <${TextField} label="Sample left in ${bottle.code}, mL" inputmode="decimal" value=${v.volumes[bottle.code] ?? ""} onInput=${(text) => set("volumes", { ...v.volumes, [bottle.code]: text })} hint="Empty: not judged." />
      <${Outlook} bottle=${bottle} factor=${factor} recipe=${recipe} />
      <${ChlorideLine} code=${bottle.code} factor=${factor} recipe=${recipe} />`}
  </div>`;
}

function options(rows, name = "name") {
  return [["", "choose"], ...rows.map((row) => [row.id, row[name]])];
}

const BLANK = { name: "", recipe: "", lot: "", instrument: "", block: "", calibration: "", container: "", picked: [], factors: {}, volumes: {}, qc: {}, swaps: [] };

/** The only one of its kind is chosen by itself. */
const chosen = (given, rows) => given || (rows.length === 1 ? rows[0].id : "");

function useStores(v) {
  const zone = programme()?.zone;
  const today = day(new Date(), zone);
  const recipes = useView(() => all("recipe")).sort((a, b) => b.working_high - a.working_high);
  const recipe = recipes.find((row) => row.id === v.recipe) ?? recipes[0];
  const lots = useView(() => all("lot")).filter((lot) => lot.recipe === recipe?.id && lot.expires_on >= today);
  const curves = useView(() => (recipe ? curvesFor(recipe.id, today) : []));
  const curve = curves.find((row) => row.id === chosen(v.calibration, curves));
  const blocks = useView(() => all("instrument")).filter((row) => row.what === "block");
  const containers = useView(() => all("container")).filter((row) => row.filled_ml < row.capacity_ml && (row.state ?? "in use") === "in use");
  return { recipes, recipe, lots, curves, curve, blocks, containers, block: chosen(v.block, blocks), container: chosen(v.container, containers) };
}

/** The form for a run. */
export function Plan() {
  const [v, set, forget] = useForm("plan", BLANK);
  return html`<${PlanForm} v=${v} set=${set} forget=${forget} />`;
}

function PlanForm({ v, set, forget }) {
  const words = useWords();
  const settings = useView(programme)?.settings;
  const bottles = useView(waitingBottles).map((bottle) => ({ ...bottle, volume_ml: read(v.volumes[bottle.code] ?? "").value ?? null }));
  const stores = useStores(v);
  const { recipe, curve } = stores;
  const picked = bottles.filter((bottle) => v.picked.includes(bottle.code));
  const factors = Object.fromEntries(picked.map((bottle) => [bottle.code, v.factors[bottle.code] ?? firstFactor(bottle, recipe)]));
  const controls = controlsOf(v.qc, recipe);
  const placed = recipe ? tubesOf(recipe, picked, factors, settings?.replicates ?? 3, controls) : [];
  const tubes = swapped(placed, v.swaps);
  const checks = tubes.filter((tube) => tube.role === "verification").length;
  const room = (stores.block && one("instrument", stores.block)?.positions) || POSITIONS;
  const { save, problem, busy } = useSaving(async () => {
    if (!picked.length) throw new Error("Choose at least one bottle.");
    const wrong = picked.map((bottle) => [bottle.code, dilutionFor(bottle, factors[bottle.code]).problem]).filter(([, problem]) => problem);
    picked.map(({ code }) => [code, gateOf(code, factors[code], recipe)]).filter(([, gate]) => gate.verdict === "closed").forEach(([code, gate]) => wrong.push([code, gate.words]));
    if (wrong.length) throw new Error(wrong.map(([code, problem]) => `${code}: ${problem}`).join(" "));
    const lacking = lackingOf(v.qc, controls);
    if (lacking) throw new Error(lacking);
    if (tubes.length > room) throw new Error(`${tubes.length} tubes do not fit: the block has ${room} positions.`);
    if (!curve) throw new Error("A curve of this recipe is needed: make one under Stores.");
    if (!stores.block || !stores.container) throw new Error("Choose the block and the waste container.");
    const id = newId();
    await state("run.planned", id, {
      name: v.name.trim() || `Run of ${day(new Date(), programme()?.zone)}`, recipe: recipe.id, lot: curve.lot, instrument: curve.instrument,
      block: stores.block, calibration: curve.id, container: stores.container, tubes, without: withoutOf(v.qc),
    });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go(`/bench/run/${id}`);
  });
  return html`<${Frame} place="bench" title="Plan a run">
    <form class="stack" onSubmit=${save}>
      ${!recipe ? html`<${Empty} title="No recipe yet">Adopt one under <a href="/bench/stores">Stores</a>.<//>` : html`
      <section class="card stack"><h2>Bottles</h2>
        ${bottles.length ? bottles.map((bottle) => html`<${Bottle} key=${bottle.code} bottle=${bottle} v=${v} set=${set} factors=${settings?.dilutions ?? [1]} recipe=${recipe} />`)
          : html`<${Empty} title="No bottle waits"><a href="/bench/receive">Receive one</a> first.<//>`}</section>
      <section class="card stack"><h2>With</h2>
        <${TextField} label="Name of the run" value=${v.name} onInput=${(name) => set("name", name)} placeholder=${`Run of ${day(new Date(), programme()?.zone)}`} />
        <${Select} label="Recipe" value=${recipe.id} options=${stores.recipes.map((row) => [row.id, row.name])} onChoose=${(id) => set("recipe", id)} />
        <${Select} label="Calibration" value=${curve?.id ?? ""} options=${[["", "choose"], ...stores.curves.map((row) => [row.id, `${one("lot", row.lot)?.name}, ${one("instrument", row.instrument)?.name}, until ${row.valid_until}${curveDoubt(row) ? `; ${curveDoubt(row)}` : ""}`])]} onChoose=${(id) => set("calibration", id)} hint="it fixes the reagent lot and the photometer" />
        <${Select} label="Block" value=${stores.block} options=${options(stores.blocks)} onChoose=${(id) => set("block", id)} />
        <${Select} label="Waste container" value=${stores.container} options=${options(stores.containers)} onChoose=${(id) => set("container", id)} /></section>
      <${Controls} qc=${v.qc} recipe=${recipe} picked=${picked} onChange=${(qc) => set("qc", qc)} />
      <section class="card stack"><h2>The rack</h2>
        <p>${tubes.length} of ${room} positions: ${BLANKS} blanks, ${checks} ${checks === 1 ? "verification" : "verifications"} of ${checkLevel(recipe)} mg/L, ${picked.length} ${picked.length === 1 ? "sample" : "samples"} in ${settings?.replicates ?? 3} tubes each${CONTROLS.filter(([role]) => controls[role] && picked.length).map(([role, words]) => `, a ${words.toLowerCase()}`).join("")}.</p>
        <${Places} tubes=${tubes} swaps=${v.swaps} onSwap=${(swaps) => set("swaps", swaps)} />
        <p class="soft">${plain(tubes.length * recipe.digestion_solution_ml, 1)} mL digestion solution and ${plain(tubes.length * recipe.acid_reagent_ml, 1)} mL acid reagent; order: ${recipe.order.join(", then ")}.</p></section>
      ${words && html`<section class="card wait"><h2>Reminders</h2><ul>${words.reminders.filter((row) => row.stage === "before tubes").map((row) => html`<li key=${row.id}>${row.words}</li>`)}</ul></section>`}
      <p><a href="/emergency">Emergency and first aid</a></p>
      <${Problem} words=${problem} />
      <div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the plan"}</button></div>`}
    </form><//>`;
}
