// Rounds: planned stops of a day, carried on the tablet, in any order, with more added on the way.

import { html, useState } from "../parts/html.js";
import { Choice, Select, TextField, useForm, useSaving } from "../parts/fields.js";
import { day, plain } from "../parts/format.js";
import { Empty, Problem, Where, go, say } from "../parts/frame.js";
import { newId, state } from "../parts/journal.js";
import { usePerson } from "../parts/person.js";
import { all, one, programme, useView } from "../parts/view.js";
import { limitOf, nameOf } from "./point.js";
import { outcomeWords } from "./visit.js";

/** Rounds, the newest day first. */
const rounds = () => all("round").reverse();

/** How far a round is: stops done, stops in all. */
export function progressOf(round) {
  const done = round.stops.filter((stop) => one("visit", round.visits[stop.id])?.ended).length;
  return { done, all: round.stops.length };
}

function Bar({ round }) {
  const { done, all: count } = progressOf(round);
  return html`<progress max=${count || 1} value=${done} aria-label="Stops done"></progress> <strong>${done} of ${count}</strong> stops done`;
}

/** Today's rounds, above the list of points. */
export function Today() {
  const today = day(new Date(), programme()?.zone);
  const found = useView(rounds).filter((round) => round.day === today);
  return found.map((round) => html`<a class="card round" key=${round.id} href="/field/round/${round.id}"><strong>${round.name}</strong><span><${Bar} round=${round} /></span></a>`);
}

