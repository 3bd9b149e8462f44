// A point's card: hazards first, then what to expect today, why this dilution, and the readings that shift it.

import { html, useState } from "../parts/html.js";
import { Choice, NumberField, useForm } from "../parts/fields.js";
import { dayAndTime, day, percent, plain, reported, rough } from "../parts/format.js";
import { Empty, Where } from "../parts/frame.js";
import { Strip } from "../parts/strip.js";
import { Tube } from "../parts/tube.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { barsOf, limitToday, numbers, outlookOf, READINGS } from "./outlook.js";

const ACTIVITIES = [["production", "Production"], ["cleaning", "Cleaning"], ["idle", "Idle"]];

/** An empty set of readings, each in its first unit. */
export const noReadings = () => Object.fromEntries(READINGS.map(({ key, units }) => [key, { text: "", unit: units[0] }]));

function Hazards({ point }) {
  const words = useWords();
  const [open, setOpen] = useState(false);
  if (!point.hazards.length) return null;
  const known = new Map((words?.field ?? []).map((hazard) => [hazard.id, hazard]));
  return html`<div class="stack">
    <div class="row">${point.hazards.map((id) => html`<span class="tag stop" key=${id}><span aria-hidden="true">▲</span>${known.get(id)?.name ?? id}</span>`)}
      <button type="button" class="quiet" aria-expanded=${open ? "true" : "false"} onClick=${() => setOpen(!open)}>Cautions</button></div>
    ${open && html`<div class="card stop">${point.hazards.map((id) => html`<p key=${id}><strong>${known.get(id)?.name ?? id}.</strong> ${known.get(id)?.caution ?? ""}</p>`)}
      <p>${words?.no_entry} ${words?.deferral}</p></div>`}
  </div>`;
}

function sentence(planned, chosen, byPerson) {
  const found = planned.plans.find((one_) => one_.dilution_factor === chosen);
  if (byPerson) return `Your choice: ${percent(found.p_in_range)} in range, ${percent(found.p_over)} over.`;
  return planned.why;
}

function share(predictive, ranges, factor, capacity) {
  return capacity ? predictive.quantile(0.5) / factor / capacity : null;
}

/** The expected range with its strip, and the dilution. */
export function Expectation({ outlook, limit, chosen, byPerson, capacity }) {
  const { predictive, planned, ranges } = outlook;
  const [low, middle, high] = [0.05, 0.5, 0.95].map((p) => predictive.quantile(p));
  return html`<div class="row spread"><div><div class="soft">Expected COD today</div>
      <div><span class="big">${rough(middle)}</span> <span class="unit">mg/L</span></div>
      <div class="soft">nine in ten between ${rough(low)} and ${rough(high)}</div></div>
      <div class="row"><${Tube} share=${share(predictive, ranges, chosen, capacity)} height=${64} /></div></div>
    <${Strip} predictive=${predictive} bars=${barsOf(planned, ranges, chosen)} limit=${limit?.value ?? null} />
    <p><strong>${chosen === 1 ? "Do not dilute." : `Dilute 1:${chosen}.`}</strong> ${sentence(planned, chosen, byPerson)}</p>`;
}

/** The readings of now, each shown as it was read. */
export function Readings({ field, onChange }) {
  return READINGS.map(({ key, label, units }) => html`<${NumberField} key=${key} label=${label} value=${field[key]?.text ?? ""} unit=${field[key]?.unit ?? units[0]}
    units=${units.length > 1 ? units : undefined} onInput=${(text) => onChange({ ...field, [key]: { text, unit: field[key]?.unit ?? units[0] } })}
    onUnit=${(unit) => onChange({ ...field, [key]: { text: field[key]?.text ?? "", unit } })} />`);
}

function Past({ recent, zone }) {
  if (!recent?.length) return null;
  return html`<section class="card"><h3>Last results</h3><table><tbody>${[...recent].reverse().slice(0, 5).map((r) => html`<tr key=${r.at}>
    <td>${day(r.at, zone)}</td><td class="right">${reported(r.shown ?? plain(r.cod))} mg/L</td></tr>`)}</tbody></table></section>`;
}

