// Registering dischargers, points and limits.

import { html } from "../parts/html.js";
import { Check, Choice, LongField, NumberField, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day } from "../parts/format.js";
import { Empty, Frame, Problem, go, say } from "../parts/frame.js";
import { newId, state, stateAll } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";

const SECTORS = [
  "", "dairy", "brewery", "soft drinks", "winery", "distillery", "slaughterhouse", "poultry", "rendering", "seafood", "canning", "starch",
  "sugar", "edible oil", "textile", "tannery", "pulp and paper", "refinery", "organic chemicals", "pharmaceutical", "leachate", "laundry",
  "vehicle wash", "metal finishing", "coolant", "coke oven", "municipal", "septage",
];
const emptyDischarger = () => ({ name: "", sector: "", address: "" });
const emptyPoint = () => ({ name: "", access: "", hazards: [], sample_kind: "grab", flow_device: "" });
const emptyLimit = () => ({ basis: "daily_maximum", value: "", from: "", source: "" });

function need(fields) {
  const missing = Object.entries(fields).filter(([, text]) => !text.trim()).map(([name]) => name);
  if (missing.length) throw new Error(`Still missing: ${missing.join(", ")}.`);
}

function Hazards({ value, onChange }) {
  const words = useWords();
  return html`<fieldset class="card"><legend>Hazards of the point</legend>${(words?.field ?? []).map((hazard) => html`<${Check} key=${hazard.id} label=${hazard.name} checked=${value.includes(hazard.id)}
    onChange=${(on) => onChange(on ? [...value, hazard.id] : value.filter((id) => id !== hazard.id))} />`)}</fieldset>`;
}

function PointFields({ v, set }) {
  return html`<${TextField} label="Point" value=${v.name} onInput=${(name) => set("name", name)} hint="e.g. Outlet B" required />
    <${LongField} label="Access" value=${v.access} onInput=${(access) => set("access", access)} hint="where it is, who opens, where to park" />
    <${Choice} label="Sample kind" value=${v.sample_kind} options=${["grab", "composite"]} onChoose=${(kind) => set("sample_kind", kind)} />
    <${TextField} label="Flow device" value=${v.flow_device} onInput=${(device) => set("flow_device", device)} hint="e.g. 90° V-notch weir; may stay empty" />
    <${Hazards} value=${v.hazards} onChange=${(hazards) => set("hazards", hazards)} />`;
}

const pointBody = (discharger, v) => ({
  discharger, name: v.name.trim(), access: v.access, hazards: v.hazards, sample_kind: v.sample_kind, flow_device: v.flow_device.trim() || null,
});

/** A new discharger with its first point. */
export function Register() {
  const dischargers = useView(() => all("discharger")).sort((a, b) => (a.name < b.name ? -1 : 1));
  const [v, set, forget] = useForm("register", { ...emptyDischarger(), point: emptyPoint() });
  const { save, problem, busy } = useSaving(async () => {
    need({ "the discharger's name": v.name, "the point's name": v.point.name });
    const discharger = newId();
    const point = newId();
    await stateAll([
      { kind: "discharger.registered", about: discharger, body: { name: v.name.trim(), sector: v.sector || null, address: v.address } },
      { kind: "point.registered", about: point, body: pointBody(discharger, v.point) },
    ]);
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go(`/review/point/${point}/limit`);
  });
  return html`<${Frame} place="review" title="Register a discharger">
    <form class="stack" onSubmit=${save}>
      <${TextField} label="Discharger" value=${v.name} onInput=${(name) => set("name", name)} required />
      <${Select} label="Sector" value=${v.sector} options=${SECTORS.map((one_) => [one_, one_ || "not stated"])} onChoose=${(sector) => set("sector", sector)} hint="gives the first expectation until results come" />
      <${TextField} label="Address" value=${v.address} onInput=${(address) => set("address", address)} />
      <h2>Its first discharge point</h2>
      <${PointFields} v=${v.point} set=${(name, value) => set("point", { ...v.point, [name]: value })} />
      <${Problem} words=${problem} />
      <button class="main" disabled=${busy}>${busy ? "Saving…" : "Save on this tablet"}</button>
    </form>
    ${dischargers.length > 0 && html`<h2>Add a point to</h2><nav class="list" aria-label="Dischargers">${dischargers.map((d) => html`<a key=${d.id} href="/review/register/${encodeURIComponent(d.id)}">${d.name}</a>`)}</nav>`}
  <//>`;
}

/** A further point of a discharger. */
export function RegisterPoint({ id }) {
  const discharger = useView(() => one("discharger", id));
  const [v, set, forget] = useForm(`register:${id}`, emptyPoint());
  const { save, problem, busy } = useSaving(async () => {
    need({ "the point's name": v.name });
    const point = newId();
    await state("point.registered", point, pointBody(id, v));
    await forget().catch(() => {});
    go(`/review/point/${point}/limit`);
  });
  return html`<${Frame} place="review" title="Register a point" about=${discharger?.name}>
    <form class="stack" onSubmit=${save}><${PointFields} v=${v} set=${set} /><${Problem} words=${problem} /><button class="main" disabled=${busy}>Save on this tablet</button></form><//>`;
}

/** A limit of a point, in force from a day. */
export function SetLimit({ id }) {
  const point = useView(() => one("point", id));
  const zone = useView(programme)?.zone;
  const [v, set, forget] = useForm(`limit:${id}`, { ...emptyLimit(), from: day(new Date(), zone) });
  const { save, problem, busy } = useSaving(async () => {
    need({ value: v.value, "from when": v.from, source: v.source });
    const reading = read(v.value);
    if (reading.problem || reading.sign !== "=") throw new Error(reading.problem ?? "A limit is a number, not a bound.");
    await state("limit.set", id, { basis: v.basis, value: { text: v.value, unit: "mg/L" }, from: v.from, source: v.source.trim() });
    await forget().catch(() => {});
    say("Saved on this tablet.");
    go(`/review/point/${encodeURIComponent(id)}`);
  });
  if (!point) return html`<${Frame} place="review" title="Set a limit"><${Empty} title="This point is not on this tablet"><a href="/review">Review</a><//><//>`;
  return html`<${Frame} place="review" title="Set a limit" about="${point.discharger_name}, ${point.name}">
    <form class="stack" onSubmit=${save}>
      <p class="soft">The limit in force on the day of a sample decides; earlier results keep the verdict they were given. A limit is needed before a result can be judged.</p>
      <${Choice} label="Basis" value=${v.basis} options=${[["daily_maximum", "Daily maximum"], ["monthly_average", "Monthly average"]]} onChoose=${(basis) => set("basis", basis)} />
      <${NumberField} label="Limit" unit="mg/L" value=${v.value} onInput=${(value) => set("value", value)} />
      <${TextField} label="In force from" type="date" value=${v.from} onInput=${(from) => set("from", from)} />
      <${TextField} label="Source" value=${v.source} onInput=${(source) => set("source", source)} hint="where it stands, e.g. permit 14, part 2" />
      <${Problem} words=${problem} /><button class="main" disabled=${busy}>Save on this tablet</button>
      <p><a href="/review/point/${encodeURIComponent(id)}">Not now</a></p>
    </form><//>`;
}
