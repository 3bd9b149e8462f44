// What is measured beside the COD of a bottle, and its chloride judged at a dilution.

import { html } from "../parts/html.js";
import { readCode } from "../parts/bottle_code.js";
import { chlorideGate } from "../parts/chloride.js";
import { NumberField, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { Frame, Problem, go, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { read, valueOf } from "../parts/measured.js";
import { units } from "../parts/units.js";
import { one, useView } from "../parts/view.js";

const UNITS = ["mg/L", "g/L"];
const SPECIES = [
  ["chloride", "Chloride", "From a strip such as < 500, or a titration. It is judged after dilution and never subtracted."],
  ["nitrite", "Nitrite, as N", "Nitrite as NO₂ divided by 3.28. From a portion without acid; only if no sulfamic acid went into the tubes."],
  ["ferrous", "Iron(II), as Fe", ""],
  ["sulfide", "Sulfide, as S", "From a portion without acid: acid drives it out."],
];

/** The chloride of a bottle at a dilution: from the bench, else from the point, else bounded by conductivity. */
export function gateOf(code, factor, recipe) {
  const bottle = one("bottle", code);
  const field = (bottle?.sample ? one("sample", bottle.sample)?.field : null) ?? {};
  const given = one("interferents", code)?.chloride?.given ?? field.chloride_mg_l ?? null;
  const known = given && { mg_l: valueOf(given, "mg/L", units()), sign: read(given.text).sign };
  return chlorideGate(recipe?.derived?.chloride_limit ?? 0, factor, known, valueOf(field.conductivity_us_cm ?? null, "uS/cm", units()));
}

/** The chloride of a bottle in words, and where to state it. */
export function ChlorideLine({ code, factor, recipe }) {
  const gate = useView(() => gateOf(code, factor, recipe));
  return html`<p class=${gate.verdict === "closed" ? "above" : "soft"}>${{ closed: "▲ ", unknown: "◇ ", flagged: "◇ " }[gate.verdict] ?? ""}${gate.words} <a href="/bench/measure/${code}">Record chloride</a></p>`;
}

const shownOf = (given) => `${given.text} ${given.unit}`;

/** The form for values beside the COD. */
export function Measure({ given = "" }) {
  const [v, set, forget] = useForm(`measure:${given}`, { code: given, chloride: "", nitrite: "", ferrous: "", sulfide: "", unit: {}, how: "", note: "" });
  const { code, problem: wrong } = readCode(v.code);
  const known = useView(() => (code ? one("interferents", code) : null));
  const { save, problem, busy } = useSaving(async () => {
    if (!code) throw new Error(`Bottle code: ${wrong}.`);
    const typed = SPECIES.filter(([name]) => v[name].trim());
    if (!typed.length) throw new Error("Type at least one value.");
    for (const [name, label] of typed) {
      const { problem: told, value } = read(v[name]);
      if (told || value < 0) throw new Error(`${label}: ${told || "a concentration is not negative."}`);
    }
    if (!v.how.trim()) throw new Error("Say how it was measured.");
    const species = Object.fromEntries(typed.map(([name]) => [name, measuredOf(v[name], v.unit[name] ?? "mg/L")]));
    await state("bottle.measured", code, { bottle: code, species, how: v.how.trim(), note: v.note.trim() });
    await forget().catch(() => {});
    say(`Saved on this tablet: values of ${code}.`);
    go("/bench");
  });
  return html`<${Frame} place="bench" title="Measured beside the COD"><form class="stack" onSubmit=${save} novalidate>
    <section class="card stack"><${TextField} label="Bottle" class="code" value=${v.code} onInput=${(text) => set("code", text)} maxlength="12" autocomplete="off" autocapitalize="characters"
        wrong=${v.code.length >= 6 && wrong ? wrong : ""} hint=${code ? `Read as ${code}.` : "The six characters on its label."} />
      ${known && html`<ul class="plain">${SPECIES.filter(([name]) => known[name]).map(([name, label]) => html`<li key=${name}>${label}: <strong>${shownOf(known[name].given)}</strong>, ${known[name].how} <span class="soft">${known[name].by}</span></li>`)}</ul>`}</section>
    <section class="card stack"><p class="soft">In the undiluted sample. A later value stands before an earlier one; both are kept.</p>
      ${SPECIES.map(([name, label, hint]) => html`<${NumberField} key=${name} label=${label} unit=${v.unit[name] ?? "mg/L"} units=${UNITS} value=${v[name]} hint=${hint}
        onInput=${(text) => set(name, text)} onUnit=${(unit) => set("unit", { ...v.unit, [name]: unit })} />`)}
      <${TextField} label="How it was measured" value=${v.how} maxlength="200" hint="for example chloride strip, lot and range" onInput=${(text) => set("how", text)} />
      <${TextField} label="Note" value=${v.note} maxlength="500" onInput=${(text) => set("note", text)} /></section>
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the values"}</button>
    <p><a href="/bench">What waits</a> · <a href="/emergency">Emergency and first aid</a></p></form><//>`;
}
