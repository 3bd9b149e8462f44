// What to expect at a point and the dilution that follows from it; a person may choose another one and says why.

import { html, useState } from "../parts/html.js";
import { Choice, TextField } from "../parts/fields.js";
import { around, bringWords, costWords, forecastOf, plansOf } from "../parts/ask.js";
import { dilution, percent, plain, rough } from "../parts/format.js";
import { stepWords, stepsOf } from "../parts/glassware.js";
import { Strip } from "../parts/strip.js";
import { Tube, colourName } from "../parts/tube.js";
import { programme, useView } from "../parts/view.js";
import { fieldOf, limitOf } from "./point.js";

/** What to expect at a point with what was typed there; null without an outlook. */
export function useForecast(point, values) {
  const { activity, solids } = values;
  return useView(() => forecastOf(point, { field: fieldOf(values), activity, solids }));
}

/** The plan that counts: what the person chose, or else what the forecast chose. */
export function planOf(forecast, values) {
  if (values.factor === null) return forecast?.choice ?? null;
  const known = forecast && plansOf(forecast).find((plan) => plan.factor === values.factor);
  return known || { recipe: null, factor: values.factor, steps: stepsOf(values.factor, values) ?? [], share: null, objections: [] };
}

function Figure({ forecast, plan }) {
  const share = plan?.capacity ? forecast.median / plan.factor / plan.capacity : null;
  return html`<div class="beside"><div>
      <p class="soft tight">Expected COD ${forecast.shifted ? "with these readings" : "today"}</p>
      <p class="big tight">${rough(forecast.median)} <span class="unit">mg/L</span></p>
      <p class="soft tight">nine in ten between ${rough(forecast.low)} and ${rough(forecast.high)}</p></div>
    ${share !== null && html`<figure class="tube-now"><${Tube} share=${share} /><figcaption>${percent(Math.min(1, share))} used, ${colourName(share)}</figcaption></figure>`}
  </div>`;
}

function Dilution({ plan, forecast, chosen }) {
  const steps = plan.steps.length ? `${stepWords(plan.steps)}. ` : "";
  const range = forecast?.severalRanges && plan.name ? `Recipe: ${plan.name}. ` : "";
  const chance = plan.share === null ? "" : `${percent(plan.share)} in range. `;
  return html`<p class="dilute"><strong>${plan.factor === 1 ? "Do not dilute." : `Dilute 1:${plain(plan.factor)}.`}</strong> ${" "}
      ${chosen ? html`Your choice. ${chance}` : `${forecast.why} `}<span class="soft">${steps}${range}</span></p>
    ${plan.objections.map((words) => html`<p class="above" key=${words}>▲ ${dilution(plan.factor)}: ${words}.</p>`)}`;
}

function Another({ forecast, values, set }) {
  const [open, setOpen] = useState(false);
  const picked = values.factor !== null;
  if (!open && !picked) {
    return html`<button type="button" onClick=${() => setOpen(true)}>${forecast ? "Choose another dilution" : "Choose a dilution"}</button>`;
  }
  const factors = forecast?.factors ?? programme()?.settings.dilutions ?? [1];
  const options = factors.map((factor) => {
    const share = forecast && plansOf(forecast).find((plan) => plan.factor === factor)?.share;
    const name = factor === 1 ? "none" : `1:${plain(factor)}`;
    return [factor, share === undefined || share === null ? name : html`<span>${name}</span> <span class="soft">${percent(share)}</span>`];
  });
  const back = () => {
    set("factor", null);
    set("reason", "");
    setOpen(false);
  };
  return html`<div class="stack factors">
    <${Choice} label=${forecast ? "Dilution, and its share in range" : "Dilution"} value=${values.factor} options=${options} onChoose=${(factor) => set("factor", factor)} />
    ${picked && html`<${TextField} label="Why this one" value=${values.reason} onInput=${(text) => set("reason", text)} hint="It stays beside the sample: for example what the water looks like." />`}
    <button type="button" class="quiet" onClick=${back}>${forecast ? "Back to the proposed one" : "Choose none"}</button>
  </div>`;
}

/** The card with the expectation, the strip and the dilution. */
export function Expected({ point, values, set }) {
  const forecast = useForecast(point, values);
  const plan = planOf(forecast, values);
  if (!forecast) {
    return html`<section class="card stack"><h2>No expectation yet</h2>
      <p class="soft">The server has not sent one for this point. Take the sample all the same; the dilution can be settled at the bench.</p>
      ${plan && html`<${Dilution} plan=${plan} chosen=${true} />`}
      <${Another} forecast=${null} values=${values} set=${set} /></section>`;
  }
  const soft = [...(plan?.needed_ml ? [`${costWords(plan)} ${bringWords(plan)}`] : []), ...forecast.reasons, ...forecast.split, ...forecast.notes];
  return html`<section class="card stack" aria-label="Expectation">
    <${Figure} forecast=${forecast} plan=${plan} />
    <${Strip} predictive=${forecast.predictive} bars=${plan ? around(plansOf(forecast), plan.factor) : []} limit=${limitOf(point)?.value ?? null} />
    ${plan && html`<${Dilution} plan=${plan} forecast=${forecast} chosen=${values.factor !== null} />`}
    ${!plan && html`<p class="above">▲ No dilution at hand fits. ${forecast.why}</p>`}
    ${forecast.worth && html`<p class="worth" role="status">${forecast.worth}</p>`}
    ${forecast.alarms.map((words) => html`<p class="above" role="status" key=${words}>▲ ${words}</p>`)}
    ${soft.map((words) => html`<p class="soft" key=${words}>${words}</p>`)}
    <${Another} forecast=${forecast} values=${values} set=${set} />
    <p><a href=${`/review/trust/${encodeURIComponent(point.id)}`}>How far to trust this</a></p>
  </section>`;
}
