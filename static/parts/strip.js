// The strip: what to expect above a log scale in mg/L, the method's window of each dilution below, the limit as a mark.

import { percent, plain } from "./format.js";
import { html } from "./html.js";

const W = 344;
const LEFT = 46;
const RIGHT = 288;
const BASE = 104;
const STEPS = 240;
const TOP = 22;

function scale(predictive, bars, limit) {
  const lows = bars.map((bar) => bar.low);
  const highs = bars.map((bar) => bar.high);
  const low = Math.min(...lows, predictive?.quantile(0.01) ?? Infinity, limit ?? Infinity);
  const high = Math.max(...highs, predictive?.quantile(0.99) ?? 0, limit ?? 0);
  const from = Math.log10(Math.max(low, 0.5)) - 0.08;
  const to = Math.log10(high) + 0.08;
  return { from, to, x: (cod) => LEFT + ((Math.log10(cod) - from) / (to - from)) * (RIGHT - LEFT) };
}

function hill(predictive, { from, to, x }) {
  const points = [];
  for (let i = 0; i <= STEPS; i += 1) {
    const log = from + ((to - from) * i) / STEPS;
    points.push([x(10 ** log), predictive.density(log * Math.LN10)]);
  }
  const most = Math.max(...points.map(([, d]) => d));
  return points.map(([px, d]) => `${px.toFixed(1)},${(BASE - (d / most) * (BASE - TOP - 8)).toFixed(1)}`);
}

/** The powers of ten on the axis; on a short one twos and fives as well. */
function ticks({ from, to }) {
  const found = [];
  for (let e = Math.floor(from); e <= to; e += 1) found.push(...[1, 2, 5].map((k) => k * 10 ** e));
  const on = found.filter((value) => Math.log10(value) >= from && Math.log10(value) <= to);
  const tens = on.filter((value) => Number.isInteger(Math.log10(value)));
  return tens.length > 1 ? tens : on;
}

function Bar({ bar, index, x }) {
  const y = BASE + 30 + index * 24;
  const [a, b] = [x(bar.low), x(bar.high)];
  const weight = bar.chosen ? 700 : 400;
  return html`<g font-size="12.5">
    <text x=${a - 6} y=${y + 11} text-anchor="end" font-weight=${weight}>1:${bar.factor}</text>
    <rect x=${a} y=${y} width=${b - a} height="14" rx="4" fill=${bar.chosen ? "var(--ink)" : "var(--card)"} stroke="var(--ink)" stroke-width="1.4" />
    ${bar.share !== null && html`<text x=${b + 6} y=${y + 11} font-weight=${weight}>${percent(bar.share)}</text>`}
  </g>`;
}

function describe(predictive, bars, limit) {
  const said = predictive
    ? [`Expected ${plain(predictive.quantile(0.5))} mg/L, nine in ten between ${plain(predictive.quantile(0.05))} and ${plain(predictive.quantile(0.95))}.`]
    : [];
  bars.forEach((bar) => said.push(`Diluted 1:${bar.factor}, ${plain(bar.low)} to ${plain(bar.high)} mg/L can be read${bar.share === null ? "" : `: ${percent(bar.share)}`}.`));
  if (limit) said.push(`Limit ${plain(limit)} mg/L.`);
  return said.join(" ");
}

/**
 * The strip.
 * @param {{predictive: object|null, bars: {factor: number, low: number, high: number, share: number, chosen: boolean}[],
 *          limit: number|null}} props
 */
export function Strip({ predictive, bars, limit }) {
  const axis = scale(predictive, bars, limit);
  const height = BASE + 36 + bars.length * 24;
  const shape = predictive ? hill(predictive, axis) : [];
  const mark = limit ? axis.x(limit) : 0;
  return html`<svg class="strip" viewBox="0 0 ${W} ${height}" role="img" aria-label=${describe(predictive, bars, limit)}>
    ${shape.length > 0 && html`<polygon points="${axis.x(10 ** axis.from)},${BASE} ${shape.join(" ")} ${axis.x(10 ** axis.to)},${BASE}" fill="var(--water-on)" />
      <polyline points=${shape.join(" ")} fill="none" stroke="var(--water)" stroke-width="2" />`}
    <line x1=${LEFT - 10} x2=${W - 4} y1=${BASE} y2=${BASE} stroke="var(--ink)" stroke-width="1.6" />
    ${ticks(axis).map((value) => html`<g key=${value} font-size="11.5">
      <line x1=${axis.x(value)} x2=${axis.x(value)} y1=${BASE} y2=${BASE + 5} stroke="var(--ink)" />
      <text x=${axis.x(value)} y=${BASE + 18} text-anchor="middle">${plain(value)}</text></g>`)}
    <text x=${W - 4} y=${BASE - 6} text-anchor="end" font-size="11.5">mg/L</text>
    ${limit > 0 && html`<g><line x1=${mark} x2=${mark} y1=${TOP - 4} y2=${BASE} stroke="var(--stop)" stroke-width="2" stroke-dasharray="5 3" />
      <text x=${mark > W - 90 ? mark - 5 : mark + 5} y=${TOP + 4} text-anchor=${mark > W - 90 ? "end" : "start"} font-size="12.5" class="limit" font-weight="700" paint-order="stroke" stroke="var(--card)" stroke-width="4">limit ${plain(limit)}</text></g>`}
    ${bars.map((bar, index) => html`<${Bar} key=${bar.factor} bar=${bar} index=${index} x=${axis.x} />`)}
  </svg>`;
}
