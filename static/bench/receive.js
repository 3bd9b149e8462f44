// Receiving a bottle: what the thermometer, the strip and the seal say, and what a person decides.

import { html } from "../parts/html.js";
import { readCode } from "../parts/bottle_code.js";
import { CodeField } from "../parts/code_field.js";
import { Check, Choice, LongField, NumberField, TextField, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { dayAndTime } from "../parts/format.js";
import { Frame, Problem, go, say } from "../parts/frame.js";
import { Hold } from "../parts/hold.js";
import { state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { one, programme, useView } from "../parts/view.js";

const BLANK = { code: "", temperature: "", ph: "", seal: "intact", container: "sound", agrees: true, decision: "", extra: "", told: "", note: "" };

/** What speaks against accepting, in words; the person decides. */
export function findings(v, sample, now = Date.now()) {
  const found = [];
  const temperature = v.temperature.trim() ? read(v.temperature) : null;
  if (!temperature) found.push("temperature on receipt not measured");
  else if (temperature.value > 6) found.push(`${v.temperature} °C on receipt, above 6 °C`);
  const ph = v.ph.trim() ? read(v.ph) : null;
  if (!ph) found.push("pH not measured");
  else if (ph.value > 2 || (ph.value === 2 && ph.sign !== "<")) found.push(`pH ${v.ph}, not below 2`);
  if (v.seal === "broken") found.push("seal broken");
  if (v.container !== "sound") found.push(v.container === "leaking" ? "container leaking" : "wrong container");
  if (!v.agrees) found.push("label and record differ");
  if (sample && new Date(sample.hold_until).getTime() < now) found.push("holding time is over");
  return found;
}

/** The decision that the findings suggest. */
export function suggested(v, found) {
  if (v.container === "leaking") return "rejected";
  if (!v.agrees) return "on hold";
  return found.length ? "qualified" : "accepted";
}

/** The form for a receipt. */
export function Receive({ given }) {
  const [v, set, forget] = useForm(`receive:${given ?? ""}`, { ...BLANK, code: given ?? "" });
  const zone = useView(programme)?.zone;
  const { code, problem: wrong } = readCode(v.code);
  const bottle = useView(() => (code ? one("bottle", code) : null));
  const sample = useView(() => (bottle?.sample ? one("sample", bottle.sample) : null));
  const point = useView(() => (sample ? one("point", sample.point) : null));
  const found = v ? findings(v, sample) : [];
  const decision = v ? v.decision || suggested(v, found) : "";
  const { save, problem, busy } = useSaving(async () => {
    if (!code) throw new Error(`Bottle code: ${wrong}.`);
    for (const text of [v.temperature, v.ph]) if (text.trim() && read(text).problem) throw new Error(read(text).problem);
    const reasons = [...(decision === "accepted" ? [] : found), ...(v.extra.trim() ? [v.extra.trim()] : [])];
    if (decision !== "accepted" && !reasons.length) throw new Error("Give the reason for this decision.");
    await state("bottle.received", code, {
      bottle: code, temperature: measuredOf(v.temperature, "Cel"), ph: measuredOf(v.ph, "pH"), seal: v.seal, container: v.container,
      label_agrees: v.agrees, decision, reasons, told: v.told.trim(), note: v.note,
    });
    await forget().catch(() => {});
    say(`Saved on this tablet: ${code} ${decision}.`);
    go("/bench");
  });
  return html`<${Frame} place="bench" title="Receive a bottle">
    <form class="stack" onSubmit=${save} novalidate>
      <section class="card stack"><${CodeField} label="Bottle" value=${v.code} onInput=${(text) => set("code", text)}
          wrong=${v.code.length >= 6 && wrong ? wrong : ""} hint=${code ? `Read as ${code}.` : "The six characters on its label."} />
        ${code && (point ? html`<p><strong>${point.discharger_name}, ${point.name}</strong><br />taken ${dayAndTime(sample.collected_at, zone)} by ${sample.by_name}<br /><${Hold} sample=${sample} /></p>`
          : html`<p class="soft">The entry of this sample has not arrived yet. Receive the bottle all the same: they meet when it does.</p>`)}</section>
      <section class="card stack">
        <${NumberField} label="Temperature on receipt" unit="Cel" value=${v.temperature} onInput=${(text) => set("temperature", text)} />
        <${NumberField} label="pH, strip on a poured portion" unit="pH" value=${v.ph} onInput=${(text) => set("ph", text)} />
        <${Choice} label="Seal" value=${v.seal} options=${["intact", "broken", "none"]} onChoose=${(seal) => set("seal", seal)} />
        <${Choice} label="Container" value=${v.container} options=${["sound", "leaking", ["wrong", "wrong kind"]]} onChoose=${(kind) => set("container", kind)} />
        <${Check} label="Label, custody form and plan agree" checked=${v.agrees} onChange=${(on) => set("agrees", on)} /></section>
      <section class="card stack ${found.length ? "wait" : ""}">
        ${found.length > 0 && html`<ul>${found.map((words) => html`<li key=${words}>${words}</li>`)}</ul>`}
        <${Choice} label="Decision" value=${decision} options=${["accepted", "qualified", "on hold", "rejected"]} onChoose=${(one_) => set("decision", one_)} />
        <${TextField} label="Further reason" value=${v.extra} onInput=${(text) => set("extra", text)} />
        ${decision !== "accepted" && html`<${TextField} label="Who was told" value=${v.told} maxlength="200" onInput=${(text) => set("told", text)} />`}
        <p class="soft small">At most 6 °C, pH below 2, 28 days from the end of collection (40 CFR 136.3, Table II). The decision stays with the result.</p></section>
      <${LongField} label="Note" value=${v.note} onInput=${(text) => set("note", text)} />
      <${Problem} words=${problem} />
      <div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the receipt"}</button></div>
      <p><a href="/emergency">Emergency and first aid</a></p>
    </form><//>`;
}
