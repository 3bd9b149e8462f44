// Which bottles are to be digested again: after a failed run, after a decision to repeat, after a rejected result.

import { one } from "../parts/view.js";

const codeOf = (name) => name.split(" ")[0];

function repeated(run, code) {
  const asked = (run.closed?.decisions ?? []).filter((decision) => decision.decision === "repeat");
  if (asked.some((decision) => decision.subject.split(" and ").some((name) => codeOf(name) === code))) return true;
  const touched = (run.bracketing?.held ?? []).some((name) => codeOf(name) === code);
  return touched && asked.some((decision) => decision.what === "verification");
}

/**
 * Why a bottle waits for another digestion, or null. `factor` is the dilution that the last answer advises, if it does.
 * The records of its earlier runs and results stay as they are.
 * @param {object} bottle its record
 * @returns {{why: string, factor: number|null}|null}
 */
export function again(bottle) {
  const last = bottle.runs.length && !bottle.certificate && bottle.received?.decision !== "rejected" ? one("run", bottle.runs.at(-1)) : null;
  if (!last) return null;
  if (last.state === "failed") return { why: `its run failed: ${last.name}`, factor: factorIn(last, bottle.code) };
  const result = bottle.results.map((id) => one("result", id)).find((found) => found?.run === last.id);
  const advised = last.answer?.samples.find((sample) => codeOf(sample.sample) === bottle.code)?.advice?.dilution_factor ?? null;
  if (repeated(last, bottle.code)) return { why: `to repeat after ${last.name}`, factor: advised ?? factorIn(last, bottle.code) };
  if (result?.review?.decision === "rejected") return { why: `its result was rejected: ${result.review.reason}`, factor: advised ?? factorIn(last, bottle.code) };
  return null;
}

const factorIn = (run, code) => run.tubes.find((tube) => tube.bottle === code)?.dilution?.factor ?? null;
