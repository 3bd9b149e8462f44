// The forecast asked for a point and what is known of its sample, and its answer in words. It reads this device's records only.

import { day, dilution, percent, plain, rough } from "./format.js";
import { expected } from "./forecast.js";
import { read, valueOf } from "./measured.js";
import { beyond, plan, worthMeasuring } from "./planning.js";
import { units } from "./units.js";
import { all, one, programme } from "./view.js";

const UNITS = { conductivity_us_cm: "uS/cm", turbidity_ntu: "NTU", ph: "pH", temperature_c: "Cel", chloride_mg_l: "mg/L" };
const NAMES = { conductivity_us_cm: "Conductivity", turbidity_ntu: "Turbidity", ph: "pH", temperature_c: "Temperature" };
const DAY_MS = 86400000;
const FEW = 5;

/** Readings as numbers in the units of their names; slips are left out, and bounds except of chloride. */
function numbersOf(field) {
  const found = {};
  for (const [name, given] of Object.entries(field ?? {})) {
    const number = given && UNITS[name] && (name === "chloride_mg_l" || read(given.text).sign === "=") ? valueOf(given, UNITS[name], units()) : null;
    if (number !== null) found[name] = number;
  }
  return found;
}

const rangesOf = (recipes) => recipes.map((recipe) => ({
  name: recipe.id, low: recipe.working_low, high: recipe.working_high, reporting: recipe.working_low,
  chloride_limit: recipe.derived?.chloride_limit ?? null, mercury_mg: recipe.derived?.per_tube_mg?.mercury ?? null,
}));

function told(one_, recipes) {
  const { id, name, working_low: low, working_high: high, derived } = recipes.find((recipe) => recipe.id === one_.range);
  const factor = one_.dilution_factor;
  return { ...one_, recipe: id, name, factor, share: one_.p_in_range, low: low * factor, high: high * factor, capacity: derived?.oxidant_capacity ?? null };
}

/** A reading far outside its past, named, and what is done about it. */
const boundedWords = (name) => `${NAMES[name]} lies far outside what was seen here: check the reading. Its pull is bounded.`;

function basisWords(outlook) {
  if (outlook.n >= FEW) return [];
  const known = outlook.n === 0 ? "No result of this point yet" : `Only ${outlook.n} ${outlook.n === 1 ? "result" : "results"} of this point`;
  return [`${known}: this rests on its sector and stays wide.`];
}

const whyOf = ({ p_in_range: inside, p_over: over, p_below: below }) => `${percent(inside)} of samples like this fall in range; ${percent(over)} would go over, ${percent(below)} under.`;

/** Why nothing is usable. */
const againstWords = (plans) => `${[...new Set(plans.flatMap((one_) => one_.objections))].sort().join("; ") || "Practically no sample would be in range"}.`;

/** What stands against a smaller dilution of the chosen method, which would else have been the better one. */
function smallerWords(plans, choice) {
  const worse = plans.filter((one_) => one_.recipe === choice.recipe && one_.factor < choice.factor && !one_.usable && one_.share > choice.share).at(-1);
  return worse ? [`Not ${dilution(worse.factor)}: ${worse.objections[0]}.`] : [];
}

/** The best plan of another method, where the chosen one is no sure thing or dilutes more. */
function otherWords(plans, choice) {
  const others = plans.filter((one_) => one_.recipe !== choice.recipe && one_.usable && one_.expected_tubes && one_.expected_tubes <= 2 * choice.expected_tubes);
  const best = others.sort((a, b) => a.expected_tubes - b.expected_tubes)[0];
  return best && (choice.share < 0.9 || best.factor < choice.factor) ? [`Or ${best.name}, ${dilution(best.factor)}: ${percent(best.share)} in range.`] : [];
}

function splitWords(split, plans, choice) {
  if (!split) return [];
  const [a, b] = split.plans.map((i) => plans[i]);
  const method = a.recipe === b.recipe ? "" : ` (${a.name} and ${b.name})`;
  return [`Two dilutions side by side, ${dilution(a.factor)} and ${dilution(b.factor)}${method}, ${split.tubes_each} tubes each, would need ${plain(split.expected_tubes, 1)} tubes and not ${plain(choice.expected_tubes, 1)}: ${percent(split.p_in_range)} that one of them is in range.`];
}

const ml = (value) => plain(value, value % 1 ? 1 : 0);

/** Tubes and mercury to expect until there is a result, repeats counted, and what one digestion takes of the sample. */
export function costWords({ expected_tubes: tubes, expected_mercury_mg: mercury, needed_ml: needed }) {
  const spent = tubes ? `About ${plain(tubes, 1)} tubes${mercury ? ` and ${plain(mercury)} mg of mercury` : ""} until it has a result. ` : "";
  return `${spent}${needed ? `One digestion takes ${ml(needed)} mL of sample.` : ""}`;
}

