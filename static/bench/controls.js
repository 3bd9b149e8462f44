// The controls of a rack: known value, duplicate, spike; each may be left away with a reason. And places changed by tap.

import { html, useState } from "../parts/html.js";
import { Check, NumberField, Select, TextField } from "../parts/fields.js";
import { plain } from "../parts/format.js";
import { read } from "../parts/measured.js";
import { all } from "../parts/view.js";
import { Rack } from "./rack.js";

/** Role and words of each control. */
export const CONTROLS = [["control", "Laboratory control"], ["duplicate", "Duplicate"], ["spike", "Spike"]];

const number = (text) => (text?.trim() && !read(text).problem ? read(text).value : 0);

/** What the last run of a recipe used: a control is not typed twice. */
function lastOf(recipe, role) {
  const run = all("run").findLast((row) => row.recipe === recipe?.id && row.tubes.some((tube) => tube.role === role));
  return run?.tubes.find((tube) => tube.role === role);
}

const SPIKE = { sample_ml: "50", spike_ml: "1", spike_mg_l: "10000" };

function valuesOf(qc, recipe) {
  const { expected = "", source = "" } = lastOf(recipe, "control") ?? {};
  return { expected, source, ...SPIKE, ...lastOf(recipe, "spike")?.spike, ...qc };
}

/** What is added to a spiked tube, mg/L of the mixture. */
export const addedBy = ({ sample_ml, spike_ml, spike_mg_l }) => (number(spike_mg_l) * number(spike_ml)) / (number(sample_ml) + number(spike_ml)) || 0;

const made = ({ sample_ml, spike_ml, spike_mg_l }) => ({ sample_ml: sample_ml.trim(), spike_ml: spike_ml.trim(), spike_mg_l: spike_mg_l.trim() });

/** The controls that stand in the rack: null for one that is left away. */
export function controlsOf(qc, recipe) {
  const v = valuesOf(qc, recipe);
  return {
    control: v.no_control ? null : { expected: v.expected.trim(), source: v.source.trim() },
    duplicate: v.no_duplicate ? null : { bottle: v.duplicate },
    spike: v.no_spike ? null : { bottle: v.spike, made: made(v) },
  };
}

/** The controls that are left away, with their reasons. */
export const withoutOf = (qc) => CONTROLS.filter(([role]) => qc[`no_${role}`]).map(([role]) => ({ role, reason: (qc[`why_${role}`] ?? "").trim() }));

/** What keeps the controls from being placed, in words. */
export function lackingOf(qc, { control, spike }) {
  const silent = CONTROLS.find(([role]) => qc[`no_${role}`] && !qc[`why_${role}`]?.trim());
  if (silent) return `Say why there is no ${silent[1].toLowerCase()}.`;
  if (control && !number(control.expected)) return "Type the known value of the laboratory control, or leave it away with a reason.";
  if (control && !control.source) return "Say what the laboratory control was made from: another source than the standards.";
  if (spike && !addedBy(spike.made)) return "Type what the spike is made of: its volume, its COD, and the volume of sample it goes into.";
  return "";
}

function One({ role, words, v, set, hint, children }) {
  return html`<div class="item stack"><${Check} label=${words} checked=${!v[`no_${role}`]} onChange=${(on) => set(`no_${role}`, !on)} />
    ${v[`no_${role}`] ? html`<${TextField} label=${`Why no ${words.toLowerCase()}`} value=${v[`why_${role}`] ?? ""} onInput=${(text) => set(`why_${role}`, text)} />` : html`<p class="hint">${hint}</p>${children}`}</div>`;
}

/** The part of the plan that names the controls. */
export function Controls({ qc, recipe, picked, onChange }) {
  const v = valuesOf(qc, recipe);
  const set = (name, value) => onChange({ ...qc, [name]: value });
  const added = addedBy(v);
  const bottles = picked.map(({ code }) => [code, code]);
  const field = (name, label, unit, hint) => html`<${NumberField} label=${label} unit=${unit} value=${v[name]} onInput=${(text) => set(name, text)} hint=${hint} />`;
  return html`<section class="card stack"><h2>Controls</h2>
    <${One} role="control" words="Laboratory control" v=${v} set=${set} hint="A known COD of another source than the standards, digested once in each batch of 20 samples.">
      ${field("expected", "Known value of the control", "mg/L")}<${TextField} label="Made from" value=${v.source} onInput=${(text) => set("source", text)} /><//>
    <${One} role="duplicate" words="Duplicate" v=${v} set=${set} hint="A second portion of one bottle, diluted again.">
      ${bottles.length > 1 && html`<${Select} label="Duplicate of" value=${v.duplicate ?? bottles[0][0]} options=${bottles} onChoose=${(code) => set("duplicate", code)} />`}<//>
    <${One} role="spike" words="Spike" v=${v} set=${set} hint=${added ? `Adds ${plain(added)} mg/L in the tube. Its recovery is judged when that is at least a quarter of what the tube holds; together they must stay in range.` : "A known addition to one bottle."}>
      ${bottles.length > 1 && html`<${Select} label="Spike of" value=${v.spike ?? bottles[0][0]} options=${bottles} onChoose=${(code) => set("spike", code)} />`}
      ${field("spike_ml", "Spiking solution", "mL")}${field("spike_mg_l", "COD of the spiking solution", "mg/L")}${field("sample_ml", "Into diluted sample", "mL", "Mix, then take the tube's volume from the mixture.")}<//></section>`;
}

/** Tubes with the contents of some positions exchanged, each pair in its order; of another rack nothing is exchanged. */
export function swapped(tubes, swaps) {
  const found = tubes.map((tube) => ({ ...tube }));
  for (const [a, b] of swaps.filter((swap) => swap[2] === tubes.length)) {
    [found[a - 1], found[b - 1]] = [{ ...found[b - 1], position: a }, { ...found[a - 1], position: b }];
  }
  return found;
}

const EMPTY = { absorbance: null, excluded: null, in_tube: null, share: null };

/** The rack as planned: tap two tubes and they change places. */
export function Places({ tubes, swaps, onSwap }) {
  const [first, setFirst] = useState(null);
  const pick = (position) => {
    if (first && first !== position) onSwap([...swaps, [first, position, tubes.length]]);
    setFirst(first ? null : position);
  };
  return html`<details><summary>Places in the block</summary><p class="hint" role="status">${first ? `Position ${first} changes places with the next one you tap.` : "Tap two tubes and they change places. A verification belongs after at most ten analyses and at the end."}</p>
    <${Rack} run=${{ tubes: tubes.map((tube) => ({ ...tube, ...EMPTY })) }} current=${first} onPick=${pick} />
    ${swaps.length > 0 && html`<button type="button" onClick=${() => onSwap([])}>Place them by themselves again</button>`}</details>`;
}
