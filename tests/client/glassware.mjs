// Prints what the client's tables give, for the test that holds them against the server's.

import { dilutionOf } from "../../static/bench/dilutions.js";
import { FLASKS, PIPETTES, factorOf, relativeU } from "../../static/bench/glassware.js";

const { chains, factors, plans } = JSON.parse(process.argv[2]);
const steps = (chain) => chain.map(([pipette_ml, flask_ml]) => ({ pipette_ml, flask_ml }));
console.log(JSON.stringify({
  pipettes: [...PIPETTES],
  flasks: [...FLASKS],
  chains: chains.map((chain) => [factorOf(steps(chain)), relativeU(steps(chain))]),
  factors: factors.map((factor) => dilutionOf(factor, null)),
  plans: plans.map(([factor, chain]) => dilutionOf(factor, { dilution_factor: factor, steps: steps(chain), reason: "planned" })),
}));
