// The rack: every tube in its place, with its number and its state in words.

import { html } from "../parts/html.js";
import { plain } from "../parts/format.js";
import { Tube } from "../parts/tube.js";

/** What a tube holds, in a word. */
export const labelOf = (tube) => ({ blank: "blank", verification: `check ${tube.expected}`, control: `control ${tube.expected}`, sample: tube.bottle }[tube.role] ?? `${tube.bottle} ${tube.role}`);

/** Whether a sample of an answer is a duplicate or a spiked portion: a check, no result. */
export const isExtra = ({ sample }) => /^\S+ (duplicate|spike)\b/.test(sample);

/** A tube's state in words: the number under it. */
export function stateOf(tube, over) {
  if (tube.excluded) return "left out";
  if (tube.role === "sample" && over.has(tube.bottle)) return "over";
  if (tube.in_tube !== null && tube.in_tube !== undefined) return plain(Math.max(0, tube.in_tube));
  if (tube.absorbance) return `${tube.absorbance.text} AU`;
  return "to read";
}

/** The tubes of a sample of the answer: its bottle's, and where the bottle was read at several dilutions those of its own. */
export function tubesOfSample(run, { sample }) {
  const tubes = run.tubes.filter((tube) => tube.role === "sample" && tube.bottle === sample.split(" ")[0]);
  return tubes.some((tube) => tube.bottle === sample) ? tubes : tubes.filter((tube) => `${tube.bottle} 1:${tube.dilution.factor}` === sample);
}

/** The bottles of a run whose result is over range. */
export function overBottles(run) {
  return new Set((run.answer?.samples ?? []).filter((sample) => sample.status === "over" && !isExtra(sample)).map((sample) => sample.sample.split(" ")[0]));
}

function shareOf(tube, over) {
  if (tube.role === "sample" && over.has(tube.bottle)) return 1;
  return tube.share ?? null;
}

/**
 * The rack. With `onPick` each tube is a button.
 * @param {{run: object, current: number|null, onPick?: (position: number) => void}} props
 */
export function Rack({ run, current, onPick }) {
  const over = overBottles(run);
  const places = run.tubes.map((tube) => {
    const stop = (tube.role === "sample" && over.has(tube.bottle)) || tube.excluded;
    const inside = html`<${Tube} share=${shareOf(tube, over)} height=${56} /><span>${labelOf(tube)}</span><span class=${stop ? "above" : "number"}>${stateOf(tube, over)}</span>`;
    const name = `place ${stop ? "stop" : ""}`;
    if (!onPick) return html`<div key=${tube.position} class=${name}>${inside}</div>`;
    return html`<button type="button" key=${tube.position} class=${name} aria-current=${tube.position === current ? "true" : undefined}
      aria-label="Position ${tube.position}, ${labelOf(tube)}, ${stateOf(tube, over)}" onClick=${() => onPick(tube.position)}>${inside}</button>`;
  });
  return html`<div class="rack" role="group" aria-label="The rack, ${run.tubes.length} tubes">${places}</div>`;
}
