// Prints what the client's tables give, for the test that holds them against the server's.

import { dilutionOf } from "../../static/bench/dilutions.js";
import { FLASKS, PIPETTES, chainsFor, factorOf, relativeU } from "../../static/parts/glassware.js";

const { chains, factors, plans, shelf } = JSON.parse(process.argv[2]);
const steps = (chain) => chain.map(([pipette_ml, flask_ml]) => ({ pipette_ml, flask_ml }));
console.log(JSON.stringify({
  pipettes: [...PIPETTES],
  flasks: [...FLASKS],
  chains: chains.map((chain) => [factorOf(steps(chain)), relativeU(steps(chain))]),
  shelf: shelf.map(([factor, solids]) => chainsFor(factor, solids).map((made) => made.map((step) => [step.pipette_ml, step.flask_ml]))),
  factors: factors.map((factor) => dilutionOf(factor, null)),
  plans: plans.map(([factor, chain]) => dilutionOf(factor, { dilution_factor: factor, steps: steps(chain), reason: "planned" })),
}));
