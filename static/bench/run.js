// One run: the rack, and beside it the next thing to do.

import { html, useState } from "../parts/html.js";
import { Empty, Frame, Where } from "../parts/frame.js";
import { one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { Confirmed, Gate, openGates } from "./gates.js";
import { Cooling, Heating, Start } from "./heating.js";
import { runWords } from "./home.js";
import { Close, Outcome } from "./outcome.js";
import { Rack } from "./rack.js";
import { nextUnread, Readings } from "./readings.js";

const BEFORE_HEATING = "before heating";
const READING = new Set(["cooling", "reading"]);

function Waits({ run }) {
  return html`<section class="card stack"><h2>Calculated when the server is reached</h2><p>All readings are saved on this tablet. The result comes with the next contact.</p>
    ${run.problem && html`<p class="above">▲ ${run.problem.error}</p>`}</section>`;
}

function Reading({ run, words, position, onPick }) {
  const [gate] = openGates(words, run, "before reading");
  if (gate) {
    const minutes = words?.defaults?.cooling_minutes ?? 20;
    return html`<${Cooling} run=${run} minutes=${minutes}><${Gate} key=${gate.id} gate=${gate} run=${run} words=${words} /><//>`;
  }
  if (run.asked) return html`<${Waits} run=${run} />`;
  return html`<${Readings} run=${run} position=${position} onPick=${onPick} />`;
}

function Calculated({ run, words }) {
  const [gate] = openGates(words, run, "before closing");
  return html`<div class="stack"><${Outcome} run=${run} />
    ${gate ? html`<${Gate} key=${gate.id} gate=${gate} run=${run} words=${words} />` : html`<${Close} run=${run} />`}</div>`;
}

function Next({ run, words, position, onPick }) {
  if (!words) return html`<${Empty} title="The words of safety could not be read">Reload this page; without them no gate can be confirmed.<//>`;
  if (run.state === "planned") {
    const [gate] = openGates(words, run, BEFORE_HEATING);
    return gate ? html`<${Gate} key=${gate.id} gate=${gate} run=${run} words=${words} />` : html`<${Start} run=${run} words=${words} />`;
  }
  if (run.state === "heating") return html`<${Heating} run=${run} />`;
  if (READING.has(run.state)) return html`<${Reading} run=${run} words=${words} position=${position} onPick=${onPick} />`;
  if (run.state === "calculated") return html`<${Calculated} run=${run} words=${words} />`;
  if (run.state === "closed") return html`<${Outcome} run=${run} />`;
  return html`<section class="card stop"><h2>▲ The run failed</h2><p>${run.heating?.reason}</p><p>Its tubes give no result: the bottles are planned again.</p></section>`;
}

/** The screen of a run. */
export function Run({ id }) {
  const run = useView(() => one("run", id));
  const words = useWords();
  const zone = useView(programme)?.zone;
  const [picked, setPicked] = useState(null);
  if (!run) return html`<${Frame} place="bench" title="Run"><${Empty} title="This run is not on this tablet"><a href="/bench">What waits</a><//><//>`;
  const reading = READING.has(run.state) && !openGates(words, run, "before reading").length && !run.asked;
  const position = reading ? picked ?? nextUnread(run, 0) ?? run.tubes[0].position : null;
  const recipe = one("recipe", run.recipe);
  const rack = html`<div class="screen stack"><div class="row spread"><h1>${run.name}</h1><span class="soft">${run.answer ? "in the tube, mg/L" : recipe?.name}</span></div>
    <p role="status">${runWords(run, Date.now(), zone)} ${run.local && html`<${Where} about=${id} />`}</p>
    <${Rack} run=${run} current=${position} onPick=${reading ? setPicked : undefined} />
    <${Confirmed} run=${run} words=${words} />
    <p>${!run.local && html`<a href="/api/papers/run/${encodeURIComponent(id)}.pdf" target="_blank">Run sheet to print</a> · `}<a href="/bench">What waits</a> · <a href="/emergency">Emergency and first aid</a></p></div>`;
  const next = html`<div class="screen stack"><${Next} run=${run} words=${words} position=${position} onPick=${setPicked} /></div>`;
  return html`<${Frame} place="bench" title=${run.name} about=${recipe?.name} wide><div class="sides bench"><aside class="side front" aria-label="Next">${next}</aside><main class="side front" id="main">${rack}</main></div><//>`;
}
