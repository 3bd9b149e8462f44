// Which bottles are to be digested again: after a failed run, after a decision to repeat, after a rejected result.

import { one } from "../parts/view.js";

const codeOf = (name) => name.split(" ")[0];

function repeated(run, code) {
  const asked = (run.closed?.decisions ?? []).filter((decision) => decision.decision === "repeat");
  if (asked.some((decision) => decision.subject.split(" and ").some((name) => codeOf(name) === code))) return true;
  const touched = (run.bracketing?.held ?? []).some((name) => codeOf(name) === code);
  if (asked.some((decision) => decision.what === "control")) return true; // a control that fails repeats the whole batch
  return touched && asked.some((decision) => decision.what === "verification");
}

/**
 * Why a bottle waits for another digestion, or null. `factor` is the next dilution as the
 * server stated it beside the result, else the one it had; `recipe` the one that it is meant for.
 * The records of its earlier runs and results stay as they are.
 * @param {object} bottle its record
 * @returns {{why: string, factor: number|null, recipe: string|undefined}|null}
 */
export function again(bottle) {
  const last = bottle.runs.length && !bottle.certificate && bottle.received?.decision !== "rejected" ? one("run", bottle.runs.at(-1)) : null;
  if (!last) return null;
  if (last.state === "failed") return { why: `its run failed: ${last.name}`, factor: factorIn(last, bottle.code) };
  const results = bottle.results.map((id) => one("result", id)).filter((found) => found?.run === last.id);
  const next = results.find((found) => found.next_dilution)?.next_dilution;
  const factor = next?.dilution_factor ?? factorIn(last, bottle.code);
  if (repeated(last, bottle.code)) return { why: `to repeat after ${last.name}`, factor, recipe: next?.recipe };
  const rejected = results.find((found) => found.review?.decision === "rejected");
  if (rejected) return { why: `its result was rejected: ${rejected.review.reason}`, factor, recipe: next?.recipe };
  return null;
}

const factorIn = (run, code) => run.tubes.find((tube) => tube.bottle === code)?.dilution?.factor ?? null;
