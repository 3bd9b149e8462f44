// What waits at the bench: runs first, then bottles by the time they have left.

import { html } from "../parts/html.js";
import { clock, day, dilution } from "../parts/format.js";
import { Empty, Frame, Where } from "../parts/frame.js";
import { Hold } from "../parts/hold.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { again } from "./again.js";
import { ToLookAt } from "./charts.js";
import { Due } from "./due.js";
import { dueList } from "./duties.js";
import { heatedAt, span, useNow } from "./timer.js";

const OPEN = new Set(["planned", "heating", "cooling", "reading", "calculated"]);

/** What a run waits for, in words. */
export function runWords(run, now, zone) {
  if (run.state === "heating") {
    const rest = heatedAt(run) - now;
    return rest > 0 ? `heating, ${span(rest)} left, until ${clock(heatedAt(run), zone)}` : "heating is over: take the tubes out";
  }
  return { planned: "planned, gates are open", cooling: "cooling", reading: "readings", calculated: "results: decide and close", closed: "closed", failed: "failed" }[run.state];
}

function RunRow({ run, zone }) {
  const now = useNow();
  return html`<a href="/bench/run/${encodeURIComponent(run.id)}"><strong>${run.name}</strong>
    <span class="under"><span>${runWords(run, now, zone)}</span>${run.local ? html`<${Where} about=${run.id} />` : ""}</span></a>`;
}

const WAITING = new Set(["handed over", "received", "taken"]);

/** Bottles that are in no run yet, and those to be digested again, by the time they have left. */
export function waitingBottles() {
  return all("bottle")
    .map((bottle) => ({ ...bottle, again: again(bottle) }))
    .filter((bottle) => WAITING.has(bottle.state) || bottle.again)
    .map((bottle) => ({ ...bottle, sampled: bottle.sample ? one("sample", bottle.sample) : null, place: bottle.point ? one("point", bottle.point) : null }))
    .sort((a, b) => ((a.sampled?.hold_until ?? "") < (b.sampled?.hold_until ?? "") ? -1 : 1));
}

function dilutionWords({ again: repeat, sampled: { plan } }) {
  if (repeat?.factor) return `next: ${dilution(repeat.factor)}`;
  return plan ? `plan: ${dilution(plan.dilution_factor)}` : "dilution open";
}

function BottleRow({ bottle }) {
  const to = bottle.state === "received" || bottle.again ? "/bench/plan" : `/bench/receive/${bottle.code}`;
  return html`<a href=${to}><strong>${bottle.code}</strong>
    <span class="under"><span>${bottle.place ? `${bottle.place.discharger_name}, ${bottle.place.name}` : "its sample has not arrived yet"}</span><span>${bottle.again ? html`<strong>▲ ${bottle.again.why}</strong>` : bottle.state}</span></span>
    ${bottle.sampled && html`<span class="under"><span>${dilutionWords(bottle)}</span><${Hold} sample=${bottle.sampled} /></span>`}</a>`;
}

const SOON_MS = 14 * 86400000;

function DueSoon({ zone }) {
  const [first] = useView(() => dueList(day(new Date(), zone)));
  if (!first || first.due > day(new Date(Date.now() + SOON_MS), zone)) return null;
  return html`<p class="card wait">◇ Detection limit, by <strong>${first.due}</strong>: ${first.what}. <a href="/bench/studies">All that is due</a></p>`;
}

/** The first screen of the Bench. */
export function Home() {
  useWords(); // the words of the gates are on the tablet before the network is lost
  const settings = useView(programme);
  const runs = useView(() => all("run")).reverse();
  const bottles = useView(waitingBottles);
  const open = runs.filter((run) => OPEN.has(run.state));
  const done = runs.filter((run) => !OPEN.has(run.state)).slice(0, 6);
  return html`<${Frame} place="bench" title="What waits" about=${settings?.laboratory}>
    <div class="stack">
      <div class="row"><a class="button" href="/bench/receive">Receive a bottle</a><a class="button" href="/bench/plan">Plan a run</a><a class="button" href="/bench/stores">Stores</a><a class="button" href="/bench/waste">Waste</a><a class="button" href="/bench/measure">Chloride and others</a><a class="button" href="/bench/studies">Detection limits</a><a class="button" href="/bench/charts">Control charts</a></div>
      <${DueSoon} zone=${settings?.zone} /><${ToLookAt} />
      <h2>Runs</h2>
      ${open.length ? html`<nav class="list" aria-label="Open runs">${open.map((run) => html`<${RunRow} key=${run.id} run=${run} zone=${settings?.zone} />`)}</nav>`
        : html`<${Empty} title="No run is open">Plan one when bottles were received.<//>`}
      <h2>Bottles</h2>
      ${bottles.length ? html`<nav class="list" aria-label="Bottles that wait">${bottles.map((bottle) => html`<${BottleRow} key=${bottle.code} bottle=${bottle} />`)}</nav>`
        : html`<${Empty} title="No bottle waits">Bottles appear when they were taken or handed over; any bottle with a code can be received.<//>`}
      <${Due} />
      ${done.length > 0 && html`<h2>Finished</h2><nav class="list" aria-label="Finished runs">${done.map((run) => html`<${RunRow} key=${run.id} run=${run} zone=${settings?.zone} />`)}</nav>`}
      <p><a href="/emergency">Emergency and first aid</a></p>
    </div><//>`;
}
