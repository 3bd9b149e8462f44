// Handing bottles over: which, to whom, how cold.

import { html } from "../parts/html.js";
import { Check, LongField, NumberField, TextField, useForm, useSaving } from "../parts/fields.js";
import { dayAndTime } from "../parts/format.js";
import { Empty, Frame, Problem, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { read } from "../parts/measured.js";
import { all, one, programme, useView } from "../parts/view.js";

const start = () => ({ picked: [], to: "", temperature: "", note: "" });

/** The form for a hand-over. */
export function HandOver() {
  const samples = useView(() => all("sample")).filter((sample) => sample.state === "taken").reverse();
  const settings = useView(programme);
  const [v, set, forget] = useForm("hand-over", start());
  const { save, problem, busy } = useSaving(async () => {
    const bottles = v.picked.filter((code) => samples.some((sample) => sample.bottle === code));
    if (!bottles.length) throw new Error("Choose at least one bottle.");
    if (!v.to.trim()) throw new Error("Say who or what takes the bottles, e.g. laboratory refrigerator, seal 4471.");
    if (v.temperature.trim() && read(v.temperature).problem) throw new Error(`Temperature: ${read(v.temperature).problem}`);
    const temperature = v.temperature.trim() ? { text: v.temperature, unit: "Cel" } : null;
    await state("custody.handed_over", newId(), { bottles, to: v.to.trim(), temperature, note: v.note });
    await forget().catch(() => {});
    say(`Saved on this tablet: ${bottles.length} handed over.`);
    go("/field/samples");
  });
  if (!v) return html`<${Frame} place="field" title="Hand over"><//>`;
  const pick = (code, on) => set("picked", on ? [...v.picked, code] : v.picked.filter((one_) => one_ !== code));
  return html`<${Frame} place="field" title="Hand over" about=${settings?.name}>
    ${samples.length === 0 ? html`<${Empty} title="No bottles in your hands">Bottles that were taken and not handed over appear here. <a href="/field">All points</a><//>`
      : html`<form class="stack" onSubmit=${save}>
        <section class="card">${samples.map((sample) => html`<${Check} key=${sample.id} checked=${v.picked.includes(sample.bottle)} onChange=${(on) => pick(sample.bottle, on)}
          label=${`${sample.bottle}  ${one("point", sample.point)?.discharger_name ?? ""}, ${dayAndTime(sample.collected_at, settings?.zone)}`} />`)}
          <button type="button" onClick=${() => set("picked", samples.map((sample) => sample.bottle))}>All of them</button></section>
        <${TextField} label="To" value=${v.to} onInput=${(to) => set("to", to)} hint="a person, or a locked place with its seal number" />
        <${NumberField} label="Temperature in the cooler" unit="Cel" value=${v.temperature} onInput=${(temperature) => set("temperature", temperature)} />
        <${LongField} label="Note" value=${v.note} onInput=${(note) => set("note", note)} />
        <${Problem} words=${problem} />
        <button class="main" disabled=${busy}>${busy ? "Saving…" : "Save on this tablet"}</button></form>`}
  <//>`;
}
