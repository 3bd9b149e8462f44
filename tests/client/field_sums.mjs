// The tablet's sums of a stop; reads {units, words, cases} and writes the answers as JSON.

import { readFileSync } from "node:fs";
import { alarmsOf, aliquotsOf, judged, sharesOf } from "../../static/parts/field_sums.js";
import { flowOf } from "../../static/parts/flow.js";

const { units, words, cases } = JSON.parse(readFileSync(0, "utf8"));
console.log(JSON.stringify({
  flows: cases.flows.map((body) => flowOf(body, words.ratings, units)),
  gas: cases.gas.map((reading) => alarmsOf(reading, words.gas)),
  checks: cases.checks.map(({ quantity, points }) => judged(quantity, points, words.acceptances)),
  shares: cases.shares.map(({ total, flows }) => sharesOf(total, flows)),
  pacing: cases.pacing.map((given) => aliquotsOf(...given)),
}));
