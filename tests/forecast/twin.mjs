// Holds the tablet's forecast to the server's vectors; prints the misses as JSON.
import { readFileSync } from "node:fs";
import { expected, plan } from "../../static/parts/forecast.js";

const near = (a, b) => Math.abs(a - b) <= 1e-6 * Math.max(1e-3, Math.abs(b));
const range = { name: "high", low: 20, high: 900, chloride_limit: 1998, reporting: 20 };
const given = { ranges: [range], dilutions: [1, 2, 5, 10, 20, 50, 100], chloride: 3000, decision_limit: 1500 };
const misses = [];

function hold(name, index, found, wanted) {
  if (!near(found, wanted)) misses.push([index, name, found, wanted]);
}

const vectors = JSON.parse(readFileSync(new URL("./vectors.json", import.meta.url)));
vectors.forEach((v, i) => {
  const p = expected(v.pack, { days: 21000, field: v.field, activity: null });
  for (const [q, x] of Object.entries(v.quantiles)) hold(`quantile ${q}`, i, p.quantile(Number(q)), x);
  for (const [c, x] of Object.entries(v.cdf)) hold(`cdf ${c}`, i, p.cdf(Number(c)), x);
  for (const [l, x] of Object.entries(v.density)) hold(`density ${l}`, i, p.density(Number(l)), x);
  const made = plan(p, given);
  made.plans.forEach((one, k) => {
    hold(`in range ${k}`, i, one.p_in_range, v.p_in_range[k]);
    hold(`over ${k}`, i, one.p_over, v.p_over[k]);
    if (JSON.stringify(one.objections) !== JSON.stringify(v.objections[k])) misses.push([i, "objections", k]);
  });
  if ((made.choice?.dilution_factor ?? null) !== v.choice) misses.push([i, "choice"]);
});
console.log(JSON.stringify({ held: vectors.length, misses }));
