// Waste: each container with its clock, the month of the whole site, other streams, pick-ups.

import { html } from "../parts/html.js";
import { Check, Choice, NumberField, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, programme, useView } from "../parts/view.js";

const today = () => day(new Date(), programme()?.zone);
const TO = [["over the limit", "Limit passed"], ["central accumulation", "To central accumulation"], ["picked up", "Picked up"]];

/** A container's clock in words, with the shape of its urgency. */
export const clockWords = (container) => (container.clock && container.state !== "picked up" ? `${container.clock.due < today() ? "▲ over: " : container.clock.remind_on <= today() ? "▲ " : ""}${container.clock.words}` : "");

function Move({ container }) {
  const [v, set, forget] = useForm(`move:${container.id}`, { to: "picked up", on: "", by: "", manifest: "", note: "" });
  const { save, problem, busy } = useSaving(async () => {
    if (v.to === "picked up" && !v.by.trim()) throw new Error("Say who took it.");
    await state("container.moved", container.id, { to: v.to, on: v.on || today(), by: v.by.trim(), manifest: v.manifest.trim(), note: v.note.trim() });
    await forget();
    say("Saved on this tablet.");
  });
  return html`<details><summary>Record where it goes</summary><form class="stack" onSubmit=${save} novalidate>
    <${Choice} label="What happened" value=${v.to} options=${TO} onChoose=${(to) => set("to", to)} /><${TextField} label="Day" type="date" value=${v.on || today()} onInput=${(text) => set("on", text)} />
    <${TextField} label=${v.to === "picked up" ? "Who took it" : "Who moved it"} value=${v.by} maxlength="200" onInput=${(text) => set("by", text)} />
    ${v.to === "picked up" && html`<${TextField} label="Manifest number" value=${v.manifest} maxlength="60" onInput=${(text) => set("manifest", text)} />`}
    <${TextField} label="Note" value=${v.note} maxlength="500" onInput=${(text) => set("note", text)} /><${Problem} words=${problem} /><button disabled=${busy}>Save</button></form></details>`;
}

function Container({ container }) {
  const share = Math.round((100 * container.filled_ml) / container.capacity_ml);
  const words = clockWords(container);
  return html`<section class="card stack ${words.startsWith("▲") ? "stop" : ""}"><div class="row spread"><h2>${container.name}</h2>${container.local ? html`<${Where} about=${container.id} />` : html`<span class="tag">${container.state ?? "in use"}</span>`}</div>
    <p><strong>${share} % full</strong>: ${plain(container.filled_ml)} of ${plain(container.capacity_ml)} mL from ${container.tubes} tubes in ${container.runs.length} ${container.runs.length === 1 ? "run" : "runs"}; ${plain(container.mercury_mg / 1000, 2)} g mercury, ${plain(container.chromium_mg / 1000, 2)} g chromium, ${plain(container.silver_mg / 1000, 2)} g silver.</p>
    ${words && html`<p><strong>${words}</strong></p>`}
    ${container.moves?.map((move, i) => html`<p class="soft" key=${i}>${move.on}: ${move.to}${move.by && `, ${move.by}`}${move.manifest && `, manifest ${move.manifest}`}</p>`)}
    ${!container.local && html`<p><a href="/api/papers/container/${encodeURIComponent(container.id)}.pdf" target="_blank">Waste label to print</a></p>`}
    ${container.state !== "picked up" && html`<${Move} container=${container} />`}</section>`;
}

function Month({ month }) {
  return html`<li class="item"><div class="row spread"><strong>${month.id}</strong><span>${plain(month.total_kg, 2)} kg, <strong>${month.category}</strong> generator${month.days ? `, ${month.days} days` : ""}</span></div>
    <div class="under"><span>${Object.entries(month.streams_kg).map(([name, kg]) => `${name} ${plain(kg, 2)} kg`).join("; ")}${month.acute_kg ? `; acute ${plain(month.acute_kg, 3)} kg` : ""}</span></div></li>`;
}

function Other() {
  const [v, set, forget] = useForm("waste:other", { stream: "", on: "", mass: "", unit: "kg", acute: false, note: "" });
  const { save, problem, busy } = useSaving(async () => {
    if (!v.stream.trim()) throw new Error("Name the waste.");
    if (!v.mass.trim() || read(v.mass).problem) throw new Error("Type its mass.");
    await state("waste.added", newId(), { stream: v.stream.trim(), on: v.on || today(), mass: measuredOf(v.mass, v.unit), acute: v.acute, note: v.note.trim() });
    await forget();
    say("Saved on this tablet.");
  });
  return html`<details class="card"><summary>Other hazardous waste of the site</summary><form class="stack" onSubmit=${save} novalidate>
    <${TextField} label="Waste" value=${v.stream} maxlength="80" onInput=${(text) => set("stream", text)} /><${TextField} label="Day" type="date" value=${v.on || today()} onInput=${(text) => set("on", text)} />
    <${NumberField} label="Mass" value=${v.mass} unit=${v.unit} units=${["kg", "g"]} onInput=${(text) => set("mass", text)} onUnit=${(unit) => set("unit", unit)} />
    <${Check} label="Acute hazardous waste" checked=${v.acute} onChange=${(on) => set("acute", on)} /><${Problem} words=${problem} /><button disabled=${busy}>Save</button></form></details>`;
}

/** The waste of the laboratory and of its site. */
export function Waste() {
  const containers = useView(() => all("container")).reverse();
  const months = useView(() => all("waste_month")).reverse().slice(0, 13);
  const rules = useView(programme)?.settings?.waste;
  return html`<${Frame} place="bench" title="Waste"><div class="stack">
    ${containers.length ? containers.map((container) => html`<${Container} key=${container.id} container=${container} />`) : html`<${Empty} title="No container yet"><a href="/bench/stores/container">Open one</a> before the first run.<//>`}
    <p><a class="button" href="/bench/stores/container">Open a container</a></p>
    <h2>By month, the whole site</h2>${months.length ? html`<ul class="plain list">${months.map((month) => html`<${Month} key=${month.id} month=${month} />`)}</ul>` : html`<${Empty} title="No waste yet">Each closed run adds its tubes by itself.<//>`}
    <${Other} />
    ${rules && html`<p class="soft small">Small above ${plain(rules.small_above_kg)} kg a month (${rules.small_days} days), large from ${plain(rules.large_from_kg)} kg or above ${plain(rules.acute_above_kg)} kg acute (${rules.large_days} days); ${plain(rules.satellite_l)} L at the place of work, then ${rules.satellite_days} days. ${rules.note}</p>`}
    <p><a href="/bench/stores">Stores</a> · <a href="/emergency">Emergency and first aid</a></p></div><//>`;
}
