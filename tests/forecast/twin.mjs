// Holds the tablet's forecast to the server's vectors, given on standard input; prints the misses as JSON.
import { readFileSync } from "node:fs";
import { expected } from "../../static/parts/forecast.js";
import { beyond, plan, worthMeasuring } from "../../static/parts/planning.js";

const near = (a, b) => Math.abs(a - b) <= 1e-6 * Math.max(1e-3, Math.abs(b));
const misses = [];

/** Numbers agree to one in a million, all else is equal; what only the tablet adds is left out. */
function hold(name, found, wanted) {
  if (typeof wanted === "number" && typeof found === "number") {
    if (!near(found, wanted)) misses.push([name, found, wanted]);
  } else if (Array.isArray(wanted) && Array.isArray(found) && found.length === wanted.length) {
    wanted.forEach((one, i) => hold(`${name}.${i}`, found[i], one));
  } else if (wanted && found && typeof wanted === "object" && !Array.isArray(wanted)) {
    Object.entries(wanted).forEach(([key, one]) => hold(`${name}.${key}`, found[key], one));
  } else if (found !== wanted) misses.push([name, found ?? null, wanted]);
}

const placed = ({ plans, choice, split }) => ({ plans, choice: choice ? plans.indexOf(choice) : null, split });

const vectors = JSON.parse(readFileSync(0));
vectors.forEach((v, i) => {
  const p = expected(v.pack, v.now);
  for (const [q, x] of Object.entries(v.quantiles)) hold(`${i} quantile ${q}`, p.quantile(Number(q)), x);
  for (const [c, x] of Object.entries(v.cdf)) hold(`${i} cdf ${c}`, p.cdf(Number(c)), x);
  for (const [l, x] of Object.entries(v.density)) hold(`${i} density ${l}`, p.density(Number(l)), x);
  hold(`${i} bounded`, p.bounded, v.bounded);
  const made = plan(p, v.ranges, v.dilutions, v.sample);
  hold(`${i}`, placed(made), { plans: v.plans, choice: v.choice, split: v.split });
  hold(`${i} worth`, worthMeasuring(v.pack, v.now, made, v.ranges), v.worth);
  v.after.forEach(({ bound, above, ...wanted }) => {
    hold(`${i} beyond ${bound}`, placed(plan(beyond(p, bound, above), v.ranges, v.dilutions)), wanted);
  });
});
console.log(JSON.stringify({ held: vectors.length, misses: misses.slice(0, 20) }));
