// A dilution made with one pipette and one flask, for when no expectation names its own steps.

const FLASKS = [100, 50, 250, 200, 500, 1000];
const PIPETTES = [10, 20, 25, 50, 5, 2, 1];

/**
 * The steps of a factor: none for 1, one transfer where a pipette and a flask make it, else null.
 * @param {number} factor
 */
export function stepsOf(factor) {
  if (factor === 1) return [];
  for (const flask_ml of FLASKS) {
    const pipette_ml = PIPETTES.find((ml) => Math.abs(ml * factor - flask_ml) < 1e-9);
    if (pipette_ml) return [{ pipette_ml, flask_ml }];
  }
  return null;
}

/** Steps in words: "10 mL to 50 mL, then 20 mL to 100 mL". */
export const stepWords = (steps) => steps.map((step) => `${step.pipette_ml} mL to ${step.flask_ml} mL`).join(", then ");
