// The forecast's twin on this device, asked in the Field's words. Until it is loaded: undefined; without an outlook: null.

import { useEffect, useState } from "../parts/html.js";
import { percent } from "../parts/format.js";
import { read, valueOf } from "../parts/measured.js";
import { units } from "../parts/units.js";
import { all, one, programme, useView } from "../parts/view.js";
import { stepsOf } from "./glassware.js";
import { limitOf, READINGS } from "./point.js";

const UNITS = { conductivity_us_cm: "uS/cm", turbidity_ntu: "NTU", ph: "pH", temperature_c: "Cel" };

let loaded;

/** Load the twin once; a shell without it says so by null. */
function useTwin() {
  const [twin, setTwin] = useState(loaded);
  useEffect(() => {
    if (loaded !== undefined) return;
    import("../parts/forecast.js")
      .catch(() => null)
      .then((found) => {
        loaded = found;
        setTwin(() => found);
      });
  }, []);
  return twin;
}

const DAY_MS = 86400000;

/** The readings that count as numbers now, in the units of their names; bounds and slips are left out. */
function fieldOf(values) {
  const found = {};
  for (const [key, , , name] of READINGS) {
    const text = values[key];
    if (!UNITS[name] || !text?.trim() || read(text).sign !== "=") continue;
    const number = valueOf({ text, unit: values[`${key}_unit`] }, UNITS[name], units());
    if (number !== null) found[name] = number;
  }
  return found;
}

/** The methods at hand: each recipe's working range, by its id. */
function rangesOf(recipes) {
  return recipes.map((recipe) => ({
    name: recipe.id, low: recipe.working_low, high: recipe.working_high,
    chloride_limit: recipe.derived?.chloride_limit ?? null, reporting: recipe.working_low,
  }));
}

function planFrom(plan, recipes) {
  const recipe = recipes.find((one_) => one_.id === plan.range);
  const factor = plan.dilution_factor;
  return {
    recipe: recipe.id, name: recipe.name, factor, share: plan.p_in_range, over: plan.p_over, below: plan.p_below,
    low: recipe.working_low * factor, high: recipe.working_high * factor, capacity: recipe.derived?.oxidant_capacity ?? null,
    steps: plan.steps ?? stepsOf(factor) ?? [], usable: plan.usable, objections: plan.objections,
  };
}

function notesOf(predictive, outlook, recipes) {
  const notes = predictive.bounded.map((name) => {
    const label = READINGS.find(([, , , body]) => body === name)?.[1] ?? name;
    return `${label} lies far outside what was seen here: check the reading; its pull is bounded.`;
  });
  if (outlook.n < 5) {
    const known = outlook.n === 0 ? "No result of this point yet" : `Only ${outlook.n} ${outlook.n === 1 ? "result" : "results"} of this point`;
    notes.push(`${known}: this rests on its sector and stays wide.`);
  }
  if (!recipes.length) notes.push("The laboratory has adopted no recipe yet: the dilution follows once it has.");
  return notes;
}

/** Why the choice, with shares that never say 0 or 100 when they are neither. */
function whyOf({ choice, why }) {
  if (!choice) return why;
  const { p_in_range: inside, p_over: over, p_below: below } = choice;
  return `${percent(inside)} of samples like this fall in range; ${percent(over)} would go over, ${percent(below)} under.`;
}

/** Ask the twin; the answer in the Field's words. */
export function ask(twin, { outlook, recipes, settings, limit, values, now }) {
  const field = fieldOf(values);
  const predictive = twin.expected(outlook.pack, { days: now / DAY_MS, field, activity: values.activity });
  const dilutions = settings?.dilutions ?? [1];
  const planned = twin.plan(predictive, {
    ranges: rangesOf(recipes), dilutions, chloride: read(values.chloride ?? "").value ?? null, decision_limit: limit, replicates: settings?.replicates ?? 3,
  });
  return {
    predictive, median: predictive.quantile(0.5), low: predictive.quantile(0.05), high: predictive.quantile(0.95),
    plans: planned.plans.map((plan) => planFrom(plan, recipes)), factors: dilutions,
    choice: planned.choice && planFrom(planned.choice, recipes), why: recipes.length ? whyOf(planned) : "",
    severalRanges: recipes.length > 1, notes: notesOf(predictive, outlook, recipes), shifted: Object.keys(field).length > 0 || values.activity !== null,
  };
}

/**
 * What to expect at a point with what was read there.
 * @returns {undefined | null | {predictive: object, median: number, low: number, high: number, plans: object[],
 *   choice: object|null, factors: number[], why: string, notes: string[], severalRanges: boolean, shifted: boolean}}
 */
export function useForecast(point, values) {
  const twin = useTwin();
  const outlook = useView(() => one("outlook", point.id));
  const recipes = useView(() => all("recipe"));
  if (twin === undefined) return undefined;
  if (twin === null || !outlook?.pack?.regressions) return null;
  const limit = limitOf(point)?.value ?? null;
  return ask(twin, { outlook, recipes, settings: programme()?.settings, limit, values, now: Date.now() });
}
