// What to expect at a point, worked out on the tablet from the pack that the server made.

import { valueOf } from "../parts/measured.js";
import { units } from "../parts/units.js";
import { all, programme } from "../parts/view.js";
import { expected, plan } from "../parts/forecast.js";

/** The field readings in their order: key, label, unit shown first, units to choose from. */
export const READINGS = [
  { key: "conductivity_us_cm", label: "Conductivity", units: ["uS/cm", "mS/cm"], base: "uS/cm" },
  { key: "turbidity_ntu", label: "Turbidity", units: ["NTU", "FNU"], base: "NTU" },
  { key: "ph", label: "pH", units: ["pH"], base: "pH" },
  { key: "temperature_c", label: "Temperature", units: ["Cel", "degF"], base: "Cel" },
];

/** Readings {key: {text, unit}} as numbers; what cannot be read, or is a bound, is left out. */
export function numbers(field) {
  const found = {};
  for (const { key, base } of READINGS) {
    const value = field[key]?.text?.trim() && !/[<>≤≥]/u.test(field[key].text) ? valueOf(field[key], base, units()) : null;
    if (value !== null) found[key] = value;
  }
  return found;
}

/** The recipes as ranges of the forecast, the high one first. */
export function rangesOf(recipes) {
  return recipes
    .map((recipe) => ({
      name: recipe.name,
      recipe: recipe.id,
      low: recipe.working_low,
      high: recipe.working_high,
      chloride_limit: recipe.derived?.chloride_limit ?? null,
      reporting: recipe.working_low,
    }))
    .sort((a, b) => b.high - a.high);
}

/** The limit in force today on a point, the daily one first, or null. */
export function limitToday(point, today) {
  const inForce = point.limits.filter((limit) => limit.from <= today);
  const daily = inForce.filter((limit) => limit.basis === "daily_maximum").at(-1);
  return daily ?? inForce.at(-1) ?? null;
}

/**
 * The expectation and the plans at a point with the readings of now.
 * @returns {{predictive: object|null, planned: object|null, ranges: object[]}}
 */
export function outlookOf(pack, field, activity, limit) {
  const ranges = rangesOf(all("recipe")).slice(0, 1);
  if (!pack || !ranges.length) return { predictive: null, planned: null, ranges };
  const predictive = expected(pack, { days: Date.now() / 86400000, field: numbers(field), activity });
  const settings = programme()?.settings ?? {};
  const planned = plan(predictive, {
    ranges,
    dilutions: settings.dilutions,
    decision_limit: limit?.value ?? null,
    replicates: settings.replicates,
  });
  return { predictive, planned, ranges };
}

/** The bars of the strip: the chosen dilution with its neighbours. */
export function barsOf(planned, ranges, chosen, around = 1) {
  if (!planned) return [];
  const plans = planned.plans;
  const index = plans.findIndex((one) => one.dilution_factor === chosen);
  const from = Math.max(0, Math.min(index - around, plans.length - 2 * around - 1));
  return plans.slice(from, from + 2 * around + 1).map((one) => ({
    factor: one.dilution_factor,
    low: ranges[0].low * one.dilution_factor,
    high: ranges[0].high * one.dilution_factor,
    share: one.p_in_range,
    chosen: one.dilution_factor === chosen,
  }));
}