/** All rounds. */
export function Rounds() {
  const found = useView(rounds);
  return html`<div class="screen stack"><p class="back"><a href="/field">All points</a></p><div class="row spread"><h1>Rounds</h1><a class="button" href="/field/round/new">Plan a round</a></div>
    ${found.length === 0 ? html`<${Empty} title="No round is planned">Plan one: points, order, what to take at each. A stop without a plan is recorded from its point.<//>`
      : html`<ul class="plain list">${found.slice(0, 60).map((round) => html`<li key=${round.id}><a href="/field/round/${round.id}"><strong>${round.name}</strong><span class="under"><span>${round.day}${round.inspector ? `, ${one("person", round.inspector)?.name ?? ""}` : ""}</span><span><${Bar} round=${round} /></span></span></a></li>`)}</ul>`}</div>`;
}

const newStop = (point) => ({ id: newId(), point: point.id, sample_kind: point.sample_kind, bottles: 1, note: "" });

function Pick({ taken, onPick }) {
  const [text, setText] = useState("");
  const points = useView(() => all("point")).filter((point) => !taken.includes(point.id));
  const found = text.trim() ? points.filter((point) => nameOf(point).toLowerCase().includes(text.trim().toLowerCase())) : [];
  return html`<div class="stack"><${TextField} label="Add a stop" type="search" value=${text} onInput=${setText} hint="part of the firm's name or the outlet" />
    ${found.slice(0, 8).map((point) => html`<button type="button" key=${point.id} onClick=${() => { setText(""); onPick(point); }}>+ ${nameOf(point)}</button>`)}</div>`;
}

const swapped = (stops, i, j) => stops.map((stop, k) => (k === i ? stops[j] : k === j ? stops[i] : stop));

function Stop({ stop, round, i, move }) {
  const point = one("point", stop.point);
  const visit = one("visit", round.visits[stop.id]);
  const limit = point && limitOf(point, round.day);
  const to = visit ? `/field/visit/${visit.id}` : `/field/round/${round.id}/arrive/${stop.id}`;
  return html`<li class="item stack"><a href=${to}><strong>${i + 1}. ${point ? nameOf(point) : "a point that is not on this tablet"}</strong>
      <span class="under"><span>${outcomeWords(visit)}</span><span>${stop.sample_kind}, ${stop.bottles} ${stop.bottles === 1 ? "bottle" : "bottles"}${limit ? `; limit ${plain(limit.value)} mg/L` : ""}</span></span>${stop.note && html`<span class="soft">${stop.note}</span>`}</a>
    <div class="row">${i > 0 && html`<button type="button" aria-label="Move ${point ? nameOf(point) : "stop"} up" onClick=${() => move(i, i - 1)}>↑</button>`}${i < round.stops.length - 1 && html`<button type="button" aria-label="Move ${point ? nameOf(point) : "stop"} down" onClick=${() => move(i, i + 1)}>↓</button>`}
      ${visit && html`<${Where} about=${visit.id} />`}</div></li>`;
}

/** One round: its stops, what came of each, what is next. */
export function Round({ id }) {
  const round = useView(() => one("round", id));
  const { save: change, problem } = useSaving(async () => {});
  if (!round) return html`<div class="screen"><h1>Round</h1><${Empty} title="This round is not on this tablet"><a href="/field/rounds">All rounds</a><//></div>`;
  const restate = (stops) => state("round.changed", id, { stops }).catch((error) => say(error.message));
  const bottles = round.stops.reduce((sum, stop) => sum + stop.bottles, 0);
  return html`<div class="screen stack"><p class="back"><a href="/field/rounds">All rounds</a></p><header><h1>${round.name}</h1><p class="soft">${round.day}, ${bottles} ${bottles === 1 ? "bottle" : "bottles"} to carry. <${Where} about=${id} /></p><p><${Bar} round=${round} /></p></header>
    <${Problem} words=${problem} />${round.stops.length === 0 && html`<${Empty} title="No stop yet">Add one below.<//>`}
    <ol class="plain list stops">${round.stops.map((stop, i) => html`<${Stop} key=${stop.id} ...${{ stop, round, i }} move=${(a, b) => { change(); restate(swapped(round.stops, a, b)); }} />`)}</ol>
    <section class="card"><${Pick} taken=${[]} onPick=${(point) => restate([...round.stops, newStop(point)])} /></section>
    <p class="row"><a class="button" href="/field/meters">Meters</a><a class="button" href="/field/samples">My samples</a></p></div>`;
}

/** Planning a round. */
export function PlanRound() {
  const person = usePerson();
  const today = day(new Date(), programme()?.zone);
  const people = useView(() => all("person")).filter((one_) => one_.active !== false && one_.roles.includes("inspector"));
  const [v, set, forget] = useForm("round", { name: "", day: "", inspector: null, stops: [] });
  const { save, problem, busy } = useSaving(async () => {
    if (!v.stops.length) throw new Error("Add at least one stop.");
    const id = newId();
    await state("round.planned", id, { name: v.name.trim() || "Round", day: v.day || today, inspector: v.inspector || null, stops: v.stops });
    await forget();
    go(`/field/round/${id}`);
  });
  const put = (i, change) => set("stops", v.stops.map((stop, k) => (k === i ? { ...stop, ...change } : stop)));
  return html`<div class="screen stack"><p class="back"><a href="/field/rounds">All rounds</a></p><h1>Plan a round</h1><form class="stack" onSubmit=${save} novalidate>
    <${TextField} label="Name" value=${v.name} maxlength="200" placeholder="Round" onInput=${(text) => set("name", text)} /><${TextField} label="Day" type="date" value=${v.day || today} onInput=${(text) => set("day", text)} />
    <${Select} label="Inspector" value=${v.inspector ?? (person?.roles?.includes("inspector") ? person.id : "")} options=${[["", "whoever goes"], ...people.map((one_) => [one_.id, one_.name])]} onChoose=${(id) => set("inspector", id)} />
    ${v.stops.map((stop, i) => html`<section class="card stack" key=${stop.id}><div class="row spread"><h2>${i + 1}. ${nameOf(one("point", stop.point) ?? { discharger_name: "?", name: "" })}</h2><button type="button" class="quiet" onClick=${() => set("stops", v.stops.filter((one_) => one_ !== stop))}>Take off</button></div>
      <${Choice} label="Sample" value=${stop.sample_kind} options=${[["grab", "Grab"], ["composite", "Composite"]]} onChoose=${(sample_kind) => put(i, { sample_kind })} />
      <${Choice} label="Bottles" value=${String(stop.bottles)} options=${["0", "1", "2", "3"]} onChoose=${(count) => put(i, { bottles: Number(count) })} />
      <${TextField} label="Remark" value=${stop.note} maxlength="500" onInput=${(note) => put(i, { note })} /></section>`)}
    <section class="card"><${Pick} taken=${v.stops.map((stop) => stop.point)} onPick=${(point) => set("stops", [...v.stops, newStop(point)])} /></section>
    <${Problem} words=${problem} /><div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the round"}</button></div></form></div>`;
}

