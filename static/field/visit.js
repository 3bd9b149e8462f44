// A visit: hazards first, who is there, gas, flow, the sample, and how it ended. Nothing of it is ever a blank.

import { html, useState } from "../parts/html.js";
import { Check, Choice, LongField, TextField, useForm, useSaving } from "../parts/fields.js";
import { clock, plain } from "../parts/format.js";
import { Empty, Problem, Where, go, say } from "../parts/frame.js";
import { Hold } from "../parts/hold.js";
import { newId, state, withOffset } from "../parts/journal.js";
import { Sign, Signed, UNSIGNED, signatureOf } from "../parts/sign.js";
import { all, one, programme, useView } from "../parts/view.js";
import { useWords } from "../parts/words.js";
import { Hazards } from "./card.js";
import { Flow, Flows } from "./flow_form.js";
import { Gas, GasReadings, gasGate } from "./gas.js";
import { ACTIVITIES, cardOf, limitOf, nameOf } from "./point.js";
import { openVisit, samplerAt } from "./sampler.js";

const OUTCOMES = [["sampled", "Sampled"], ["sampler set", "Sampler set"], ["no flow", "No flow"], ["refused", "Entry refused"], ["unsafe", "Unsafe"], ["not representative", "Not representative"], ["not sampled", "Not sampled"]];
const ASKS = {
  "no flow": "What shows it: the dry weir, the totalizer, the reason given. It is reported as no discharge, never as 0 mg/L.",
  refused: "Name, exact words, what was read out, who saw it. Do not argue; call the coordinator. The legal way is theirs.",
  unsafe: "What made it unsafe. Nobody asks you to go on.",
  "not representative": "Line down, rain, cleaning: a sample may still be taken, and stays in the list with this remark.",
  "not sampled": "What happened: sampler failed, seal broken, bottle overflowed, no access.",
};

/** Where an outcome stands, as a word and a shape. */
export const outcomeWords = (visit) => (visit ? (visit.outcome ? `${visit.outcome === "sampled" || visit.outcome === "sampler set" ? "●" : "◇"} ${visit.outcome}` : "◐ there now") : "○ to do");

const ARRIVAL = { introduced: false, present: [{ name: "", title: "", phone: "" }], activity: null, production: "", weather: "" };

/** Arriving at a point, planned or not. */
export function Arrive({ id, stop, round }) {
  const point = useView(() => one("point", id));
  const open = useView(() => openVisit(id));
  const [v, set, forget] = useForm(`arrive:${id}`, ARRIVAL);
  const { save, problem, busy } = useSaving(async () => {
    const about = newId();
    const present = v.present.filter((one_) => one_.name.trim()).map((one_) => ({ name: one_.name.trim(), title: one_.title.trim(), phone: one_.phone.trim() }));
    await state("visit.begun", about, {
      round: round ?? null, stop: stop ?? null, point: id, arrived_at: withOffset(), introduced: v.introduced, present, activity: v.activity,
      production: v.production.trim(), weather: v.weather.trim(),
    });
    await forget();
    go(`/field/visit/${about}`);
  });
  if (!point) return html`<div class="screen"><h1>Arrive</h1><${Empty} title="This point is not on this tablet"><a href="/field">All points</a><//></div>`;
  const person = (i, name, text) => set("present", v.present.map((one_, k) => (k === i ? { ...one_, [name]: text } : one_)));
  return html`<div class="screen stack"><p class="back"><a href=${round ? `/field/round/${round}` : cardOf(id)}>Back</a></p>
    <header><h1>Arrive</h1><p class="soft">${nameOf(point)}</p></header><${Hazards} point=${point} />
    ${open && html`<p class="card wait">A visit is going on here. <a href="/field/visit/${open.id}">Go on with it</a></p>`}
    <form class="stack" onSubmit=${save} novalidate><section class="card stack"><h2>Who is there</h2>
      <${Check} label="I introduced myself and showed my credentials" checked=${v.introduced} onChange=${(on) => set("introduced", on)} />
      ${v.present.map((one_, i) => html`<div class="two" key=${i}><${TextField} label=${`Person ${i + 1}`} value=${one_.name} maxlength="200" onInput=${(text) => person(i, "name", text)} />
        <${TextField} label="Title" value=${one_.title} maxlength="200" onInput=${(text) => person(i, "title", text)} /><${TextField} label="Telephone" type="tel" value=${one_.phone} maxlength="40" onInput=${(text) => person(i, "phone", text)} /></div>`)}
      ${v.present.length < 10 && html`<button type="button" class="quiet" onClick=${() => set("present", [...v.present, { name: "", title: "", phone: "" }])}>One more person</button>`}</section>
    <section class="card stack"><h2>What goes on</h2><${Choice} label="At the firm" value=${v.activity} options=${ACTIVITIES} onChoose=${(key) => set("activity", v.activity === key ? null : key)} />
      <${TextField} label="State of production, in their words" value=${v.production} maxlength="500" onInput=${(text) => set("production", text)} />
      <${TextField} label="Weather" value=${v.weather} maxlength="200" onInput=${(text) => set("weather", text)} /></section>
    <${Problem} words=${problem} /><div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "I am here"}</button></div></form></div>`;
}

