// The holding time of a sample, counted down wherever its bottle appears, until its digestion has begun.

import { left } from "./format.js";
import { html } from "./html.js";

const DAY_MS = 86_400_000;
const SHORT_DAYS = 7;
const BEFORE = ["taken", "handed over", "received"];

/** How long the analysis may still wait; nothing once it has begun. */
export function Hold({ sample }) {
  if (!sample?.hold_until || !BEFORE.includes(sample.state)) return null;
  const short = new Date(sample.hold_until).getTime() - Date.now() < SHORT_DAYS * DAY_MS;
  return html`<span class=${short ? "above" : "soft"}>${short ? "▲ " : ""}analysis to start: ${left(sample.hold_until)}</span>`;
}
