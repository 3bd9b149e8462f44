// What a form shows of a recipe before the server has derived it; tests/client/test_recipe_sums.py holds both sides together.

import { plain } from "../parts/format.js";

const DICHROMATE = 294.181;
const OXYGEN = 31.998;
const USABLE = 0.9;

/** COD that would use up the dichromate of a tube, mg/L. */
export const capacityOf = (r) => (((r.dichromate_g_per_l * r.digestion_solution_ml) / DICHROMATE) * 1.5 * OXYGEN / r.sample_ml) * 1000;

/** What speaks against a recipe, in words. */
export function doubts(r) {
  const capacity = capacityOf(r);
  const found = [];
  if (r.working_high > capacity) found.push(`The range ends at ${plain(r.working_high)} mg/L, beyond the ${plain(capacity)} mg/L that the dichromate can oxidise. Were the grams perhaps given for 500 mL?`);
  else if (r.working_high > USABLE * capacity) found.push(`The range ends at ${plain(r.working_high)} mg/L, above 90 % of the capacity: readings over ${plain(USABLE * capacity)} mg/L count as over range.`);
  if (r.working_low >= r.working_high) found.push("The range's lower end must lie under its top.");
  if (r.wavelength_nm && !((r.wavelength_nm >= 580 && r.wavelength_nm <= 640) || (r.wavelength_nm >= 400 && r.wavelength_nm <= 460))) {
    found.push(`${plain(r.wavelength_nm)} nm is neither near 600 nm (rising) nor near 420 to 440 nm (falling).`);
  }
  return found;
}
