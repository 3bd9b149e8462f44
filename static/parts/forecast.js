// The forecast's twin on the tablet: the same Student t distribution of ln COD as app/forecast, held to the same
// vectors. The pack comes from the server; readings of now are laid on here.

export const READINGS = ["conductivity_us_cm", "turbidity_ntu", "ph", "temperature_c"];
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
  const away = (value) => (Math.abs(value) < 1e-300 ? 1e-300 : value);
  let c = 1;
  let d = 1 / away(1 - ((a + b) * x) / (a + 1));
  let h = d;
  for (let k = 2, change = 0; k <= 1000 && (k % 2 || Math.abs(change - 1) >= 1e-15); k += 1) {
    const m = k >> 1;
    const step = (k % 2 ? -(a + m) * (a + b + m) : m * (b - m)) * x / ((a + k - 1) * (a + k));
    d = 1 / away(1 + step * d);
    c = away(1 + step / c);
    change = d * c;
    h *= change;
  }
  return h;
}

const betas = new Map();

/** ln of the beta function; a point's degrees of freedom stay, so it is kept. */
function logBeta(a, b) {
  const name = `${a} ${b}`;
  if (betas.size > 99) betas.clear();
  return betas.get(name) ?? betas.set(name, logGamma(a) + logGamma(b) - logGamma(a + b)).get(name);
}

/** The regularised incomplete beta function. */
export function incompleteBeta(a, b, x) {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  const front = Math.exp(a * Math.log(x) + b * Math.log1p(-x) - logBeta(a, b));
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
