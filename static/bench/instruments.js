// One instrument and its checks: the block's probe, the wavelength, a pipette by weight.

import { html } from "../parts/html.js";
import { TextField, useForm, useSaving } from "../parts/fields.js";
import { day } from "../parts/format.js";
import { Empty, Frame, Problem, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { one, programme, useView } from "../parts/view.js";

const WHAT = { block: "block temperature", photometer: "wavelength", pipette: "pipette by weight" };
const ASKS = {
  block: { wanted: "Set to, °C", found: "Independent probe reads, °C", first: "150" }, photometer: { wanted: "Reference, nm", found: "Photometer shows, nm", first: "" },
  pipette: { wanted: "Set to, mL", found: "Weights of the deliveries, g", first: "" },
};

function CheckForm({ instrument }) {
  const asks = ASKS[instrument.what];
  const [v, set, forget] = useForm(`instrument:${instrument.id}`, { wanted: asks.first, found: "", water_c: "20", next_on: "", note: "" });
  const { save, problem, busy } = useSaving(async () => {
    const found = v.found.trim().split(/[\s;]+/u).filter(Boolean);
    const wrong = [v.wanted, ...found].filter((text) => !text.trim() || read(text).problem);
    if (!found.length || wrong.length) throw new Error("Type what it is set to and what was found, several numbers set apart by spaces.");
    await state("instrument.checked", instrument.id, {
      what: WHAT[instrument.what], on: day(new Date(), programme()?.zone), wanted: v.wanted.trim(), found, water_c: instrument.what === "pipette" ? v.water_c.trim() || null : null,
      next_on: v.next_on || null, note: v.note.trim(),
    });
    await forget();
    say("Saved on this tablet.");
  });
  const line = (name, label, hint) => html`<${TextField} label=${label} inputmode="decimal" value=${v[name]} onInput=${(text) => set(name, text)} hint=${hint} />`;
  return html`<form class="card stack" onSubmit=${save} novalidate><h2>Check its ${WHAT[instrument.what]}</h2>${line("wanted", asks.wanted)}${line("found", asks.found, instrument.what === "pipette" ? "at least four deliveries of water, tared" : "")}
    ${instrument.what === "pipette" && line("water_c", "Temperature of the water, °C")}
    <${TextField} label="Due again on" type="date" value=${v.next_on} onInput=${(text) => set("next_on", text)} /><${TextField} label="Note" value=${v.note} maxlength="500" onInput=${(text) => set("note", text)} />
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the check"}</button></form>`;
}

/** One instrument. */
export function Instrument({ id }) {
  const instrument = useView(() => one("instrument", id));
  if (!instrument) return html`<${Frame} place="bench" title="Instrument"><${Empty} title="This instrument is not on this tablet"><a href="/bench/stores">Stores</a><//><//>`;
  const checks = [...(instrument.checks ?? [])].reverse();
  return html`<${Frame} place="bench" title=${instrument.name}><div class="stack"><p class="soft">${instrument.what}${instrument.positions ? `, ${instrument.positions} positions` : ""}</p>
    ${instrument.what === "meter" ? html`<p>Field meters are checked under <a href="/field/meters">Meters</a>.</p>` : html`<h2>Checks</h2>
    ${checks.length ? html`<ul class="plain list">${checks.map((check, i) => html`<li class="item" key=${i}><strong class=${check.ok === false ? "above" : ""}>${check.ok === undefined ? "◐ judged when the server has it" : check.ok ? "○ holds" : "▲ does not hold"}</strong> <span>${check.on}, ${check.by}</span>
      ${check.words && html`<div>${check.words}</div>`}${check.next_on && html`<div class="soft">due again ${check.next_on}</div>`}</li>`)}</ul>` : html`<${Empty} title="Never checked here">Record the first check below.<//>`}
    <${CheckForm} instrument=${instrument} />`}<p><a href="/bench/stores">Stores</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}
