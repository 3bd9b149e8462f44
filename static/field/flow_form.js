// Flow at a stop: weir, flume, bucket and watch, or the totalizer; what it amounts to stands below while it is typed.

import { html, useState } from "../parts/html.js";
import { NumberField, Select, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { flowOf } from "../parts/flow.js";
import { clock, plain } from "../parts/format.js";
import { Problem } from "../parts/frame.js";
import { state, withOffset } from "../parts/journal.js";
import { units } from "../parts/units.js";
import { programme } from "../parts/view.js";

const TYPES = [["v-notch 90", "V-notch weir, 90°"], ["rectangular contracted", "Rectangular weir, contracted"], ["rectangular suppressed", "Rectangular weir, suppressed"],
  ["parshall", "Parshall flume"], ["bucket", "Bucket and watch"], ["totalizer", "Totalizer of the meter"]];
const LENGTHS = { metric: ["cm", "mm", "m", "in", "ft"], us: ["ft", "in", "cm", "mm", "m"] };
const VOLUMES = { metric: ["L", "m3", "gal", "ft3"], us: ["gal", "ft3", "L", "m3"] };
const FLOWS = { metric: ["L/s", "m3/h", "m3/d", "gpm", "MGD", "cfs"], us: ["gpm", "MGD", "cfs", "L/s", "m3/h", "m3/d"] };

/** The units of the programme, metric or US. */
const system = () => (programme()?.units === "us" ? "us" : "metric");

/** The units in which a volume may be typed, the programme's own first. */
export const volumeUnits = () => VOLUMES[system()];
export const flowUnits = () => FLOWS[system()];

/** A flow in the programme's unit and in litres a second. */
export function flowWords(l_s) {
  if (l_s === null) return "";
  const gpm = l_s / units().gpm.factor;
  const small = l_s < 10 ? 2 : 1;
  return system() === "us" ? `${plain(gpm, gpm < 100 ? 1 : 0)} gal/min (${plain(l_s, small)} L/s)` : `${plain(l_s, small)} L/s (${plain((l_s * 86400) / 1000)} m³/d)`;
}

/** What a point's device is likely to be, from the words of its register. */
function guess(text) {
  const words = (text ?? "").toLowerCase();
  const size = /(\d+(?:\.\d)?) ?(in|ft)/u.exec(words);
  if (words.includes("parshall")) return { type: "parshall", size: size ? `${size[1]} ${size[2]}` : "3 in" };
  if (words.includes("rectangular")) return { type: "rectangular contracted" };
  return {};
}

const blank = (point) => ({
  type: "v-notch 90", size: "3 in", crest: "", height: "", head: "", slip: "", tail: "", length: LENGTHS[system()][0], volume: "", volume_unit: volumeUnits()[0],
  seconds: "", start: "", end: "", count: "", meter: "", meter_unit: flowUnits()[0], note: "", ...guess(point.flow_device),
});

function bodyOf(v) {
  const rectangular = v.type.startsWith("rectangular");
  const byHead = rectangular || v.type === "parshall" || v.type === "v-notch 90";
  const length = (text, when) => (when ? measuredOf(text, v.length) : null);
  const counts = v.type === "totalizer";
  return {
    device: { type: v.type, size: v.type === "parshall" ? v.size : null, crest: length(v.crest, rectangular), crest_height: length(v.height, v.type === "rectangular suppressed") },
    head: length(v.head, byHead), head_error: length(v.slip, byHead), tail: length(v.tail, v.type === "parshall"),
    volume: v.type === "bucket" ? measuredOf(v.volume, v.volume_unit) : null, seconds: v.type === "bucket" ? v.seconds.trim() || null : null,
    register_start: counts ? v.start.trim() || null : null, register_end: counts ? v.end.trim() || null : null, count: counts ? measuredOf(v.count, v.volume_unit) : null,
    meter: measuredOf(v.meter, v.meter_unit), note: v.note.trim(),
  };
}

const signed = (percent) => `${percent > 0 ? "+" : "−"}${plain(Math.abs(percent), 1)} %`;

/** A flow in words. */
export function FlowLine({ flow }) {
  if (flow.status !== "ok") return html`<strong class="above">▲ ${flow.words}</strong>`;
  const what = flow.l_s === null ? `${plain(flow.volume_l / 1000, 1)} m³ (${plain(flow.volume_l / units().gal.factor * 1000)} gal)` : flowWords(flow.l_s);
  return html`<span><strong>${what}</strong>${flow.error_percent && `; the head's error makes it ${signed(flow.error_percent[0])} to ${signed(flow.error_percent[1])}`}${flow.meter_percent !== null && html`; the meter is ${Math.abs(flow.meter_percent) > 10 ? html`<strong class="above">▲ ${signed(flow.meter_percent)} off</strong>` : `${signed(flow.meter_percent)} off`}`}. ${flow.words}</span>`;
}

function Inputs({ v, set }) {
  const lengths = LENGTHS[system()];
  const length = (name, label, hint) => html`<${NumberField} label=${label} value=${v[name]} unit=${v.length} units=${lengths} onInput=${(text) => set(name, text)} onUnit=${(unit) => set("length", unit)} hint=${hint} />`;
  const volume = (name, label) => html`<${NumberField} label=${label} value=${v[name]} unit=${v.volume_unit} units=${volumeUnits()} onInput=${(text) => set(name, text)} onUnit=${(unit) => set("volume_unit", unit)} />`;
  const register = (name, label) => html`<${TextField} label=${label} inputmode="numeric" value=${v[name]} onInput=${(text) => set(name, text)} hint="all digits of the register, zeros too" />`;
  if (v.type === "bucket") return html`${volume("volume", "Volume caught")}<${NumberField} label="Time to fill it" unit="s" value=${v.seconds} onInput=${(text) => set("seconds", text)} />`;
  if (v.type === "totalizer") return html`${register("start", "Reading before")}${register("end", "Reading now")}${volume("count", "One count stands for")}`;
  return html`${v.type.startsWith("rectangular") && length("crest", "Length of the crest")}${v.type === "rectangular suppressed" && length("height", "Height of the crest above the floor", "may stay empty")}
    ${length("head", v.type === "parshall" ? "Head Ha, at the set point upstream" : "Head above the crest")}${v.type === "parshall" && length("tail", "Tail water Hb", "may stay empty: then free flow is assumed")}
    ${length("slip", "The gauge may be off by", "shows what that does to the flow")}`;
}

function FlowForm({ visit, point, words, done }) {
  const [v, set, forget] = useForm(`flow:${visit.id}`, blank(point));
  const { save, problem, busy } = useSaving(async () => {
    const body = bodyOf(v);
    if (!flowOf(body, words.ratings)) throw new Error("Something is missing or not a number: a flow needs all the readings of its device.");
    await state("flow.measured", visit.id, { at: withOffset(), ...body });
    await forget();
    done();
  });
  if (!v || !words) return null;
  const found = flowOf(bodyOf(v), words.ratings);
  return html`<form class="stack" onSubmit=${save} novalidate>
    <${Select} label="Measured by" value=${v.type} options=${TYPES} onChoose=${(type) => set("type", type)} />
    ${v.type === "parshall" && html`<${Select} label="Throat" value=${v.size} options=${Object.keys(words.ratings.parshall).map((size) => [size, size])} onChoose=${(size) => set("size", size)} />`}
    <div class="two"><${Inputs} v=${v} set=${set} />
    <${NumberField} label="The firm's meter shows" value=${v.meter} unit=${v.meter_unit} units=${flowUnits()} onInput=${(text) => set("meter", text)} onUnit=${(unit) => set("meter_unit", unit)} hint="may stay empty" /></div>
    <p role="status" class="card">${found ? html`<${FlowLine} flow=${found} />` : html`<span class="soft">The flow stands here once the readings are typed.</span>`}</p>
    <${Problem} words=${problem} /><button disabled=${busy}>Save the flow</button></form>`;
}

/** The flows of a visit. */
export function Flows({ visit, words }) {
  if (!visit.flows.length) return null;
  return html`<ul class="plain past">${visit.flows.map((flow) => {
    const found = flow.status ? flow : words && flowOf(flow, words.ratings);
    return html`<li key=${flow.at}>${clock(flow.at, programme()?.zone)}, ${TYPES.find(([key]) => key === flow.device.type)?.[1]}: ${found ? html`<${FlowLine} flow=${found} />` : ""}</li>`;
  })}</ul>`;
}

/** The flow part of a visit. */
export function Flow({ visit, point, words }) {
  const [open, setOpen] = useState(false);
  return html`<section class="card stack"><h2>Flow</h2><${Flows} visit=${visit} words=${words} />
    ${open ? html`<${FlowForm} key=${visit.flows.length} ...${{ visit, point, words }} done=${() => setOpen(false)} />` : html`<button type="button" onClick=${() => setOpen(true)}>${visit.flows.length ? "Another flow" : "Measure the flow"}</button>`}
  </section>`;
}
