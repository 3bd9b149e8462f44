// Form fields. A number is a text with a decimal keypad: kept as typed, shown back as it was read.

import { html, useEffect, useRef, useState } from "./html.js";
import { allDrafts, dropDraft, getDraft, putDraft } from "./db.js";
import { plain } from "./format.js";
import { read } from "./measured.js";
import { shown } from "./units.js";

let counter = 0;

/** A name for a field that nothing else on the page has. */
export function useName() {
  const name = useRef(null);
  name.current ??= `f${(counter += 1)}`;
  return name.current;
}

/** A measured value as an entry holds it, the text as typed; null for an empty field. */
export const measuredOf = (text, unit) => (text?.trim() ? { text: text.trim(), unit } : null);

const said = (sign) => ({ "<": "below ", ">": "above ", "=": "" })[sign];

/** How a typed number was read, or what is wrong with it. */
export function echo(text, unit) {
  if (!text.trim()) return { words: "", problem: "" };
  const reading = read(text);
  if (reading.problem) return { words: "", problem: reading.problem };
  const decimals = Math.min(6, `${reading.value}`.split(".")[1]?.length ?? 0);
  return { words: `read as ${said(reading.sign)}${plain(reading.value, decimals)} ${shown(unit ?? "")}`.trim(), problem: "" };
}

/** A field's frame: label, control, hint, what is wrong. */
export function Field({ label, name, hint, wrong, children }) {
  return html`<div class="field">
    <label for=${name}>${label}</label>
    ${children}
    ${hint && html`<p class="hint" id="${name}-hint">${hint}</p>`}
    ${wrong && html`<p class="wrong" id="${name}-wrong">${wrong}</p>`}
  </div>`;
}

/** A line of text. */
export function TextField({ label, value, onInput, hint, wrong, type = "text", ...rest }) {
  const name = useName();
  return html`<${Field} label=${label} name=${name} hint=${hint} wrong=${wrong}>
    <input id=${name} type=${type} value=${value} aria-invalid=${wrong ? "true" : undefined}
      aria-describedby=${wrong ? `${name}-wrong` : hint ? `${name}-hint` : undefined}
      onInput=${(event) => onInput(event.target.value)} ...${rest} />
  <//>`;
}

/** Several lines of text. */
export function LongField({ label, value, onInput, hint }) {
  const name = useName();
  return html`<${Field} label=${label} name=${name} hint=${hint}>
    <textarea id=${name} value=${value} onInput=${(event) => onInput(event.target.value)}></textarea>
  <//>`;
}

/** A measured number with its unit; `units` lets the person choose another unit of the same quantity. */
export function NumberField({ label, value, unit, units, onInput, onUnit, hint, wrong, autofocus }) {
  const name = useName();
  const told = echo(value, unit);
  const problem = wrong || told.problem;
  return html`<div class="field">
    <label for=${name}>${label}</label>
    <div class="with-unit">
      <input id=${name} class="number" type="text" inputmode="decimal" autocomplete="off" value=${value} autofocus=${autofocus}
        aria-invalid=${problem ? "true" : undefined} aria-describedby="${name}-told" onInput=${(event) => onInput(event.target.value)} />
      ${units
        ? html`<select aria-label="Unit of ${label}" value=${unit} onChange=${(event) => onUnit(event.target.value)}>
            ${units.map((one) => html`<option key=${one} value=${one}>${shown(one)}</option>`)}</select>`
        : html`<span class="unit">${shown(unit ?? "")}</span>`}
    </div>
    <p id="${name}-told" class=${problem ? "wrong" : "echo"} role="status">${problem || told.words || hint || ""}</p>
  </div>`;
}

/** One of a few choices, as buttons. */
export function Choice({ label, value, options, onChoose }) {
  const name = useName();
  return html`<div class="field" role="radiogroup" aria-labelledby=${name}>
    <span class="label" id=${name}>${label}</span>
    <div class="choices">${options.map((option) => {
      const [key, words] = Array.isArray(option) ? option : [option, option];
      return html`<button key=${key} type="button" role="radio" aria-checked=${value === key ? "true" : "false"} onClick=${() => onChoose(key)}>${words}</button>`;
    })}</div>
  </div>`;
}