function SampleList({ visit }) {
  const samples = all("sample", visit.point).filter((sample) => sample.visit === visit.id);
  if (!samples.length) return null;
  return html`<ul class="plain past">${samples.map((sample) => html`<li key=${sample.id} class="row spread"><span><strong class="code">${sample.bottle}</strong> ${sample.purpose === "sample" ? sample.sample_kind : sample.purpose}${sample.split ? `; split, receipt ${sample.split.receipt}` : ""} <${Hold} sample=${sample} /></span>
      <span class="row">${!sample.split && html`<a class="button" href="/field/split/${sample.id}">Split</a>`}<${Where} about=${sample.id} /></span></li>`)}</ul>`;
}

function Samples({ visit, point, words }) {
  const sampler = samplerAt(point.id);
  const blocked = gasGate(visit, point, words).why.length > 0;
  const take = `${cardOf(point.id)}/take`;
  return html`<section class="card stack"><h2>Samples</h2>
    <${SampleList} visit=${visit} />
    ${sampler && html`<p>◐ A sampler runs here${sampler.planned && `: ${sampler.planned} aliquots planned`}${sampler.seal && `, seal ${sampler.seal}`}.</p>`}
    ${blocked ? html`<p class="above">▲ The gas readings do not allow a sample: see above.</p>` : html`<div class="row"><a class="button main" href=${take}>${sampler ? "Pick the composite up" : "Take a sample"}</a>
      ${!sampler && html`<a class="button" href="${cardOf(point.id)}/sampler">Set a sampler up</a>`}</div>`}
    ${point.flow_device === null && html`<p class="soft small">No flow device is registered for this point.</p>`}</section>`;
}

const LEAVING = { outcome: "", reason: "", told: "", remarks: "", signature: UNSIGNED, declined: false };

function Leave({ visit, point }) {
  const [v, set, forget] = useForm(`leave:${visit.id}`, LEAVING);
  const likely = visit.sampler || all("sampler", point.id).some((sampler) => sampler.visit === visit.id) ? "sampler set" : all("sample", point.id).some((sample) => sample.visit === visit.id) ? "sampled" : "";
  const outcome = v.outcome || likely;
  const plainEnd = outcome === "sampled" || outcome === "sampler set";
  const { save, problem, busy } = useSaving(async () => {
    if (!outcome) throw new Error("Choose how the visit ended.");
    if (!plainEnd && !v.reason.trim()) throw new Error("Say what happened: a visit without a sample is never a blank.");
    await state("visit.ended", visit.id, {
      outcome, left_at: withOffset(), reason: v.reason.trim(), told: v.told.trim(), remarks: v.remarks.trim(), signature: v.declined ? null : signatureOf(v.signature), declined: v.declined,
    });
    await forget();
    say("Saved on this tablet");
    go(visit.round ? `/field/round/${visit.round}` : cardOf(point.id));
  });
  return html`<form class="card stack" onSubmit=${save} novalidate><h2>Leave</h2>
    <${Choice} label="How it ended" value=${outcome} options=${OUTCOMES} onChoose=${(key) => set("outcome", key)} />
    ${ASKS[outcome] && html`<p class="soft">${ASKS[outcome]}</p>`}
    ${outcome && !plainEnd && html`<${LongField} label="What happened" value=${v.reason} onInput=${(text) => set("reason", text)} />
      <${TextField} label="Who was told" value=${v.told} maxlength="200" onInput=${(text) => set("told", text)} />`}
    <${LongField} label="The discharger's remarks, in their words" value=${v.remarks} onInput=${(text) => set("remarks", text)} />
    <${Check} label="They declined to sign" checked=${v.declined} onChange=${(on) => set("declined", on)} />
    ${!v.declined && html`<${Sign} label="For the discharger" value=${v.signature} onSign=${(value) => set("signature", value)} />`}
    <${Problem} words=${problem} /><button class="main" disabled=${busy}>${busy ? "Saving…" : "End the visit"}</button></form>`;
}

