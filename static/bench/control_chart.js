// One control chart as a picture: points in order, frozen lines, or the moving average, or the cumulative sums.

import { html } from "../parts/html.js";
import { plain } from "../parts/format.js";

const [W, LEFT, RIGHT, TOP, BOTTOM] = [420, 46, 322, 16, 216];
const MOST = 60;

/** A percentage or a thousandth of an absorbance, with one decimal. */
export const digits = (value) => plain(value, 1);

/** The rows of a view: points with the number that is drawn, and the lines they are held against. */
function viewed(chart, view) {
  const { baseline } = chart;
  if (view === "average") return { rows: chart.points.filter((p) => p.average !== null).map((p) => ({ ...p, shown: [p.average] })), lines: baseline.average.map((at) => [at, "limit", true]).concat([[baseline.limits.centre, "centre"]]) };
  if (view === "sums") return { rows: chart.points.filter((p) => p.upper !== null).map((p) => ({ ...p, shown: [p.upper, -p.lower] })), lines: [[baseline.decision, "limit", true], [0, "0"], [-baseline.decision, "limit", true]] };
  const rows = chart.points.map((p) => ({ ...p, shown: [p.value] }));
  if (!baseline) return { rows, lines: [] };
  const l = baseline.limits;
  const all = [[l.upper_action, "action", true], [l.upper_warning, "warning"], [l.centre, "centre"], [l.lower_warning, "warning"], [l.lower_action, "action", true]];
  return { rows, lines: chart.what === "duplicate" ? all.slice(0, 3) : all };
}

function Mark({ x, y, point, hit }) {
  if (point.left_out) return html`<path d="M${x - 4} ${y - 4}l8 8m0-8l-8 8" stroke="var(--soft)" stroke-width="2" />`;
  if (hit) return html`<path d="M${x} ${y - 7}l7 12h-14z" fill="var(--stop)" stroke="var(--card)" />`;
  return html`<circle cx=${x} cy=${y} r="4" fill=${point.base ? "var(--card)" : "var(--water)"} stroke="var(--water)" stroke-width="1.6" />`;
}

/** The chart in words: what the picture shows. */
export function chartWords(chart, name) {
  const fired = chart.points.filter((p) => p.fired.length);
  const out = chart.points.filter((p) => p.left_out);
  const { baseline } = chart;
  const limits = baseline ? `Action limits ${digits(baseline.limits.lower_action)} and ${digits(baseline.limits.upper_action)} of “${baseline.name}”.` : "No limits are frozen yet.";
  return `${name}: ${chart.points.length} results, ${fired.length} set off a rule, ${out.length} left out with a cause. ${limits}`;
}

/**
 * The picture.
 * @param {{chart: object, view: "single"|"average"|"sums", unit: string, name: string}} props
 */
export function ControlChart({ chart, view, unit, name }) {
  const { rows: every, lines } = viewed(chart, view);
  const rows = every.slice(-MOST);
  if (!rows.length) return html`<p class="soft">Nothing came after the baseline yet.</p>`;
  const values = [...rows.flatMap((row) => (row.left_out ? [] : row.shown)), ...lines.map(([at]) => at)];
  const [low, high] = [Math.min(...values), Math.max(...values)];
  const room = (high - low || 1) * 0.1;
  const beyond = (value) => value > Math.max(...lines.map(([at]) => at)) || value < Math.min(...lines.map(([at]) => at));
  const y = (value) => Math.min(BOTTOM, Math.max(TOP, BOTTOM - ((value - low + room) / (high - low + 2 * room)) * (BOTTOM - TOP)));
  const x = (i) => LEFT + 8 + (i + 0.5) * ((RIGHT - LEFT - 8) / rows.length);
  return html`<svg class="chart" viewBox="0 0 ${W} 246" role="img" aria-label=${chartWords(chart, name)}>
    <line x1=${LEFT} x2=${LEFT} y1=${TOP} y2=${BOTTOM} stroke="var(--ink)" /><text x=${LEFT - 6} y=${TOP - 4} text-anchor="end" font-size="12">${view === "sums" ? "SD" : unit}</text>
    ${[low, (low + high) / 2, high].map((at) => html`<text key=${at} x=${LEFT - 6} y=${y(at) + 4} text-anchor="end" font-size="12">${digits(at)}</text>`)}
    ${lines.map(([at, words, stop], i) => html`<g key=${i} font-size="12"><line x1=${LEFT} x2=${RIGHT} y1=${y(at)} y2=${y(at)} stroke=${stop ? "var(--stop)" : "var(--soft)"} stroke-width=${stop ? 2 : 1.2} stroke-dasharray=${words === "warning" ? "6 4" : null} />
      <text x=${RIGHT + 5} y=${y(at) + 4} class=${stop ? "above-text" : ""}>${words === "0" ? "" : words} ${digits(at)}</text></g>`)}
    ${rows[0].shown.map((_, k) => html`<polyline key=${k} points=${rows.map((row, i) => [row, i]).filter(([row]) => !row.left_out).map(([row, i]) => `${x(i).toFixed(1)},${y(row.shown[k]).toFixed(1)}`).join(" ")} fill="none" stroke="var(--water)" stroke-width="1.2" />`)}
    ${rows.map((row, i) => row.left_out && (row.shown[0] > high + room || row.shown[0] < low - room) && html`<text key=${i} x=${x(i) - 7} y=${row.shown[0] > high ? TOP + 4 : BOTTOM + 4} text-anchor="end" font-size="12">${digits(row.shown[0])}</text>`)}
    ${rows.map((row, i) => row.shown.map((value, k) => html`<${Mark} key=${`${i} ${k}`} x=${x(i)} y=${y(value)} point=${row} hit=${view === "single" ? row.fired.length > 0 : beyond(value)} />`))}
    <text x=${LEFT + 8} y="236" font-size="12">${rows[0].at.slice(0, 10)}</text><text x=${RIGHT} y="236" text-anchor="end" font-size="12">${rows.at(-1).at.slice(0, 10)}</text></svg>`;
}
