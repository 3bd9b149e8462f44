// Dilutions with their chances, the twin of app/forecast/planning.py and worth.py, held to the same vectors.

import { READINGS, expected } from "./forecast.js";
import { stepsOf, relativeU } from "./glassware.js";

const LEAST_CHANCE = 1e-6;
const TUBE_ML = 2.5;
const LEAST_GAIN = 0.005;

/** Gauss-Hermite nodes above zero and their shares; those of 21 that weigh less than a millionth are left out. */
const NODES = [
  [0, 0.270260183573], [0.678045692441, 0.215333715695], [1.35976582321, 0.108392285626], [2.04910246826, 0.0339527297865],
  [2.75059298105, 0.00643969705141], [3.46984669048, 0.000708047795482], [4.21434398169, 4.21923474255e-5], [4.99496394478, 1.22535483615e-6],
].flatMap(([node, share]) => (node ? [[-node, share], [node, share]] : [[0, share]]));

/** A meter's reading at a place on the scale that the forecast takes it on. */
const METER = [(v) => 1000 * Math.exp(v), (v) => 50 * Math.exp(v), (v) => v + 7.5, (v) => 10 * v + 20];

/** A whole number as Python writes it: a half goes to the even neighbour. */
function whole(value) {
  const up = Math.round(value);
  return String(up - value === 0.5 && up % 2 ? up - 1 : up);
}

const short = (value) => String(Number(value.toPrecision(6)));

function objections(range, factor, steps, sample) {
  const { chloride, decision_limit: limit, volume_ml: volume } = sample;
  const found = [];
  if (chloride != null && range.chloride_limit != null && chloride / factor > range.chloride_limit) {
    found.push(`${whole(chloride / factor)} mg/L chloride after dilution is above ${whole(range.chloride_limit)}`);
  }
  if (range.reporting != null && limit != null && range.reporting * factor > limit) {
    found.push(`the reporting level after dilution, ${whole(range.reporting * factor)} mg/L, is above the limit of ${whole(limit)}`);
  }
  const needed = neededMl(steps, sample);
  if (volume != null && needed !== null && volume < needed) {
    found.push(`${short(needed)} mL of sample are needed, ${short(volume)} mL are at hand`);
  }
  if (!steps) found.push("the glassware at hand does not make this dilution");
  return found;
}

/** What one digestion takes of the sample, mL; null where no glassware makes the dilution. */
const neededMl = (steps, { replicates }) => steps && (steps[0]?.pipette_ml ?? replicates * TUBE_ML);

function planOf(range, factor, predictive, sample) {
  const steps = stepsOf(factor, sample);
  const below = predictive.cdf(range.low * factor);
  const over = 1 - predictive.cdf(range.high * factor);
  const inside = Math.max(0, 1 - below - over);
  const tubes = inside > LEAST_CHANCE ? sample.replicates / inside : null;
  const found = objections(range, factor, steps, sample);
  return {
    range: range.name, dilution_factor: factor, steps: steps ?? [], relative_u: steps && relativeU(steps),
    p_in_range: inside, p_over: over, p_below: below, expected_tubes: tubes, usable: !found.length, objections: found,
    chloride_after: sample.chloride == null ? null : sample.chloride / factor,
    reporting_after: range.reporting == null ? null : range.reporting * factor,
    expected_mercury_mg: range.mercury_mg == null || tubes === null ? null : range.mercury_mg * tubes,
    needed_ml: neededMl(steps, sample),
  };
}

/** The two usable plans that together need fewer tubes than any single one. */
function splitOf(plans, best, replicates) {
  const usable = plans.map((plan, i) => [plan, i]).filter(([plan]) => plan.usable);
  let [chance, pair] = [0, null];
  usable.forEach(([a, i], k) => usable.slice(k + 1).forEach(([b, j]) => {
    const shared = Math.min(1 - a.p_over, 1 - b.p_over) - Math.max(a.p_below, b.p_below);
    const together = a.p_in_range + b.p_in_range - Math.max(shared, 0);
    if (ninth(together) > ninth(chance)) [chance, pair] = [together, [i, j]];
  }));
  const each = Math.max(Math.min(replicates, 2), Math.ceil(replicates / 2));
  const tubes = (2 * each) / Math.max(chance, LEAST_CHANCE);
  if (!best || !pair || tubes >= best.expected_tubes * (1 - 1e-9)) return null;
  return { plans: pair, tubes_each: each, p_in_range: chance, expected_tubes: tubes };
}