/** The form's values that a point's card and its sample share. */
export const pointDraft = (id) => `point:${id}`;
export const pointStart = () => ({ field: noReadings(), activity: "production", chosen: null, why: "" });

function Dilution({ planned, chosen, v, set }) {
  const [open, setOpen] = useState(false);
  if (!open) return html`<button type="button" class="quiet" onClick=${() => setOpen(true)}>Choose another dilution</button>`;
  return html`<${Choice} label="Dilution" value=${chosen} onChoose=${(factor) => set("chosen", factor)}
      options=${planned.plans.map((p) => [p.dilution_factor, `1:${p.dilution_factor} ${percent(p.p_in_range)}`])} />
    ${v.chosen !== null && html`<div class="field"><label for="why">Reason</label><input id="why" value=${v.why} onInput=${(e) => set("why", e.target.value)} /></div>
      <button type="button" class="quiet" onClick=${() => { set("chosen", null); setOpen(false); }}>Back to the suggestion</button>`}`;
}

/** The card of one point. */
export function PointCard({ id }) {
  const point = useView(() => one("point", id));
  const known = useView(() => one("outlook", id));
  const samples = useView(() => all("sample", id)).slice(-3).reverse();
  const recipes = useView(() => all("recipe")).sort((a, b) => b.working_high - a.working_high);
  const settings = useView(programme);
  const [v, set] = useForm(pointDraft(id), pointStart());
  if (!point) return html`<div class="screen"><${Empty} title="This point is not on this tablet">It appears after the next contact. <a href="/field">All points</a><//></div>`;
  if (!v) return html`<div class="screen"></div>`;
  const limit = limitToday(point, day(new Date(), settings?.zone));
  const outlook = outlookOf(known?.pack, v.field, v.activity, limit);
  const chosen = v.chosen ?? outlook.planned?.choice?.dilution_factor ?? outlook.planned?.plans[0]?.dilution_factor ?? null;
  return html`<div class="screen stack">
    <div><h1>${point.discharger_name}</h1><p class="soft">${point.name}${point.access && `, ${point.access}`}</p>
      <${Hazards} point=${point} />
      <div class="row"><span class="tag">${point.sample_kind}</span>${limit ? html`<span class="tag">limit ${plain(limit.value)} mg/L since ${limit.from}</span>` : html`<span class="tag">no limit</span>`}</div></div>
    <section class="card stack">${outlook.predictive
      ? html`<${Expectation} outlook=${outlook} limit=${limit} chosen=${chosen} byPerson=${v.chosen !== null} capacity=${recipes[0]?.derived?.oxidant_capacity} />
          <p class="soft small">From ${known.n} result${known.n === 1 ? "" : "s"} here${Object.keys(numbers(v.field)).length ? " and the readings below" : ""}.</p>
          <${Dilution} planned=${outlook.planned} chosen=${chosen} v=${v} set=${set} />`
      : html`<${Empty} title="No expectation yet">${recipes.length ? "It comes with the next contact." : html`A recipe is needed first: <a href="/bench/stores">Bench, stores</a>.`}<//>`}</section>
    <section class="card stack"><h2>Readings now</h2>
      <${Choice} label="Activity" value=${v.activity} options=${ACTIVITIES} onChoose=${(activity) => set("activity", activity)} />
      <${Readings} field=${v.field} onChange=${(field) => set("field", field)} /></section>
    ${samples.length > 0 && html`<section class="card"><h3>Samples here</h3><ul class="plain list">${samples.map((s) => html`<li class="item" key=${s.id}>
      <div class="row spread"><strong>${s.bottle}</strong><${Where} about=${s.id} /></div><span class="soft">${s.state}, ${dayAndTime(s.collected_at, settings?.zone)}</span></li>`)}</ul></section>`}
    <${Past} recent=${known?.recent} zone=${settings?.zone} />
    <p><a href="/field">All points</a> · <a href="/emergency">Emergency</a></p>
    <div class="sticky"><a class="button main" href="/field/point/${encodeURIComponent(id)}/take">Take the sample</a></div>
  </div>`;
}
