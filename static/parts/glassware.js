// The one choice of glassware on the tablet: class A tolerances (ASTM E969 pipettes, E288 flasks) and the steps of a
// factor. The twin of app/forecast/glass.py and app/chemistry/glassware.py, held to the same numbers by tests.

/** Tolerances in mL by size in mL. */
export const PIPETTES = new Map([
  [0.5, 0.006], [1, 0.006], [2, 0.006], [3, 0.01], [4, 0.01], [5, 0.01], [10, 0.02], [15, 0.03], [20, 0.03], [25, 0.03], [50, 0.05], [100, 0.08],
]);
export const FLASKS = new Map([
  [5, 0.02], [10, 0.02], [25, 0.03], [50, 0.05], [100, 0.08], [200, 0.1], [250, 0.12], [500, 0.2], [1000, 0.3], [2000, 0.5],
]);

const SINGLE = [1, 2, 5, 10, 20, 25, 50].flatMap((pipette_ml) => [50, 100, 200, 250, 500, 1000]
  .filter((flask_ml) => pipette_ml < flask_ml).map((flask_ml) => ({ pipette_ml, flask_ml })));

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

const ratio = ({ pipette_ml, flask_ml }) => flask_ml / pipette_ml;

/** The factor of some steps. */
export const factorOf = (steps) => steps.reduce((factor, step) => factor * ratio(step), 1);

/** What is compared, the smaller the better: small transfers, steep steps, many steps, odd flasks, the steepest step. */
function key(steps) {
  const steepest = Math.max(...steps.map(ratio));
  const size = steps.reduce((sum, step) => sum + Math.abs(Math.log(step.flask_ml / 100)), 0);
  return [Number(steps.some((step) => step.pipette_ml < 5)), Number(steepest > 20 * (1 + 1e-9)), steps.length, Math.round(size * 1e9), steepest];
}

function order([a], [b]) {
  const at = a.findIndex((value, i) => value !== b[i]);
  return at < 0 ? 0 : a[at] - b[at];
}

const known = new Map();

/**
 * The chains of two steps at most that make a factor, best first; none where the shelf does not make it.
 * @param {number} factor 1 or more
 * @param {boolean} solids whether at least 10 mL is taken of the sample
 * @returns {{pipette_ml: number, flask_ml: number}[][]}
 */
export function chainsFor(factor, solids = false) {
  if (factor === 1) return [[]];
  const name = `${factor} ${solids}`;
  if (!known.has(name)) {
    const first = SINGLE.filter((step) => !solids || step.pipette_ml >= 10);
    const makes = (made) => Math.abs(made / factor - 1) < 1e-12;
    const pairs = first.flatMap((a) => SINGLE.filter((b) => b.pipette_ml < a.flask_ml && makes(ratio(a) * ratio(b))).map((b) => [a, b]));
    const made = [...first.filter((step) => makes(ratio(step))).map((step) => [step]), ...pairs];
    known.set(name, made.map((steps) => [key(steps), steps]).sort(order).map(([, steps]) => steps));
  }
  return known.get(name);
}

/** The best chain of a factor that the sample's volume allows, else the best one, else null. */
export function stepsOf(factor, { volume_ml = null, solids = false } = {}) {
  const chains = chainsFor(factor, solids);
  return chains.find((steps) => volume_ml === null || (steps[0]?.pipette_ml ?? 0) <= volume_ml) ?? chains[0] ?? null;
}

/** Steps in words: "10 mL to 50 mL, then 20 mL to 100 mL". */
export const stepWords = (steps) => steps.map((step) => `${step.pipette_ml} mL to ${step.flask_ml} mL`).join(", then ");
