// The forecast's twin on the tablet: the same Student t distribution of ln COD as app/forecast, held to the same
// vectors. The pack comes from the server; readings of now are laid on here.

const READINGS = ["conductivity_us_cm", "turbidity_ntu", "ph", "temperature_c"];
const SOURCE = [0, 1, 2, 3, 0, 1];
const TYPICAL = [0.6, 0.9, 0.5, 0.5, 0.5, 0.5];
const ACTIVITIES = ["production", "cleaning", "idle"];
const FARTHEST = 4;
const KNOWN_WELL = 5;
const YEAR_DAYS = 365.25;

const LANCZOS = [
  0.99999999999980993, 676.5203681218851, -1259.1392167224028, 771.32342877765313, -176.61502916214059,
  12.507343278686905, -0.13857109526572012, 9.9843695780195716e-6, 1.5056327351493116e-7,
];

/** ln of the gamma function, Lanczos' series. */
export function logGamma(x) {
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  const y = x - 1;
  const t = y + 7.5;
  const sum = LANCZOS.reduce((total, c, i) => (i === 0 ? c : total + c / (y + i)), 0);
  return 0.5 * Math.log(2 * Math.PI) + (y + 0.5) * Math.log(t) - t + Math.log(sum);
}

/** The continued fraction of the incomplete beta function, Lentz's method. */
function fraction(a, b, x) {
  const tiny = 1e-300;
  let c = 1;
  let d = 1 - ((a + b) * x) / (a + 1);
  d = 1 / (Math.abs(d) < tiny ? tiny : d);
  let h = d;
  for (let m = 1; m <= 500; m += 1) {
    const steps = [
      (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m)),
      (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1)),
    ];
    let change = 1;
    for (const step of steps) {
      d = 1 + step * d;
      d = 1 / (Math.abs(d) < tiny ? tiny : d);
      c = 1 + step / c;
      if (Math.abs(c) < tiny) c = tiny;
      change = d * c;
      h *= change;
    }
    if (Math.abs(change - 1) < 1e-15) break;
  }
  return h;
}

/** The regularised incomplete beta function. */
export function incompleteBeta(a, b, x) {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  const front = Math.exp(logGamma(a + b) - logGamma(a) - logGamma(b) + a * Math.log(x) + b * Math.log1p(-x));
  return x < (a + 1) / (a + b + 2) ? (front * fraction(a, b, x)) / a : 1 - (front * fraction(b, a, 1 - x)) / b;
}

/** Student's t: the probability of a value at or below t. */
export function studentCdf(t, dof) {
  const tail = 0.5 * incompleteBeta(dof / 2, 0.5, dof / (dof + t * t));
  return t > 0 ? 1 - tail : tail;
}

const density = ({ mean, scale, dof }, log) => {
  const z = (log - mean) / scale;
  const top = logGamma((dof + 1) / 2) - logGamma(dof / 2) - ((dof + 1) / 2) * Math.log1p((z * z) / dof);
  return Math.exp(top) / (scale * Math.sqrt(dof * Math.PI));
};

/** A predictive distribution of COD from components {weight, mean, scale, dof} of ln COD. */
export function predictiveOf(components) {
  const below = (log) => components.reduce((sum, c) => sum + c.weight * studentCdf((log - c.mean) / c.scale, c.dof), 0);
  return {
    components,
    cdf: (cod) => (cod <= 0 ? 0 : below(Math.log(cod))),
    density: (log) => components.reduce((sum, c) => sum + c.weight * density(c, log), 0),
    quantile(p) {
      let low = Math.min(...components.map((c) => c.mean - 8 * c.scale));
      let high = Math.max(...components.map((c) => c.mean + 8 * c.scale));
      while (below(low) > p) low -= 8;
      while (below(high) < p) high += 8;
      for (let i = 0; i < 80 && high - low > 1e-12 * Math.max(1, Math.abs(low)); i += 1) {
        const middle = (low + high) / 2;
        if (below(middle) < p) low = middle;
        else high = middle;
      }
      return Math.exp((low + high) / 2);
    },
  };
}

const logarithm = (value, reference) => (value > 0 ? Math.log(value / reference) : NaN);

/** The inputs that readings make, in the order of the pack; NaN where a reading is missing. */
function inputsOf(field) {
  const salt = logarithm(field.conductivity_us_cm, 1000);
  const solids = logarithm(field.turbidity_ntu, 50);
  const bend = (value, from) => (Number.isNaN(value) ? value : Math.max(value - from, 0));
  const ph = (field.ph ?? NaN) - 7.5;
  const warmth = ((field.temperature_c ?? NaN) - 20) / 10;
  return [salt, solids, ph, warmth, bend(salt, Math.log(2)), bend(solids, 0)];
}

