// Emergency and first-aid lines: never behind a sign-in, at hand without a network.

import { html, useEffect } from "../parts/html.js";
import { useWords } from "../parts/words.js";

/** The emergency page. */
export function Emergency() {
  const words = useWords();
  useEffect(() => { document.title = "Emergency · Weirbook"; }, []);
  return html`<main class="page stack" id="main" tabindex="-1">
    <h1>Emergency and first aid</h1>
    ${words ? words.emergency.map((part) => html`<section class="card stop" key=${part.id}><h2>${part.title}</h2>
      <ul>${part.lines.map((line) => html`<li key=${line}>${line}</li>`)}</ul></section>`)
      : html`<p class="card stop"><strong>Call the emergency number posted at your site.</strong> The lines kept here could not be read; reload this page.</p>`}
    ${words && html`<p class="soft">${words.deferral}</p>`}
    <p><a class="button" href="/field">Back</a></p>
  </main>`;
}
