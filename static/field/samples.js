// The samples of this person: where each one is, and which bottles are still in hand.

import { html } from "../parts/html.js";
import { dayAndTime, dilution } from "../parts/format.js";
import { Empty, Where } from "../parts/frame.js";
import { Hold } from "../parts/hold.js";
import { usePerson } from "../parts/person.js";
import { all, one, programme, useView } from "../parts/view.js";
import { cardOf, nameOf } from "./point.js";

function Row({ sample }) {
  const point = one("point", sample.point);
  const zone = programme()?.zone;
  return html`<li class="item">
    <div class="row spread"><strong class="code">${sample.bottle}</strong><${Where} about=${sample.id} /></div>
    <div>${point ? html`<a class="inline" href=${cardOf(sample.point)}>${nameOf(point)}</a>` : "a point that is not on this tablet"}</div>
    <div class="under"><span>${dayAndTime(sample.collected_at, zone)}, ${sample.state}${sample.holder ? ` (${sample.holder})` : ""}</span><${Hold} sample=${sample} /></div>
    ${sample.doubts?.map((words) => html`<div class="above" key=${words}>▲ ${words}</div>`)}
    ${sample.plan && html`<div class="under"><span>plan: ${dilution(sample.plan.dilution_factor)}${sample.plan.chosen_by === "person" ? `, chosen by ${sample.by_name || "a person"}` : ""}</span></div>`}
  </li>`;
}

/** All samples of the person who is here, newest first. */
export const samplesOf = (person) => all("sample").filter((sample) => !person?.id || sample.by === person.id).reverse();

/** Custody forms of the last hand-overs; the server prints them. */
function Forms() {
  const zone = useView(programme)?.zone;
  const overs = useView(() => all("hand_over")).reverse().slice(0, 5);
  if (!overs.length) return null;
  return html`<section class="card"><h2>Custody forms to print</h2><ul class="plain">${overs.map((over) => html`<li key=${over.id}>
    <a href="/api/papers/hand-over/${encodeURIComponent(over.id)}.pdf" target="_blank">${over.bottles.join(", ")}</a> to ${over.to}, ${dayAndTime(over.at, zone)}</li>`)}</ul></section>`;
}

/** The list of one's own samples. */
export function Samples() {
  const person = usePerson();
  const samples = useView(() => samplesOf(person));
  const inHand = samples.filter((sample) => sample.state === "taken");
  return html`<div class="screen stack"><p class="back"><a href="/field">All points</a></p>
    <h1>My samples</h1>
    ${inHand.length > 0 && html`<div class="card row spread"><span><strong>${inHand.length}</strong> ${inHand.length === 1 ? "bottle is" : "bottles are"} in your hands.</span>
      <a class="button main" href="/field/hand-over">Hand over</a></div>`}
    ${samples.length === 0 ? html`<${Empty} title="You have taken no sample yet">Choose a point, then “Take the sample”. <a href="/field">All points</a><//>`
      : html`<ul class="plain list">${samples.slice(0, 100).map((sample) => html`<${Row} key=${sample.id} sample=${sample} />`)}</ul>`}
    <${Forms} />
  </div>`;
}
