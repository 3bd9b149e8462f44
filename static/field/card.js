// The card of a point: its dangers first, then what to expect, the dilution, the readings, and the sample.

import { html, useState } from "../parts/html.js";
import { Choice, NumberField, useForm } from "../parts/fields.js";
import { ago, day, dayAndTime, plain, reported } from "../parts/format.js";
import { Empty, Where, go } from "../parts/frame.js";
import { Hold } from "../parts/hold.js";
import { shown } from "../parts/units.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { Expected } from "./expected.js";
import { ACTIVITIES, BLANK, cardOf, draftKey, hazardOf, limitOf, READINGS, Solids } from "./point.js";
import { openVisit, samplerAt } from "./sampler.js";

/** The dangers of a point with the usual precautions, first on every screen of it. */
export function Hazards({ point }) {
  const words = useWords();
  if (!point.hazards.length) return null;
  return html`<section class="hazards" aria-label="Dangers at this point">
    ${point.hazards.map((id) => {
      const hazard = hazardOf(words, id);
      return html`<p key=${id}><strong class="tag stop"><span aria-hidden="true">▲</span>${hazard.name}</strong> <span>${hazard.caution}</span></p>`;
    })}
    ${point.hazards.some((id) => id === "gases" || id === "confined_space") && words && html`<p><strong>${words.no_entry}</strong></p>`}
  </section>`;
}

function Reading({ field, label, units, values, set }) {
  const [open, setOpen] = useState(false);
  const unit = values[`${field}_unit`];
  if (!open && !values[field]) {
    return html`<div class="reading row spread"><span>${label}<br /><span class="soft">– ${shown(unit)}</span></span>
      <button type="button" onClick=${() => setOpen(true)}>Enter<span class="unseen"> ${label}</span></button></div>`;
  }
  return html`<div class="reading"><${NumberField} label=${label} value=${values[field]} unit=${unit} autofocus=${open}
    units=${units.length > 1 ? units : undefined} onInput=${(text) => set(field, text)} onUnit=${(one_) => set(`${field}_unit`, one_)} /></div>`;
}

/** Readings at the point and what goes on there; each shifts the expectation at once. */
function Readings({ values, set }) {
  return html`<section class="card stack"><h2>Readings here</h2>
    ${READINGS.map(([field, label, units]) => html`<${Reading} key=${field} ...${{ field, label, units, values, set }} />`)}
    <${Choice} label="What goes on at the firm" value=${values.activity} options=${ACTIVITIES}
      onChoose=${(key) => set("activity", values.activity === key ? null : key)} />
    <${Solids} ...${{ values, set }} />
  </section>`;
}

function Limits({ point }) {
  if (!point.limits.length) return html`<p class="soft">No limit is set for this point.</p>`;
  const basis = { daily_maximum: "Daily maximum", monthly_average: "Monthly average" };
  return html`<ul class="plain">${point.limits.map((limit) => html`<li key=${limit.basis + limit.from}>
    ${basis[limit.basis]} <strong>${plain(limit.value)} mg/L</strong> <span class="soft">from ${limit.from}; ${limit.source}</span></li>`)}</ul>`;
}

function Past({ point }) {
  const recent = one("outlook", point.id)?.recent ?? [];
  const taken = all("sample", point.id).filter((sample) => !sample.results?.length);
  if (!recent.length && !taken.length) return html`<p class="soft">No sample was taken here yet.</p>`;
  const zone = programme()?.zone;
  return html`<ul class="plain past">
    ${[...taken].reverse().map((sample) => html`<li key=${sample.id} class="row spread"><span>${day(sample.collected_at, zone)}, bottle <strong>${sample.bottle}</strong>, ${sample.state} <${Hold} sample=${sample} /></span><${Where} about=${sample.id} /></li>`)}
    ${[...recent].reverse().map((result) => html`<li key=${result.at} class="row spread"><span class="soft">${day(result.at, zone)}</span><span>${reported(result.shown)} mg/L</span></li>`)}
  </ul>`;
}

function Head({ point }) {
  const limit = limitOf(point);
  return html`<header><h1>${point.discharger_name}</h1><p class="soft where">${point.name}${point.access && `. ${point.access}`}</p>
    <p class="row">${point.sample_kind === "composite" && html`<span class="tag">24-h composite</span>`}
      ${point.sector && html`<span class="tag">${point.sector}</span>`}${limit && html`<span class="tag">limit ${plain(limit.value)} mg/L</span>`}</p></header>`;
}

/** The card of one point. */
export function Card({ id }) {
  const point = useView(() => one("point", id));
  const [values, set] = useForm(draftKey(id), BLANK);
  if (!point) {
    return html`<div class="screen"><h1>Unknown point</h1><${Empty} title="This point is not on this tablet">It comes with the next
      contact to the server, if it exists. <a href="/field">All points</a><//></div>`;
  }
  const last = all("sample", id).at(-1);
  const visit = openVisit(id);
  const sampler = samplerAt(id);
  return html`<div class="screen stack card-of-point">
    <p class="back"><a href="/field">All points</a></p>
    <${Head} point=${point} />
    <${Hazards} point=${point} />
    <div class="cols"><${Expected} point=${point} values=${values} set=${set} /><${Readings} values=${values} set=${set} /></div>
    <section class="card stack"><h2>Limits and past</h2><${Limits} point=${point} /><${Past} point=${point} /></section>
    <div class="row"><a class="button" href=${visit ? `/field/visit/${visit.id}` : `${cardOf(id)}/arrive`}>${visit ? "Go on with the visit" : "Begin a visit"}</a>
      ${!sampler && html`<a class="button" href="${cardOf(id)}/sampler">Set a sampler up</a>`}</div>
    <div class="sticky"><button type="button" class="main" onClick=${() => go(`${cardOf(id)}/take`)}>${sampler ? "Pick the composite up" : "Take the sample"}</button>
      ${last && html`<p class="soft small after">Last sample ${ago(last.recorded_at ?? last.collected_at)}, ${dayAndTime(last.collected_at, programme()?.zone)}</p>`}</div>
  </div>`;
}
