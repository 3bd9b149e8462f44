// The tube is the picture: dichromate is orange, what it has oxidised turns it green. The fill rises with the share of
// the oxidant used; number and state always stand beside it in words.

import { html } from "./html.js";

const RAMP = [[0.35, "var(--tube-1)"], [0.6, "var(--tube-2)"], [0.85, "var(--tube-3)"], [Infinity, "var(--tube-4)"]];

/** The colour for a share of the oxidant used. */
export const colourOf = (share) => RAMP.find(([top]) => share < top)[1];

/** The colour's name, for the words beside it. */
export const colourName = (share) => ["orange", "amber", "olive", "green"][RAMP.findIndex(([top]) => share < top)];

/**
 * A tube. `share` is the share of the oxidant used, null for a tube that was not read.
 * @param {{share: number|null, height?: number, empty?: boolean}} props
 */
export function Tube({ share, height = 60, empty = false }) {
  const full = Math.min(1, Math.max(0.16, share ?? 0));
  const level = 42 * full;
  const known = share !== null && share !== undefined;
  const fill = empty ? "none" : known ? colourOf(share) : "var(--tube-1)";
  return html`<svg class="tube" viewBox="0 0 24 64" height=${height} width=${(height * 24) / 64} aria-hidden="true" focusable="false">
    ${!empty && html`<path d=${`M6 ${58 - level}h12v${level - 4}a6 6 0 0 1-12 0z`} fill=${fill} opacity=${known ? 1 : 0.45} />`}
    <path d="M5 11v43a7 7 0 0 0 14 0V11z" fill="none" stroke="var(--ink)" stroke-width="2.2" />
    <rect x="2.5" y="2" width="19" height="8" rx="2" fill="var(--ink)" />
  </svg>`;
}
