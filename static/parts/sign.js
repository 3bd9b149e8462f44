// A signature on glass: strokes as an SVG path, so that it prints as it was written. Without a pointer, a typed name stands.

import { html, useRef, useState } from "./html.js";
import { TextField } from "./fields.js";

const W = 320;
const H = 110;
const LONGEST = 18_000;

/** A signature as it is shown. */
export const Signed = ({ signature }) => (signature ? html`<figure class="signed"><svg viewBox="0 0 ${W} ${H}" role="img" aria-label="Signature of ${signature.name}">
  <path d=${signature.strokes} fill="none" stroke="currentColor" stroke-width="2.5" stroke-linecap="round" stroke-linejoin="round" /></svg><figcaption>${signature.name}</figcaption></figure>` : null);

/**
 * A field to sign in. `value` is {name, strokes}.
 * @param {{label: string, value: {name: string, strokes: string}, onSign: (value: object) => void}} props
 */
export function Sign({ label, value, onSign }) {
  const drawing = useRef(false);
  const [live, setLive] = useState(null);
  const strokes = live ?? value.strokes;
  const at = (event) => {
    const box = event.currentTarget.getBoundingClientRect();
    return `${Math.round(((event.clientX - box.left) / box.width) * W)} ${Math.round(((event.clientY - box.top) / box.height) * H)}`;
  };
  const down = (event) => {
    event.preventDefault();
    event.currentTarget.setPointerCapture?.(event.pointerId);
    drawing.current = true;
    setLive(`${strokes}M${at(event)}`);
  };
  const move = (event) => { if (drawing.current && strokes.length < LONGEST) setLive(`${strokes}L${at(event)}`); };
  const up = () => {
    if (!drawing.current) return;
    drawing.current = false;
    onSign({ ...value, strokes });
    setLive(null);
  };
  return html`<fieldset class="stack"><legend>${label}</legend>
    <${TextField} label="Name" value=${value.name} maxlength="200" onInput=${(name) => onSign({ ...value, name })} />
    <svg class="pad" viewBox="0 0 ${W} ${H}" role="img" aria-label=${strokes ? "Signed" : "Field to sign in with a finger"} onPointerDown=${down} onPointerMove=${move} onPointerUp=${up} onPointerCancel=${up}>
      <path d="M12 88H308" stroke="var(--rule)" /><path d=${strokes} fill="none" stroke="var(--ink)" stroke-width="2.5" stroke-linecap="round" stroke-linejoin="round" /></svg>
    ${strokes && html`<button type="button" class="quiet" onClick=${() => onSign({ ...value, strokes: "" })}>Sign again</button>`}</fieldset>`;
}

/** Nobody has signed yet. */
export const UNSIGNED = { name: "", strokes: "" };

/** A signature as an entry holds it, or null without strokes. */
export const signatureOf = ({ name, strokes }) => (strokes && name.trim() ? { name: name.trim(), strokes } : null);