function Ended({ visit, words }) {
  const { ended } = visit;
  return html`<section class="card stack"><h2>Ended: ${visit.outcome}</h2><p>${clock(visit.arrived_at, programme()?.zone)} to ${clock(ended.left_at, programme()?.zone)}, ${ended.by}.</p>
    ${ended.reason && html`<p>${ended.reason}</p>`}${ended.told && html`<p class="soft">Told: ${ended.told}</p>`}${ended.remarks && html`<p>“${ended.remarks}”</p>`}
    ${ended.declined ? html`<p class="soft">They declined to sign.</p>` : html`<${Signed} signature=${ended.signature} />`}</section>
    ${visit.gas.length > 0 && html`<section class="card"><h2>Gas</h2><${GasReadings} visit=${visit} words=${words} /></section>`}
    ${visit.flows.length > 0 && html`<section class="card"><h2>Flow</h2><${Flows} visit=${visit} words=${words} /></section>`}
    <${SampleList} visit=${visit} />`;
}

/** The screen of one visit. */
export function Visit({ id }) {
  const words = useWords();
  const visit = useView(() => one("visit", id));
  const point = visit && one("point", visit.point);
  if (!visit || !point) return html`<div class="screen"><h1>Visit</h1><${Empty} title="This visit is not on this tablet"><a href="/field">All points</a><//></div>`;
  const limit = limitOf(point);
  return html`<div class="screen stack"><p class="back"><a href=${visit.round ? `/field/round/${visit.round}` : cardOf(point.id)}>${visit.round ? "The round" : "The point"}</a></p>
    <header><h1>${point.discharger_name}</h1><p class="soft where">${point.name}${point.access && `. ${point.access}`}</p>
      <p class="row"><span class="tag">${outcomeWords(visit)}</span><span class="tag">since ${clock(visit.arrived_at, programme()?.zone)}</span>${limit && html`<span class="tag">limit ${plain(limit.value)} mg/L</span>`}<${Where} about=${visit.id} /></p></header>
    <${Hazards} point=${point} />
    ${visit.present.length > 0 && html`<p>With ${visit.present.map((one_) => [one_.name, one_.title].filter(Boolean).join(", ")).join("; ")}.${visit.production && ` “${visit.production}”`}</p>`}
    ${visit.ended ? html`<${Ended} visit=${visit} words=${words} />` : html`<${Gas} ...${{ visit, point, words }} /><${Flow} ...${{ visit, point, words }} /><${Samples} ...${{ visit, point, words }} /><${Leave} visit=${visit} point=${point} />`}
    <p><a href="/emergency">Emergency and first aid</a></p></div>`;
}

const SPLIT = { to: "", container: "", receipt: "signed", signature: UNSIGNED, note: "" };

/** Part of a sample goes to the discharger. */
export function Split({ id }) {
  const sample = useView(() => one("sample", id));
  const [v, set, forget] = useForm(`split:${id}`, SPLIT);
  const back = sample?.visit ? `/field/visit/${sample.visit}` : "/field/samples";
  const [asked, setAsked] = useState(false);
  const { save, problem, busy } = useSaving(async () => {
    setAsked(true);
    if (!v.to.trim()) throw new Error("Say who got the other part.");
    const signature = v.receipt === "signed" ? signatureOf(v.signature) : null;
    if (v.receipt === "signed" && !signature) throw new Error("The receipt needs a name and a signature, or choose that it was refused.");
    await state("sample.split", id, { to: v.to.trim(), container: v.container.trim(), receipt: v.receipt, signature, note: v.note.trim() });
    await forget();
    say("Saved on this tablet");
    go(back);
  });
  if (!sample) return html`<div class="screen"><h1>Split</h1><${Empty} title="This sample is not on this tablet"><a href="/field/samples">My samples</a><//></div>`;
  return html`<div class="screen stack"><p class="back"><a href=${back}>Back</a></p><h1>Split sample <span class="code">${sample.bottle}</span></h1>
    <p class="soft">Both parts from the same mixed container, poured in turns.</p><form class="stack" onSubmit=${save} novalidate>
    <${TextField} label="Who got the other part" value=${v.to} wrong=${asked && !v.to.trim() ? "A name is needed." : ""} maxlength="200" onInput=${(text) => set("to", text)} />
    <${TextField} label="Their container" value=${v.container} maxlength="60" onInput=${(text) => set("container", text)} hint="its number, if it has one" />
    <${Choice} label="Receipt" value=${v.receipt} options=${[["signed", "Signed"], ["refused", "Refused"]]} onChoose=${(key) => set("receipt", key)} />
    ${v.receipt === "signed" && html`<${Sign} label="Receipt" value=${v.signature} onSign=${(value) => set("signature", value)} />`}
    <${LongField} label="Note" value=${v.note} onInput=${(text) => set("note", text)} /><${Problem} words=${problem} />
    <div class="sticky"><button class="main" disabled=${busy}>${busy ? "Saving…" : "Save the split"}</button></div></form></div>`;
}
