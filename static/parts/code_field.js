// A bottle's code: scanned by the camera where the browser can, typed, or tapped on a big keypad of its own letters.

import { ALPHABET } from "./bottle_code.js";
import { TextField } from "./fields.js";
import { html, useEffect, useRef, useState } from "./html.js";

const LOOK_MS = 250;
const canScan = () => "BarcodeDetector" in globalThis && Boolean(navigator.mediaDevices?.getUserMedia);

function Camera({ onCode, onEnd }) {
  const video = useRef(null);
  const [problem, setProblem] = useState("");
  useEffect(() => {
    let stream = null;
    let timer = 0;
    const look = async (detector) => {
      const found = await detector.detect(video.current).catch(() => []);
      const text = found[0]?.rawValue;
      if (text) onCode(text.split("/").at(-1));
      else timer = setTimeout(look, LOOK_MS, detector);
    };
    navigator.mediaDevices.getUserMedia({ video: { facingMode: "environment" } }).then(async (given) => {
      stream = given;
      video.current.srcObject = given;
      await video.current.play();
      look(new BarcodeDetector({ formats: ["qr_code"] }));
    }).catch(() => setProblem("The camera cannot be used here: type the code."));
    return () => {
      clearTimeout(timer);
      stream?.getTracks().forEach((track) => track.stop());
    };
  }, []);
  return html`<div class="stack">${problem ? html`<p role="alert" class="above">▲ ${problem}</p>` : html`<video class="camera" ref=${video} muted playsinline aria-label="Camera: hold the label in front of it"></video>`}
    <button type="button" onClick=${onEnd}>Close the camera</button></div>`;
}

/** A field for a bottle's code. The props are those of a line of text. */
export function CodeField({ value, onInput, ...rest }) {
  const [how, setHow] = useState("");
  const turn = (to) => () => setHow(how === to ? "" : to);
  return html`<${TextField} class="code" value=${value} maxlength="12" autocomplete="off" autocapitalize="characters" spellcheck="false" enterkeyhint="next" onInput=${onInput} ...${rest} />
    <div class="row">${canScan() && html`<button type="button" aria-pressed=${how === "camera" ? "true" : "false"} onClick=${turn("camera")}>Scan</button>`}
      <button type="button" aria-pressed=${how === "keys" ? "true" : "false"} onClick=${turn("keys")}>Big keys</button></div>
    ${how === "camera" && html`<${Camera} onCode=${(text) => { onInput(text); setHow(""); }} onEnd=${() => setHow("")} />`}
    ${how === "keys" && html`<div class="keypad letters" role="group" aria-label="Keypad of bottle codes">${[...ALPHABET].map((letter) => html`<button type="button" key=${letter} onClick=${() => onInput(value + letter)}>${letter}</button>`)}
      <button type="button" aria-label="Delete the last character" onClick=${() => onInput(value.slice(0, -1))}>⌫</button></div>`}`;
}
