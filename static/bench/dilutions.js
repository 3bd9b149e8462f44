// The dilution of a bottle as a run records it: one choice of glassware for what is shown, what is done and its uncertainty.

import { dilution } from "../parts/format.js";
import { factorOf, relativeU, stepsOf } from "../parts/glassware.js";

const makes = (steps, factor) => steps.length > 0 && Math.abs(factorOf(steps) / factor - 1) < 1e-6;

/**
 * What a tube's dilution is made with. The plan of the sample goes before the one of a single pipette and flask.
 * Without glassware whose tolerance is known there is no uncertainty to state: then `problem` says so.
 * @param {number} factor
 * @param {{dilution_factor: number, steps: object[], reason: string}|null} plan
 * @param {string} chosen why, where the plan is not followed
 * @param {{solids: boolean, volume_ml: number|null}} sample what its transfers depend on
 */
export function dilutionOf(factor, plan, chosen = "chosen at the bench", sample = {}) {
  const planned = plan?.dilution_factor === factor;
  const fits = (plan?.steps[0]?.pipette_ml ?? 0) <= (sample.volume_ml ?? Infinity);
  const own = planned && fits && makes(plan.steps, factor) ? plan.steps : stepsOf(factor, sample);
  const steps = (own ?? []).map(({ pipette_ml, flask_ml }) => ({ pipette_ml, flask_ml }));
  const relative_u = own ? relativeU(steps) : null;
  if (relative_u === null) {
    return { problem: `No class A pipette and flask are known here that make ${dilution(factor)}: choose another dilution.` };
  }
  return { factor, steps, relative_u, reason: planned ? plan.reason : chosen };
}