/** How much to bring: enough for a repeat, a duplicate and a spike as well. */
export const bringWords = ({ needed_ml: needed }) => (needed ? `Bring ${ml(Math.max(100, 4 * needed))} mL or more: that is enough for a repeat, a duplicate and a spike.` : "");

/** What the best reading not taken would add, or that none would. */
function worthWords([best], { low, high }) {
  if (!best) return "No further reading would help the choice of the dilution.";
  const lift = `lift the share in range from ${percent(best.p_in_range_now)} to about ${percent(best.p_in_range_expected)}`;
  const narrow = best.high / best.low < high / low ? `narrow the range from ${rough(low)} to ${rough(high)} to about ${rough(best.low)} to ${rough(best.high)} mg/L and ` : "";
  return `${NAMES[best.field]} measured now would ${narrow}${lift}.`;
}

/** The daily maximum in force on a day (today when none is named), or null. */
export function limitOf(point, on = day(new Date(), programme()?.zone)) {
  const inForce = point.limits.filter((limit) => limit.basis === "daily_maximum" && limit.from <= on);
  return inForce.at(-1) ?? null;
}

/**
 * What to expect of a sample of a point and how to dilute it; null without an outlook of the point.
 * @param {object} point
 * @param {object} sample {field, activity, at, chloride, volume_ml, solids}: readings as measured values, the moment in ms
 * @param {{bound: number, above: boolean}|null} seen what a tube of it has shown
 */
export function forecastOf(point, { field, activity = null, at = Date.now(), chloride, volume_ml = null, solids = false }, seen = null) {
  const outlook = one("outlook", point.id);
  if (!outlook?.pack?.regressions) return null;
  const [recipes, settings] = [all("recipe"), programme()?.settings];
  const { chloride_mg_l: strip = null, ...readings } = numbersOf(field);
  const now = { days: at / DAY_MS, field: readings, activity };
  const before = expected(outlook.pack, now);
  const predictive = seen ? beyond(before, seen.bound, seen.above) : before;
  const [ranges, factors] = [rangesOf(recipes), settings?.dilutions ?? [1]];
  const made = plan(predictive, ranges, factors, {
    chloride: chloride ?? strip, volume_ml, solids, decision_limit: limitOf(point)?.value ?? null, replicates: settings?.replicates ?? 3,
  });
  const plans = made.plans.map((one_) => told(one_, recipes));
  const choice = made.choice && told(made.choice, recipes);
  const ends = { low: predictive.quantile(0.05), high: predictive.quantile(0.95) };
  const judged = one("trust", point.id);
  return {
    predictive, median: predictive.quantile(0.5), ...ends, plans, choice, factors, shifted: Object.keys(readings).length > 0 || activity !== null,
    why: choice ? whyOf(choice) : recipes.length ? againstWords(plans) : "", split: choice ? splitWords(made.split, plans, choice) : [],
    reasons: choice ? [...smallerWords(plans, choice), ...otherWords(plans, choice)] : [], severalRanges: recipes.length > 1,
    worth: seen || !choice ? "" : worthWords(worthMeasuring(outlook.pack, now, made, ranges), ends), alarms: before.bounded.map(boundedWords),
    notes: [...basisWords(outlook), ...(judged?.predictable === false ? judged.words.slice(0, 1) : []), ...(recipes.length ? [] : ["The laboratory has adopted no recipe yet: the dilution follows once it has."])],
  };
}

/** The plans of one method, the smallest dilution first. */
export const plansOf = (forecast, recipe) => (forecast?.plans ?? []).filter((one_) => one_.recipe === (recipe ?? forecast.choice?.recipe ?? forecast.plans[0]?.recipe))
  .sort((a, b) => a.factor - b.factor);

/** The best usable plan of one method, or null. */
export const choiceOf = (forecast, recipe) => plansOf(forecast, recipe).filter((one_) => one_.usable && one_.expected_tubes !== null)
  .sort((a, b) => a.expected_tubes - b.expected_tubes)[0] ?? null;

/** A plan between its neighbours, as bars of the strip: three tell why this one. */
export function around(plans, factor) {
  const at = Math.max(0, plans.findIndex((one_) => one_.factor === factor));
  const first = Math.min(Math.max(0, at - 1), Math.max(0, plans.length - 3));
  return plans.slice(first, first + 3).map((one_) => ({ ...one_, chosen: one_.factor === factor }));
}
