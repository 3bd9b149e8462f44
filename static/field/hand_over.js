// Handing over: which bottles, to whom, how cold.

import { html } from "../parts/html.js";
import { Choice, LongField, NumberField, TextField, Check, echo, measuredOf, useForm, useSaving } from "../parts/fields.js";
import { dayAndTime } from "../parts/format.js";
import { Empty, Problem, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { Sign, UNSIGNED, signatureOf } from "../parts/sign.js";
import { all, one, programme, useView } from "../parts/view.js";
import { nameOf } from "./point.js";

const BLANK = { without: [], to: "", to_kind: "person", seal: "", given: UNSIGNED, taken: UNSIGNED, temperature: "", unit: "Cel", note: "" };

/** Bottles that nobody has taken over yet. */
const inHand = () => all("sample").filter((sample) => sample.state === "taken");

function Bottle({ sample, on, onChange }) {
  const point = one("point", sample.point);
  const words = html`<span><strong class="code">${sample.bottle}</strong> ${point ? nameOf(point) : ""}
    <span class="soft"> ${dayAndTime(sample.collected_at, programme()?.zone)}</span></span>`;
  return html`<li class="item"><${Check} label=${words} checked=${on} onChange=${onChange} /></li>`;
}

function Form({ samples, values, set, forget }) {
  const chosen = samples.filter((sample) => !values.without.includes(sample.bottle)).map((sample) => sample.bottle);
  const { save, problem, busy } = useSaving(async () => {
    if (!chosen.length) throw new Error("Choose at least one bottle.");
    if (!values.to.trim()) throw new Error("Say who takes the bottles: a name, or the laboratory's refrigerator.");
    const told = echo(values.temperature, values.unit);
    if (told.problem) throw new Error(told.problem);
    const given = signatureOf(values.given);
    const taken = values.to_kind === "person" ? signatureOf(values.taken) : null;
    if (values.to_kind === "place" && !values.seal.trim()) throw new Error("A locked place needs the number of its seal or lock.");
    const body = { bottles: chosen, to: values.to.trim(), to_kind: values.to_kind, seal: values.seal.trim(), given, taken, temperature: measuredOf(values.temperature, values.unit), note: values.note.trim() };
    await state("custody.handed_over", newId(), body);
    await forget();
    say("Saved on this tablet");
    go("/field/samples");
  });
  const toggle = (code, on) => set("without", on ? values.without.filter((one_) => one_ !== code) : [...values.without, code]);
  return html`<form class="stack" onSubmit=${save} novalidate>
    <fieldset><legend>Bottles</legend><ul class="plain list card">${samples.map((sample) => html`<${Bottle} key=${sample.id} sample=${sample}
      on=${chosen.includes(sample.bottle)} onChange=${(on) => toggle(sample.bottle, on)} />`)}</ul></fieldset>
    <${Choice} label="They go to" value=${values.to_kind} options=${[["person", "A person"], ["place", "A locked place"]]} onChoose=${(key) => set("to_kind", key)} />
    <${TextField} label="To" value=${values.to} maxlength="200" onInput=${(text) => set("to", text)} hint="A person's name, or where the bottles are left." />
    ${values.to_kind === "place" && html`<${TextField} label="Seal or lock number" value=${values.seal} maxlength="60" onInput=${(text) => set("seal", text)} />`}
    <${NumberField} label="Temperature of the ice box" value=${values.temperature} unit=${values.unit} units=${["Cel", "degF"]}
      onInput=${(text) => set("temperature", text)} onUnit=${(unit) => set("unit", unit)} hint="Leave it empty if not measured." />
    <${LongField} label="Note" value=${values.note} onInput=${(text) => set("note", text)} />
    <details><summary>Sign on the glass</summary><${Sign} label="Handed over by" value=${values.given} onSign=${(value) => set("given", value)} />
      ${values.to_kind === "person" && html`<${Sign} label="Taken over by" value=${values.taken} onSign=${(value) => set("taken", value)} />`}</details>
    <${Problem} words=${problem} />
    <div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : `Hand over ${chosen.length} ${chosen.length === 1 ? "bottle" : "bottles"}`}</button></div>
  </form>`;
}

/** The form for handing bottles over. */
export function HandOver() {
  const samples = useView(inHand);
  const [values, set, forget] = useForm("hand_over", BLANK);
  return html`<div class="screen stack"><p class="back"><a href="/field/samples">My samples</a></p><h1>Hand over</h1>
    ${samples.length === 0 ? html`<${Empty} title="No bottle is waiting">Bottles appear here once their sample was saved.<//>`
      : html`<${Form} ...${{ samples, values, set, forget }} />`}</div>`;
}