const ninth = (value) => Math.round(value * 1e9);
const better = (a, b) => ninth(a.expected_tubes) - ninth(b.expected_tubes) || a.p_over - b.p_over;

/**
 * Every dilution's chances, the one to choose, and two side by side where that needs fewer tubes.
 * @param {{cdf: (cod: number) => number}} predictive
 * @param {object[]} ranges {name, low, high, chloride_limit, reporting, mercury_mg}
 * @param {number[]} dilutions
 * @param {object} given {chloride, volume_ml, decision_limit, replicates, solids}
 */
export function plan(predictive, ranges, dilutions, given = {}) {
  const sample = { chloride: null, volume_ml: null, decision_limit: null, replicates: 3, solids: false, ...given };
  const plans = ranges.flatMap((range) => dilutions.map((factor) => planOf(range, factor, predictive, sample)));
  const choice = plans.filter((one) => one.usable && one.expected_tubes !== null).sort(better)[0] ?? null;
  return { plans, choice, split: splitOf(plans, choice, sample.replicates) };
}

/** What remains of an expectation once a tube has shown on which side of a bound the COD lies. */
export function beyond(predictive, bound, above) {
  const at = predictive.cdf(bound);
  const [from, size] = above ? [at, Math.max(1 - at, 1e-12)] : [0, Math.max(at, 1e-12)];
  const held = (share) => Math.min(1, Math.max(0, share));
  return {
    ...predictive,
    cdf: (cod) => held((predictive.cdf(cod) - from) / size),
    density: (log) => (Math.exp(log) > bound === above ? predictive.density(log) / size : 0),
    quantile: (p) => predictive.quantile(from + p * size),
  };
}

/**
 * The readings not taken that would add to the chance of being in range, best first, with the range that would be left
 * if the meter showed what is usual here.
 */
export function worthMeasuring(pack, now, { plans, choice }, ranges) {
  if (!choice) return [];
  const windowOf = ({ range, dilution_factor: factor }) => {
    const { low, high } = ranges.find((one) => one.name === range);
    return [low * factor, high * factor];
  };
  const windows = plans.filter((one) => one.usable).map(windowOf).sort((a, b) => a[0] - b[0]);
  const shown = (place, node) => expected(pack, { ...now, field: { ...now.field, [READINGS[place]]: METER[place](pack.centre[place] + node * pack.spread[place]) } });
  const [low0, high0] = windowOf(choice);
  /** The largest chance of any window; what cannot beat the best so far is not worked out. */
  const best = ({ cdf }) => {
    let found = cdf(high0) - cdf(low0);
    for (const [low, high] of windows) {
      const under = cdf(high);
      const below = under > found ? cdf(low) : 0;
      if (1 - below <= found) break;
      found = Math.max(found, under > found ? under - below : 0);
    }
    return found;
  };
  return READINGS.map((field, place) => [field, place]).filter(([field]) => !(field in now.field)).map(([field, place]) => ({
    field, p_in_range_now: choice.p_in_range, place,
    p_in_range_expected: NODES.reduce((sum, [node, share]) => sum + share * best(shown(place, node)), 0),
  })).filter((one) => one.p_in_range_expected - one.p_in_range_now >= LEAST_GAIN)
    .sort((a, b) => b.p_in_range_expected - a.p_in_range_expected)
    .map(({ place, ...one }) => {
      const usual = shown(place, 0);
      return { ...one, low: usual.quantile(0.05), high: usual.quantile(0.95) };
    });
}
