// Field meters: calibrated in the morning, checked in the afternoon; a failed check flags what was read in between.

import { html } from "../parts/html.js";
import { Choice, NumberField, TextField, useForm, useSaving } from "../parts/fields.js";
import { judged } from "../parts/field_sums.js";
import { dayAndTime, plain } from "../parts/format.js";
import { Empty, Problem, say } from "../parts/frame.js";
import { state, withOffset } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";

const QUANTITIES = [["pH", "pH"], ["conductivity", "Conductivity"], ["turbidity", "Turbidity"], ["temperature", "Temperature"], ["gas", "Gas meter"]];
const UNITS = { pH: "pH", conductivity: "uS/cm", turbidity: "NTU", temperature: "Cel" };

const BLANK = { what: "calibration", quantity: "pH", rows: [{ reference: "4.01", read: "", lot: "" }, { reference: "7.00", read: "", lot: "" }], slope: "", passed: null, note: "" };

function Form({ meter, words }) {
  const [v, set, forget] = useForm(`meter:${meter.id}`, BLANK);
  const { save, problem, busy } = useSaving(async () => {
    const gas = v.quantity === "gas";
    const rows = gas ? [] : v.rows.filter((row) => row.reference.trim() && row.read.trim());
    if (!gas && !rows.length) throw new Error("Type at least one reference and what the meter read.");
    if (gas && v.passed === null) throw new Error("Say whether the meter responded as it must.");
    const wrong = rows.flatMap((row) => [row.reference, row.read]).concat(v.slope.trim() ? [v.slope] : []).filter((text) => read(text).problem);
    if (wrong.length) throw new Error(`Not a number: ${wrong.join(", ")}.`);
    await state("meter.checked", meter.id, {
      what: gas ? "bump test" : v.what, quantity: v.quantity, at: withOffset(), points: rows.map((row) => ({ reference: row.reference.trim(), read: row.read.trim(), lot: row.lot.trim() })),
      slope_percent: v.quantity === "pH" && v.slope.trim() ? v.slope.trim() : null, passed: gas ? v.passed : null, note: v.note.trim(),
    });
    await forget();
    say("Saved on this tablet");
  });
  if (!v || !words) return null;
  const told = judged(v.quantity, v.rows, words.acceptances);
  const put = (i, name, text) => set("rows", v.rows.map((row, k) => (k === i ? { ...row, [name]: text } : row)));
  return html`<form class="stack" onSubmit=${save} novalidate><${Choice} label="What" value=${v.quantity} options=${QUANTITIES} onChoose=${(key) => set("quantity", key)} />
    ${v.quantity === "gas" ? html`<${Choice} label="Bump test with test gas" value=${v.passed} options=${[[true, "Passed"], [false, "Failed"]]} onChoose=${(key) => set("passed", key)} />`
      : html`<${Choice} label="When" value=${v.what} options=${[["calibration", "Calibration before"], ["check", "Check afterwards"]]} onChoose=${(key) => set("what", key)} />
      ${v.rows.map((row, i) => html`<div class="two" key=${i}><${NumberField} label=${`Reference ${i + 1}`} unit=${UNITS[v.quantity]} value=${row.reference} onInput=${(text) => put(i, "reference", text)} />
        <${NumberField} label="The meter reads" unit=${UNITS[v.quantity]} value=${row.read} onInput=${(text) => put(i, "read", text)} />
        <${TextField} label="Lot of the reference" value=${row.lot} maxlength="60" onInput=${(text) => put(i, "lot", text)} />
        ${told[i] && html`<p role="status" class=${told[i].ok ? "soft" : "above"}>${told[i].ok ? "○ holds" : "▲ does not hold"}: ${plain(told[i].off, 2)} ${told[i].unit} off, at most ${plain(told[i].limit, 1)} ${told[i].unit}</p>`}</div>`)}
      <button type="button" class="quiet" onClick=${() => set("rows", [...v.rows, { reference: "", read: "", lot: "" }])}>One more reference</button>
      ${v.quantity === "pH" && html`<${NumberField} label="Slope of the electrode" unit="%" value=${v.slope} onInput=${(text) => set("slope", text)} hint="may stay empty" />`}`}
    <${TextField} label="Note" value=${v.note} maxlength="500" onInput=${(text) => set("note", text)} /><${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the check"}</button></form>`;
}

function Checks({ id }) {
  const checks = useView(() => one("meter", id)?.checks ?? []);
  if (!checks.length) return html`<p class="soft">Never checked here.</p>`;
  return html`<ul class="plain past">${[...checks].reverse().slice(0, 8).map((check) => html`<li key=${check.at + check.quantity}>${dayAndTime(check.at, programme()?.zone)}, ${check.what} ${check.quantity}:
    ${check.ok === undefined ? " saved on this tablet" : html`<strong class=${check.ok ? "" : "above"}> ${check.ok ? "○ holds" : "▲ does not hold"}</strong>${check.ok ? "" : `: ${check.words.join("; ")}. What was read since its last good check is flagged.`}`}</li>`)}</ul>`;
}

/** The meters that are carried. */
export function Meters() {
  const words = useWords();
  const meters = useView(() => all("instrument")).filter((instrument) => instrument.what === "meter");
  return html`<div class="screen stack"><p class="back"><a href="/field">All points</a></p><h1>Meters</h1>
    ${meters.length === 0 && html`<${Empty} title="No field meter is registered">An analyst or administrator adds instruments under <a href="/bench/stores">Stores</a>.<//>`}
    ${meters.map((meter) => html`<section class="card stack" key=${meter.id}><h2>${meter.name}</h2><${Checks} id=${meter.id} /><details><summary>Calibrate or check</summary><${Form} meter=${meter} words=${words} /></details></section>`)}</div>`;
}
