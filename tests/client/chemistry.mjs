// Prints what the tablet's own sums of chemistry give, for the test that holds them against the server's.

import { dutiesOf } from "../../static/bench/duties.js";
import { budgetWords, sharesOf } from "../../static/parts/beside.js";
import { chlorideGate } from "../../static/parts/chloride.js";

const { gates, studies, results } = JSON.parse(process.argv[2]);
console.log(JSON.stringify({
  gates: gates.map((given) => chlorideGate(...given)),
  duties: studies.map(([study, today]) => dutiesOf(study, today, (id) => id)),
  budgets: results.map((result) => [sharesOf(result), sharesOf(result) && budgetWords(result)]),
}));
process.exit(0);
