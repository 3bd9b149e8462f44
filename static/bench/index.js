// The Bench place: what waits, receipt, the run from the rack to its end, the stores.

import { html } from "../parts/html.js";
import { Chart, Charts } from "./charts.js";
import { Home } from "./home.js";
import { Measure } from "./measure.js";
import { Instrument } from "./instruments.js";
import { Plan } from "./plan.js";
import { Receive } from "./receive.js";
import { RecipePage } from "./recipes.js";
import { Run } from "./run.js";
import { AddCalibration } from "./calibration.js";
import { CurvePage } from "./curve_page.js";
import { AddThing, Stores } from "./stores.js";
import { Waste } from "./waste.js";
import { PlanStudy, Studies } from "./studies.js";
import { Study } from "./study.js";

/**
 * The screen of a path below /bench.
 * @param {string[]} rest the path's parts after the place
 */
export function bench([what, id]) {
  if (what === "receive") return html`<${Receive} given=${id} />`;
  if (what === "plan") return html`<${Plan} />`;
  if (what === "measure") return html`<${Measure} key=${id} given=${id} />`;
  if (what === "studies") return id === "new" ? html`<${PlanStudy} />` : html`<${Studies} />`;
  if (what === "study") return html`<${Study} key=${id} id=${id} />`;
  if (what === "charts") return id ? html`<${Chart} key=${id} id=${id} />` : html`<${Charts} />`;
  if (what === "run") return html`<${Run} key=${id} id=${id} />`;
  if (what === "waste") return html`<${Waste} />`;
  if (what === "instrument" && id) return html`<${Instrument} key=${id} id=${id} />`;
  if (what === "curve" && id) return html`<${CurvePage} key=${id} id=${id} />`;
  if (what === "recipe" && id) return html`<${RecipePage} key=${id} id=${id} />`;
  if (what === "stores" && id === "calibration") return html`<${AddCalibration} />`;
  if (what === "stores" && id) return html`<${AddThing} key=${id} what=${id} />`;
  if (what === "stores") return html`<${Stores} />`;
  return html`<${Home} />`;
}
