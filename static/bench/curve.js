// The curve with its standards, and below it what each standard is off by.

import { html } from "../parts/html.js";
import { plain } from "../parts/format.js";
import { read } from "../parts/measured.js";

const W = 420;
const [LEFT, RIGHT, TOP, BOTTOM] = [56, 406, 14, 190];
const [UPPER, LOWER] = [220, 300];

/** The standards' readings as numbers: {cod, a}. */
export function pointsOf(curve) {
  return curve.standards.flatMap((level) => level.absorbance.map((text) => ({ cod: read(level.cod).value, a: read(text).value })));
}

/** What the curve gives for a COD. */
export const curveAt = (coefficients, cod) => coefficients.reduce((sum, b, i) => sum + b * cod ** i, 0);

function scaleOf(values, from, to, pad = 0.08) {
  const [low, high] = [Math.min(...values), Math.max(...values)];
  const room = (high - low || 1) * pad;
  return (value) => from + ((value - low + room) / (high - low + 2 * room)) * (to - from);
}

/** Standards without a curve: what a refused fit looks like. */
function Points({ points, top }) {
  const x = scaleOf([0, top], LEFT, RIGHT, 0.04);
  const y = scaleOf(points.map((p) => p.a), BOTTOM, TOP);
  const words = `Absorbance against COD for ${points.length} readings up to ${plain(top)} mg/L; no curve goes through them.`;
  return html`<svg class="chart" viewBox="0 0 ${W} 236" role="img" aria-label=${words}><line x1=${LEFT} x2=${RIGHT} y1=${BOTTOM} y2=${BOTTOM} stroke="var(--ink)" />
    ${points.map((p, i) => html`<circle key=${i} cx=${x(p.cod)} cy=${y(p.a)} r="4.5" fill="var(--card)" stroke="var(--ink)" stroke-width="2" />`)}
    ${[...new Set([points[0], ...points.slice(-1)].map((p) => p.a))].map((a) => html`<text key=${a} x=${LEFT - 6} y=${y(a) + 4} text-anchor="end" font-size="12">${a.toFixed(2)}</text>`)}
    ${[0, top].map((cod) => html`<text key=${cod} x=${x(cod)} y=${BOTTOM + 18} text-anchor="middle" font-size="12">${plain(cod)}</text>`)}<text x=${LEFT} y=${TOP + 2} font-size="12">AU</text><text x=${RIGHT} y=${BOTTOM + 34} text-anchor="end" font-size="12">COD of the standard, mg/L</text></svg>`;
}

/** The chart; its words say what it shows. */
export function CurveChart({ curve }) {
  const coefficients = curve.fitted?.coefficients;
  const points = pointsOf(curve);
  const top = Math.max(...points.map((p) => p.cod));
  if (!coefficients) return html`<${Points} points=${points} top=${top} />`;
  const low = Math.min(...points.map((p) => p.cod));
  const line = Array.from({ length: 41 }, (_, i) => low + ((top - low) * i) / 40).map((cod) => ({ cod, a: curveAt(coefficients, cod) }));
  const x = scaleOf([0, top], LEFT, RIGHT, 0.04);
  const y = scaleOf([...points, ...line].map((p) => p.a), BOTTOM, TOP);
  const off = points.map((p) => ({ ...p, d: 1000 * (p.a - curveAt(coefficients, p.cod)) }));
  const most = Math.max(...off.map((p) => Math.abs(p.d)), 0.1);
  const r = (d) => (UPPER + LOWER) / 2 - (d / most) * ((LOWER - UPPER) / 2 - 6);
  const words = `Absorbance against COD for ${curve.standards.length} standards up to ${plain(top)} mg/L; readings lie within ${most.toFixed(2)} mAU of the curve.`;
  return html`<svg class="chart" viewBox="0 0 ${W} 346" role="img" aria-label=${words}>
    <polyline points=${line.map((p) => `${x(p.cod).toFixed(1)},${y(p.a).toFixed(1)}`).join(" ")} fill="none" stroke="var(--water)" stroke-width="2" />
    <line x1=${LEFT} x2=${RIGHT} y1=${BOTTOM} y2=${BOTTOM} stroke="var(--ink)" /><line x1=${LEFT} x2=${RIGHT} y1=${r(0)} y2=${r(0)} stroke="var(--water)" />
    ${points.map((p, i) => html`<circle key=${i} cx=${x(p.cod)} cy=${y(p.a)} r="4.5" fill="var(--card)" stroke="var(--ink)" stroke-width="2" />`)}
    ${off.map((p, i) => html`<g key=${i}><line x1=${x(p.cod)} x2=${x(p.cod)} y1=${r(0)} y2=${r(p.d)} stroke="var(--ink)" /><path d=${`M${x(p.cod)} ${r(p.d) - 5}l5 5-5 5-5-5z`} fill="var(--card)" stroke="var(--ink)" stroke-width="1.6" /></g>`)}
    ${[0, top / 2, top].map((cod) => html`<text key=${cod} x=${x(cod)} y=${LOWER + 22} text-anchor="middle" font-size="12">${plain(cod)}</text>`)}
    <text x=${RIGHT} y=${LOWER + 38} text-anchor="end" font-size="12">COD of the standard, mg/L</text>
    ${[line[0].a, line[20].a, line[40].a].map((a) => html`<text key=${a} x=${LEFT - 6} y=${y(a) + 4} text-anchor="end" font-size="12">${a.toFixed(2)}</text>`)}
    <text x=${LEFT} y=${TOP + 2} font-size="12">AU</text><text x=${LEFT} y=${UPPER - 10} font-size="12">off the curve, mAU</text>
    ${[most, 0, -most].map((d) => html`<text key=${d} x=${LEFT - 6} y=${r(d) + 4} text-anchor="end" font-size="12">${d.toFixed(1)}</text>`)}</svg>`;
}

const SIGNS = { stop: "▲", warning: "◇", note: "○" };

/** What is the matter with a curve, in the server's words. */
export function Findings({ curve }) {
  const found = curve.fitted?.findings ?? [];
  if (!found.length) return html`<p class="soft">Nothing speaks against this curve.</p>`;
  return html`<ul class="plain">${found.map((one) => html`<li key=${one.words} class=${one.severity === "stop" ? "above" : ""}>${SIGNS[one.severity]} ${one.words}</li>`)}</ul>`;
}
