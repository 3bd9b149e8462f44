// A point's results over time with their limits: circles within, triangles above, open arrows for bounds.

import { day, plain } from "../parts/format.js";
import { html } from "../parts/html.js";
import { verdictOf } from "./words.js";

const W = 830;
const H = 300;
const [LEFT, RIGHT, TOP, BOTTOM] = [64, 700, 22, 258];

const boundOf = (result) => ({ below: result.reporting_level, over: result.top }[result.status] ?? result.cod);

function niceTop(most) {
  const step = 10 ** Math.floor(Math.log10(most || 1));
  return [1, 2, 2.5, 5, 10].map((k) => k * step).find((top) => top >= most * 1.08) ?? most * 1.1;
}

function months(from, to) {
  const found = [];
  const first = new Date(from);
  const step = Math.max(1, Math.ceil((to - from) / 86400000 / 30 / 8));
  const at = new Date(Date.UTC(first.getUTCFullYear(), first.getUTCMonth() + 1, 1));
  while (at.getTime() < to) {
    found.push(new Date(at));
    at.setUTCMonth(at.getUTCMonth() + step);
  }
  return found;
}

function Point({ result, x, y }) {
  const value = boundOf(result);
  const at = [x(new Date(result.collected_at).getTime()), y(value)];
  const half = result.expanded_u ?? 0;
  const above = verdictOf(result)?.verdict === "above";
  const colour = above ? "var(--stop)" : "var(--water)";
  const bar = half > 0 && result.status === "ok" ? html`<line x1=${at[0]} x2=${at[0]} y1=${y(value - half)} y2=${y(value + half)} stroke="var(--ink)" stroke-width="1.6" />` : null;
  if (result.status === "below") return html`<path d=${`M${at[0] - 6} ${at[1]}h12l-6 9z`} fill="var(--card)" stroke=${colour} stroke-width="2" />`;
  if (result.status === "over") return html`<path d=${`M${at[0] - 6} ${at[1]}h12l-6 -9z`} fill="var(--card)" stroke="var(--stop)" stroke-width="2" />`;
  return html`<g>${bar}${above ? html`<path d=${`M${at[0]} ${at[1] - 8}l8 14h-16z`} fill=${colour} />` : html`<circle cx=${at[0]} cy=${at[1]} r="5" fill=${colour} />`}</g>`;
}

function limitSegments(limits, from, to) {
  const byBasis = Map.groupBy ? Map.groupBy(limits, (limit) => limit.basis) : group(limits);
  return [...byBasis.values()].flatMap((rows) => rows.map((limit, i) => ({
    ...limit,
    start: Math.max(from, new Date(limit.from).getTime()),
    end: Math.min(to, rows[i + 1] ? new Date(rows[i + 1].from).getTime() : to),
    last: i === rows.length - 1,
  }))).filter((segment) => segment.start < segment.end);
}

function group(limits) {
  const found = new Map();
  limits.forEach((limit) => found.set(limit.basis, [...(found.get(limit.basis) ?? []), limit]));
  return found;
}

const NAMES = new Map([["daily_maximum", "daily maximum"], ["monthly_average", "monthly average"]]);

function describe(results, zone) {
  const above = results.filter((result) => verdictOf(result)?.verdict === "above").length;
  const last = results.at(-1);
  return `${results.length} results from ${day(results[0].collected_at, zone)} to ${day(last.collected_at, zone)}, ${above} judged above a limit; the last one ${last.shown} mg/L.`;
}

const LABEL = 34;

/** The labels of the limits, pushed apart so that none covers another. */
function apart(segments, y) {
  let lowest = Infinity;
  return [...segments].sort((a, b) => a.value - b.value).map((segment) => {
    lowest = Math.min(y(segment.value) + 4, lowest - LABEL);
    return [segment, lowest];
  });
}

/** The chart. */
export function History({ results, limits, zone }) {
  const known = results.filter((result) => boundOf(result) > 0);
  if (!known.length) return null;
  const times = known.map((result) => new Date(result.collected_at).getTime());
  const from = Math.min(...times) - 5 * 86400000;
  const to = Math.max(Date.now(), ...times) + 5 * 86400000;
  const segments = limitSegments(limits, from, to);
  const most = Math.max(...known.map((result) => boundOf(result) + (result.expanded_u ?? 0)), ...segments.map((segment) => segment.value));
  const top = niceTop(most);
  const x = (time) => LEFT + ((time - from) / (to - from)) * (RIGHT - LEFT);
  const y = (cod) => BOTTOM - (cod / top) * (BOTTOM - TOP);
  return html`<svg class="chart" viewBox="0 0 ${W} ${H}" role="img" aria-label=${describe(known, zone)}>
    ${[0, 0.25, 0.5, 0.75, 1].map((share) => html`<g key=${share} font-size="13"><line x1=${LEFT} x2=${RIGHT} y1=${y(top * share)} y2=${y(top * share)} stroke=${share ? "var(--rule)" : "var(--ink)"} stroke-width="1" />
      <text x=${LEFT - 8} y=${y(top * share) + 4} text-anchor="end">${plain(top * share)}</text></g>`)}
    <text x=${LEFT - 8} y="12" font-size="13" text-anchor="end">mg/L</text>
    ${months(from, to).map((at) => html`<text key=${at.getTime()} x=${x(at.getTime())} y=${BOTTOM + 22} text-anchor="middle" font-size="13">${day(at, "UTC").slice(0, 7)}</text>`)}
    ${segments.map((segment) => html`<g key=${segment.basis + segment.from}><line x1=${x(segment.start)} x2=${x(segment.end)} y1=${y(segment.value)} y2=${y(segment.value)} stroke="var(--stop)" stroke-width="2" stroke-dasharray=${segment.basis === "daily_maximum" ? "8 4" : "2 4"} />
</g>`)}
    ${known.map((result) => html`<${Point} key=${result.id} result=${result} x=${x} y=${y} />`)}
    ${apart(segments.filter((segment) => segment.last), y).map(([segment, at]) => html`<text key=${segment.basis} x=${RIGHT + 8} y=${at} font-size="12.5" font-weight="700" class="above-text">
      <tspan>${NAMES.get(segment.basis) ?? segment.basis}</tspan><tspan x=${RIGHT + 8} dy="15">${plain(segment.value)}</tspan></text>`)}
  </svg>`;
}
