// The chloride gate, the twin of the server's: recorded, bounded by conductivity (one way only), or unknown. Nothing is ever subtracted.

const OTHER = 1.04;
const TABLE = [[0, 126.4], [0.001, 123.7], [0.005, 120.6], [0.01, 118.5], [0.02, 115.7], [0.05, 111], [0.1, 106.7], [0.5, 93.6], [1, 85.8]]
  .map(([molar, conductivity]) => [1000 * molar * 35.45, molar * conductivity]);
const FLAG = 1000;

/** The most chloride that a conductivity at 25 °C allows, mg/L; null beyond the table. */
export function chlorideBound(uS) {
  const at = uS / 1000;
  const i = TABLE.findIndex(([, after], k) => k > 0 && at <= after);
  if (i < 0) return null;
  const [[low, before], [high, after]] = [TABLE[i - 1], TABLE[i]];
  return OTHER * (low + ((high - low) * (at - before)) / (after - before));
}

function recorded(limit, factor, { mg_l, sign }) {
  const after = mg_l / factor;
  const shown = after.toFixed(0);
  if (sign !== "=" && (sign === "<") !== (after <= limit)) {
    return ["unknown", `The strip says only that the tube holds ${sign === "<" ? "less" : "more"} than ${shown} mg/L chloride; the limit is ${limit.toFixed(0)}: measure it nearer.`];
  }
  const said = `${{ "=": "", "<": "At most ", ">": "Over " }[sign]}${shown} mg/L chloride in the tube is`;
  if (after > limit) {
    const remedy = limit > 0 ? `dilute at least ${Number((mg_l / limit).toPrecision(3))} times, or this` : "this";
    return ["closed", `${said} more than the ${limit.toFixed(0)} mg/L that the mercury masks: ${remedy} method does not determine the sample.`];
  }
  if (after > FLAG) return ["flagged", `${said} masked; the result carries a flag for it.`];
  return ["open", `${said} within the limit of ${limit.toFixed(0)} mg/L.`];
}

function bounded(limit, factor, uS) {
  const bound = uS === null ? null : chlorideBound(uS);
  if (bound !== null && bound / factor <= limit) return ["open", `By conductivity the tube holds at most ${(bound / factor).toFixed(0)} mg/L chloride; the limit is ${limit.toFixed(0)}.`];
  return ["unknown", uS === null ? "Chloride is unknown: measure it, or bound it by conductivity." : "Conductivity is too high to exclude chloride over the limit: measure chloride."];
}

/**
 * Chloride judged after dilution.
 * @param {number} limit of the recipe, mg/L in the tube's sample
 * @param {number} factor of the dilution
 * @param {{mg_l: number, sign: string}|null} known as measured in the undiluted sample
 * @param {number|null} uS conductivity of the undiluted sample, µS/cm
 * @returns {{verdict: "open"|"flagged"|"closed"|"unknown", words: string}}
 */
export function chlorideGate(limit, factor, known, uS) {
  const [verdict, words] = known ? recorded(limit, factor, known) : bounded(limit, factor, uS);
  return { verdict, words };
}
