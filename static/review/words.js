// A result in words and shapes: never a colour alone.

import { reported } from "../parts/format.js";
import { html } from "../parts/html.js";

const SHAPES = new Map([["above", "▲"], ["within", "●"], ["undecided", "◇"], ["no limit", "○"], ["provisional", "◇"]]);

/** The verdict that weighs most: above, then undecided, within, no limit. */
export function verdictOf(result) {
  if (result.status === "disagree") return { verdict: "provisional", why: "The tubes disagree: the value is provisional until the sample is repeated." };
  const order = ["above", "undecided", "within", "no limit"];
  const found = [...(result.verdicts ?? [])].sort((a, b) => order.indexOf(a.verdict) - order.indexOf(b.verdict));
  return found[0] ?? null;
}

/** A verdict as a tag. */
export function Verdict({ result }) {
  const found = verdictOf(result);
  if (!found) return result.source === "run" ? null : html`<span class="tag"><span aria-hidden="true">○</span>from before</span>`;
  const kind = { above: "stop", undecided: "wait", provisional: "wait", within: "good" }[found.verdict] ?? "";
  return html`<span class="tag ${kind}"><span aria-hidden="true">${SHAPES.get(found.verdict)}</span>${found.verdict === "within" ? "within the limit" : found.verdict === "above" ? "above the limit" : found.verdict}</span>`;
}

/** A result's number with its uncertainty and unit, its sign never parted from it. */
export function Number_({ result, big = false }) {
  const value = result.status === "disagree" ? "provisional" : reported(result.shown ?? "–");
  return html`<span class=${big ? "" : "nowrap"}><span class=${big ? "big" : ""}>${value}</span>${result.shown_u && html` <span class=${big ? "plus" : ""}>± ${reported(result.shown_u)}</span>`} <span class="unit">mg/L</span>${(result.qualifiers ?? []).map((one) => html` <strong key=${one.letter}>${one.letter}</strong>`)}</span>`;
}

/** What happened to a result so far. */
export function stageOf(result) {
  if (result.certificate) return `certificate ${result.certificate}`;
  if (result.review) return result.review.decision;
  return result.source === "run" ? "to review" : "from before";
}
