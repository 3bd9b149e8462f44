// What to expect of a bottle at the bench: the forecast with what was read at the point, what was measured since and
// what a tube of it has shown.

import { html } from "../parts/html.js";
import { around, choiceOf, costWords, forecastOf, limitOf, plansOf } from "../parts/ask.js";
import { dilution, percent, rough } from "../parts/format.js";
import { valueOf } from "../parts/measured.js";
import { Strip } from "../parts/strip.js";
import { units } from "../parts/units.js";
import { one } from "../parts/view.js";

/** What the last tube has shown, where the bottle is to be digested again because of it. */
function seenOf(bottle) {
  const last = bottle.again && bottle.results.map((id) => one("result", id)).findLast((result) => result?.run === bottle.runs.at(-1));
  if (last?.status === "over") return { bound: last.top, above: true };
  return last?.status === "below" ? { bound: last.reporting_level, above: false } : null;
}

/** The forecast of a bottle's sample; null where its sample or its point's outlook is not here. */
export function outlookOf(bottle) {
  const { sampled, place } = bottle;
  if (!sampled || !place) return null;
  const { field, activity, solids } = sampled;
  const chloride = valueOf(one("interferents", bottle.code)?.chloride?.given ?? null, "mg/L", units()) ?? undefined;
  return forecastOf(place, { field, activity, solids, chloride, volume_ml: bottle.volume_ml, at: new Date(sampled.collected_at).getTime() }, seenOf(bottle));
}

/** The dilution that a bottle begins with: the server's next one, else the plan of the manhole, else the forecast's. */
export function firstFactor(bottle, recipe) {
  const { again, sampled } = bottle;
  const planned = again ? { recipe: again.recipe, factor: again.factor } : { recipe: sampled?.plan?.recipe, factor: sampled?.plan?.dilution_factor };
  const meant = planned.factor && (planned.recipe ?? recipe?.id) === recipe?.id;
  return meant ? planned.factor : (choiceOf(outlookOf(bottle), recipe?.id)?.factor ?? planned.factor ?? 1);
}

/** The strip of a bottle and its chances at the dilution that is chosen. */
export function Outlook({ bottle, factor, recipe }) {
  const forecast = outlookOf(bottle);
  const plans = forecast ? plansOf(forecast, recipe.id) : [];
  const plan = plans.find((one_) => one_.factor === factor);
  if (!plan) return null;
  const best = choiceOf(forecast, recipe.id);
  const other = best && best.expected_tubes < 0.95 * (plan.expected_tubes ?? Infinity) ? ` The forecast would take ${dilution(best.factor)}: ${percent(best.share)}.` : "";
  return html`<div class="stack"><${Strip} predictive=${forecast.predictive} bars=${around(plans, factor)} limit=${limitOf(bottle.place)?.value ?? null} />
    <p>Expected ${rough(forecast.median)} mg/L, nine in ten between ${rough(forecast.low)} and ${rough(forecast.high)}. <strong>${dilution(factor)}: ${percent(plan.share)} in range</strong>, ${percent(plan.p_over)} over, ${percent(plan.p_below)} under.${other} <span class="soft">${[costWords(plan), ...forecast.split].join(" ")}</span></p>
    ${[...plan.objections, ...forecast.alarms].map((words) => html`<p class="above" key=${words}>▲ ${words}</p>`)}</div>`;
}
