// What stands beside a result: where its uncertainty comes from, its letters, the corrected value, the detection limit.

import { percent, plain, reported } from "./format.js";
import { html } from "./html.js";

const NAMES = new Map([["line", "Calibration line"], ["repeatability", "Repeatability"], ["dilution", "Dilution"], ["standards", "Standards"], ["bias", "Bias"]]);
const nameOf = (part) => NAMES.get(part) ?? part;

/** The components with their shares of the variance, the greatest first; null where a bound carries no uncertainty. */
export function sharesOf(result) {
  if (!result?.components || !result.u || !["ok", "disagree"].includes(result.status)) return null;
  return Object.entries(result.components).map(([part, u]) => ({ name: nameOf(part), u, share: (u / result.u) ** 2 })).sort((a, b) => b.share - a.share);
}

/** What the budget says, in words. */
export function budgetWords(result) {
  const [most] = sharesOf(result);
  const dof = result.dof === null ? "infinite" : Math.max(1, Math.floor(Math.round(result.dof * 1000) / 1000));
  return `${most.name} carries ${percent(most.share)} of the variance. Effective degrees of freedom ${dof}; coverage factor ${(result.expanded_u / result.u).toFixed(2)} for 95 %.`;
}

const decimals = (u) => (u < 1 ? 2 : u < 10 ? 1 : 0);

/** The uncertainty budget: each source with its size and a bar for its share. */
export function Budget({ result }) {
  const shares = sharesOf(result);
  if (!shares) return null;
  return html`<p>${budgetWords(result)}</p><table class="budget"><thead><tr><th>From</th><th class="right nowrap">u, mg/L</th><th class="right">Share</th></tr></thead><tbody>
    ${shares.map(({ name, u, share }) => html`<tr key=${name}><td>${name}<svg class="share" viewBox="0 0 100 10" preserveAspectRatio="none" aria-hidden="true"><rect width="100" height="10" fill="var(--paper)" /><rect width=${Math.max(100 * share, 0.6)} height="10" fill="var(--water)" /></svg></td>
      <td class="right nowrap">${u ? plain(u, decimals(u)) : "0"}</td><td class="right nowrap">${percent(share)}</td></tr>`)}</tbody></table>
    <p class="soft small">Combined u ${plain(result.u, decimals(result.u))} mg/L; squares add, degrees of freedom by Welch and Satterthwaite (GUM, G.4).</p>`;
}

function Corrected({ result }) {
  const { corrected } = result;
  if (!corrected) return null;
  return html`<table><thead><tr><th>Beside the reported result</th><th class="right">mg/L</th></tr></thead><tbody>
    <tr><td><strong>Reported, uncorrected: this one counts</strong></td><td class="right"><strong>${reported(result.shown)}</strong></td></tr>
    ${corrected.corrections.map((one) => html`<tr key=${one.name}><td>${one.name}, ${one.given.text} ${one.given_as}</td><td class="right nowrap">− ${one.shown}</td></tr>`)}
    <tr><td>Corrected, for information</td><td class="right nowrap">${reported(corrected.shown)}</td></tr></tbody></table><p class="soft small">Each number is rounded once, from the unrounded sum.</p>`;
}

/** Letters with their meaning, the corrected value, and what the server says beside the number. */
export function Beside({ result }) {
  if (!result?.chloride) return null;
  const words = result.beside.filter((text) => !result.corrected || !text.startsWith("For information"));
  return html`${result.qualifiers.map((one) => html`<p key=${one.letter} class=${one.letter === "CX" ? "above" : ""}><span class="tag wait"><span aria-hidden="true">◇</span>${one.letter}</span> ${one.meaning}. ${one.note}</p>`)}
    ${!result.qualifiers.length && html`<p class="soft">${result.chloride.words}</p>`}
    <${Corrected} result=${result} />${words.map((text) => html`<p class="soft" key=${text}>${text}</p>`)}`;
}