/** Readings less what is usual here; what is missing counts as usual, what is far is drawn back to a bound. */
export function settle(pack, field) {
  const bounded = new Set();
  const missing = [];
  const off = inputsOf(field).map((value, i) => {
    missing.push(Number.isNaN(value));
    if (missing[i]) return 0;
    const reach = FARTHEST * Math.max(pack.spread[i], 0.3 * TYPICAL[i]);
    const distance = value - pack.centre[i];
    if (Math.abs(distance) > reach && pack.count[i] >= KNOWN_WELL) bounded.add(READINGS[SOURCE[i]]);
    return Math.min(reach, Math.max(-reach, distance));
  });
  return { off, missing, bounded: READINGS.filter((name) => bounded.has(name)) };
}

const dot = (a, b) => a.reduce((sum, x, i) => sum + x * b[i], 0);

/** x'Cx with C given as its upper triangle by rows. */
function squared(x, upper) {
  let sum = 0;
  let at = 0;
  for (let i = 0; i < x.length; i += 1) {
    sum += x[i] * x[i] * upper[at];
    at += 1;
    for (let j = i + 1; j < x.length; j += 1, at += 1) sum += 2 * x[i] * x[j] * upper[at];
  }
  return sum;
}

/**
 * What is expected of the sample of now.
 * @param {object} pack the point's posterior, as the server made it
 * @param {{days: number, field: Record<string, number>, activity: string|null}} now
 */
export function expected(pack, now) {
  const { off, missing, bounded } = settle(pack, now.field ?? {});
  const [one] = pack.regressions;
  const gap = pack.n ? Math.max(now.days - pack.last_days, 0) : Infinity;
  const keeps = one.wander_days.map((days) => Math.exp(-gap / days));
  const turn = (2 * Math.PI * now.days) / YEAR_DAYS;
  const doing = ACTIVITIES.map((name) => (name === now.activity ? 1 : 0));
  const x = [1, ...off, ...doing, Math.cos(turn), Math.sin(turn), ...keeps];
  const added = pack.missing.reduce((sum, variance, i) => sum + (missing[i] ? variance : 0), 0);
  const wandered = one.wander.reduce((sum, variance, i) => sum + variance * (1 - keeps[i] ** 2), 0);
  const variance = squared(x, one.covariance) + wandered + one.noise * (1 + added);
  const found = predictiveOf([{ weight: 1, mean: dot(x, one.mean), scale: Math.sqrt(variance), dof: one.dof }]);
  return { ...found, bounded };
}

function objections(range, factor, { chloride, decision_limit: limit }) {
  const found = [];
  if (chloride != null && range.chloride_limit != null && chloride / factor > range.chloride_limit) {
    found.push(`${(chloride / factor).toFixed(0)} mg/L chloride after dilution is above ${range.chloride_limit.toFixed(0)}`);
  }
  if (range.reporting != null && limit != null && range.reporting * factor > limit) {
    found.push(`the reporting level after dilution, ${(range.reporting * factor).toFixed(0)} mg/L, is above the limit of ${limit.toFixed(0)}`);
  }
  return found;
}

function whyOf(choice, plans) {
  if (!choice) return `No dilution is usable: ${[...new Set(plans.flatMap((p) => p.objections))].sort().join("; ")}.`;
  const share = (x) => `${(100 * x).toFixed(0)} %`;
  return `${share(choice.p_in_range)} of samples like this fall in range; ${share(choice.p_over)} would go over, ${share(choice.p_below)} under.`;
}

const better = (a, b) => a.expected_tubes - b.expected_tubes || a.p_over - b.p_over;

/**
 * Every dilution's chances and the one to choose.
 * @param {{cdf: (cod: number) => number}} predictive
 * @param {{ranges: object[], dilutions: number[], chloride?: number, decision_limit?: number, replicates?: number}} given
 */
export function plan(predictive, given) {
  const plans = given.ranges.flatMap((range) => given.dilutions.map((factor) => {
    const below = predictive.cdf(range.low * factor);
    const over = 1 - predictive.cdf(range.high * factor);
    const inside = Math.max(0, 1 - below - over);
    const found = objections(range, factor, given);
    return {
      range: range.name, dilution_factor: factor, p_in_range: inside, p_over: over, p_below: below,
      expected_tubes: inside > 1e-6 ? (given.replicates ?? 3) / inside : null, usable: found.length === 0, objections: found,
    };
  }));
  const usable = plans.filter((p) => p.usable && p.expected_tubes !== null).sort(better);
  const choice = usable[0] ?? null;
  return { plans, choice, why: whyOf(choice, plans) };
}
