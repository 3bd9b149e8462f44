// Samples by day, each with its state and where its entry is.

import { html, useState } from "../parts/html.js";
import { Choice } from "../parts/fields.js";
import { dayAndTime, left } from "../parts/format.js";
import { Empty, Frame, Where } from "../parts/frame.js";
import { all, one, programme, useView } from "../parts/view.js";

const OPEN = new Set(["taken", "handed over", "received", "in digestion"]);

function Row({ sample, zone }) {
  const point = one("point", sample.point);
  return html`<li class="item"><div class="row spread"><strong>${sample.bottle}</strong><${Where} about=${sample.id} /></div>
    <div>${point?.discharger_name}, ${point?.name}</div>
    <div class="under"><span>${sample.state}${sample.holder ? `, with ${sample.holder}` : ""}</span><span>${dayAndTime(sample.collected_at, zone)}</span></div>
    ${OPEN.has(sample.state) && html`<div class="soft small">analysis to start: ${left(sample.hold_until)}</div>`}</li>`;
}

/** The list of samples. */
export function Samples() {
  const [which, setWhich] = useState("open");
  const samples = useView(() => all("sample")).reverse();
  const settings = useView(programme);
  const found = samples.filter((sample) => which === "all" || OPEN.has(sample.state)).slice(0, 200);
  return html`<${Frame} place="field" title="Samples" about=${settings?.name}>
    <div class="stack"><${Choice} label="Show" value=${which} options=${[["open", "Not finished"], ["all", "All"]]} onChoose=${setWhich} />
    ${found.length ? html`<ul class="plain list">${found.map((sample) => html`<${Row} key=${sample.id} sample=${sample} zone=${settings?.zone} />`)}</ul>`
      : html`<${Empty} title="No samples">Choose a <a href="/field">discharge point</a> and take one.<//>`}
    <div class="row"><a class="button" href="/field/hand-over">Hand over bottles</a><a class="button" href="/field">All points</a></div></div>
  <//>`;
}
