// How far a dilution's factor may be off: class A tolerances (ASTM E969 pipettes, E288 flasks), triangular.
// The same numbers as app/chemistry/glassware.py; tests/client/test_glassware.py holds both together.

/** Tolerances in mL by size in mL. */
export const PIPETTES = new Map([
  [0.5, 0.006], [1, 0.006], [2, 0.006], [3, 0.01], [4, 0.01], [5, 0.01], [10, 0.02], [15, 0.03], [20, 0.03], [25, 0.03], [50, 0.05], [100, 0.08],
]);
export const FLASKS = new Map([
  [5, 0.02], [10, 0.02], [25, 0.03], [50, 0.05], [100, 0.08], [200, 0.1], [250, 0.12], [500, 0.2], [1000, 0.3], [2000, 0.5],
]);

const share = (table, ml) => (table.has(ml) ? table.get(ml) / ml / Math.sqrt(6) : null);

/** The relative standard uncertainty of some steps, or null where a size is not in the tables. */
export function relativeU(steps) {
  let sum = 0;
  for (const { pipette_ml, flask_ml } of steps) {
    const [a, b] = [share(PIPETTES, pipette_ml), share(FLASKS, flask_ml)];
    if (a === null || b === null) return null;
    sum += a * a + b * b;
  }
  return Math.sqrt(sum);
}

/** The factor of some steps. */
export const factorOf = (steps) => steps.reduce((factor, step) => (factor * step.flask_ml) / step.pipette_ml, 1);