/** A list to choose from. */
export function Select({ label, value, options, onChoose, hint }) {
  const name = useName();
  return html`<${Field} label=${label} name=${name} hint=${hint}>
    <select id=${name} value=${value} onChange=${(event) => onChoose(event.target.value)}>
      ${options.map(([key, words]) => html`<option key=${key} value=${key}>${words}</option>`)}
    </select>
  <//>`;
}

/** Yes or not yet. */
export function Check({ label, checked, onChange }) {
  const name = useName();
  return html`<div class="check"><input id=${name} type="checkbox" checked=${checked} onChange=${(event) => onChange(event.target.checked)} />
    <label for=${name}>${label}</label></div>`;
}

/** What stands in forms on this screen and is not saved yet, by the draft's key. */
export const typed = new Map();

export const TYPING = "weirbook-typing";
let letGo = null;

/** While something typed is unsaved, a lock says so to every window: a new version waits for it. */
function noteTyped(key, values) {
  if (values) typed.set(key, values);
  else typed.delete(key);
  if (!typed.size) letGo = void letGo?.();
  else if (!letGo) {
    const over = new Promise((end) => { letGo = end; });
    navigator.locks?.request(TYPING, { mode: "shared" }, () => over).catch(() => {});
  }
}

/** @type {Map<string, object>} the drafts as they stood when the page began and as typed since, so that a form is whole at its first drawing */
const drafts = new Map();

/** Read what was typed and not saved, before the first screen. */
export async function loadDrafts() {
  for (const { key, values } of await allDrafts()) drafts.set(key, values);
}

/** Lay out what a form will begin with. */
export function keepDraft(key, values) {
  drafts.set(key, values);
  return putDraft(key, values);
}

/** What another window may have typed or saved since; undefined when nothing differs. */
async function fromElsewhere(key, held) {
  const found = await getDraft(key).catch(() => held);
  return JSON.stringify(found) === JSON.stringify(held) ? undefined : found;
}

/**
 * A form's values, kept as a draft on every input and restored after the page was killed.
 * Returns [values, set(name, value), forget()].
 */
export function useForm(key, initial) {
  const begun = () => ({ key, values: { ...initial, ...drafts.get(key) } });
  const [held, setHeld] = useState(begun);
  const touched = useRef(null);
  const { values } = held.key === key ? held : begun();
  useEffect(() => {
    let here = true;
    const before = drafts.get(key) ?? null;
    noteTyped(key, before);
    fromElsewhere(key, before).then((found) => {
      if (!here || found === undefined || touched.current === key) return;
      if (found) drafts.set(key, found);
      else drafts.delete(key);
      noteTyped(key, found);
      setHeld(begun());
    });
    return () => {
      here = false;
      noteTyped(key, null);
    };
  }, [key]);
  const set = (name, value) => {
    touched.current = key;
    setHeld((last) => {
      const before = last.key === key ? last.values : begun().values;
      const after = { ...before, [name]: typeof value === "function" ? value(before[name]) : value };
      noteTyped(key, after);
      keepDraft(key, after).catch(() => {});
      return { key, values: after };
    });
  };
  const forget = () => {
    noteTyped(key, null);
    drafts.delete(key);
    return dropDraft(key);
  };
  return [values, set, forget];
}

/** Bring what is wrong into view, once it is drawn: the first marked field, else the words. */
function showProblem() {
  requestAnimationFrame(() => requestAnimationFrame(() => {
    const found = document.querySelector('main [aria-invalid="true"]') ?? document.querySelector('main [role="alert"]');
    found?.scrollIntoView({ block: "center" });
    if (found?.matches("input, select, textarea")) found.focus({ preventScroll: true });
  }));
}

/** Run a saving once, however often it is asked for; tells what is wrong in words. */
export function useSaving(work) {
  const [problem, setProblem] = useState("");
  const [busy, setBusy] = useState(false);
  const running = useRef(false);
  const save = async (event) => {
    event?.preventDefault();
    if (running.current) return;
    running.current = true;
    setBusy(true);
    setProblem("");
    try {
      await work();
    } catch (error) {
      setProblem(error.message || "Not saved. What you typed is still here; save again.");
      showProblem();
    }
    running.current = false;
    setBusy(false);
  };
  return { save, problem, busy };
}
