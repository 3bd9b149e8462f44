// The first page: one's own programme, or the invented one.

import { html, useEffect, useState } from "../parts/html.js";
import { TextField, useSaving } from "../parts/fields.js";
import { Mark, Problem, go } from "../parts/frame.js";
import { ask, askState, keep } from "../parts/session.js";
import { sync } from "../parts/sync.js";

async function enter(state) {
  await keep(state);
  await sync();
  go("/field");
}

const zone = () => Intl.DateTimeFormat().resolvedOptions().timeZone;

function Own({ back }) {
  const [v, setV] = useState({ programme: "", laboratory: "", zone: zone(), name: "", sign_in: "", password: "" });
  const [fields, setFields] = useState({});
  const [seen, setSeen] = useState(false);
  const set = (name) => (value) => setV({ ...v, [name]: value });
  const { save, problem, busy } = useSaving(async () => {
    setFields({});
    try {
      await enter(await ask("POST", "/api/start", {
        programme: { name: v.programme, laboratory: v.laboratory, zone: v.zone },
        person: { name: v.name, sign_in: v.sign_in, password: v.password },
      }));
    } catch (error) {
      setFields(error.fields ?? {});
      throw error;
    }
  });
  const wrong = (path) => fields[path]?.join(" ");
  return html`<form class="stack" onSubmit=${save}>
    <h1>Start my own programme</h1>
    <p>You become its first administrator; others are added later.</p>
    <${TextField} label="Programme (the authority)" value=${v.programme} onInput=${set("programme")} wrong=${wrong("programme.name")} required />
    <${TextField} label="Laboratory" value=${v.laboratory} onInput=${set("laboratory")} wrong=${wrong("programme.laboratory")} required />
    <${TextField} label="Time zone" value=${v.zone} onInput=${set("zone")} wrong=${wrong("programme.zone")} hint="Days and deadlines are counted in it." required />
    <${TextField} label="Your name" value=${v.name} onInput=${set("name")} wrong=${wrong("person.name")} autocomplete="name" required />
    <${TextField} label="Sign-in name" value=${v.sign_in} onInput=${set("sign_in")} wrong=${wrong("person.sign_in") ?? wrong("sign_in")} autocomplete="username" autocapitalize="none" required />
    <${TextField} label="Password" type=${seen ? "text" : "password"} value=${v.password} onInput=${set("password")} wrong=${wrong("person.password")}
      hint="At least 12 characters; a sentence is fine." autocomplete="new-password" required />
    <button type="button" class="quiet" aria-pressed=${seen ? "true" : "false"} onClick=${() => setSeen(!seen)}>${seen ? "Hide" : "Show"} the password</button>
    <${Problem} words=${problem} />
    <button class="main" disabled=${busy}>${busy ? "Starting…" : "Start"}</button>
    <button type="button" class="quiet" onClick=${back}>Back</button>
  </form>`;
}

/** The first page. */
export function Start() {
  const [own, setOwn] = useState(false);
  useEffect(() => { document.title = own ? "Start a programme · Weirbook" : "Weirbook"; }, [own]);
  const [server, setServer] = useState(undefined);
  useEffect(() => { askState().then(setServer, () => setServer(null)); }, []);
  const { save, problem, busy } = useSaving(async () => enter(await ask("POST", "/api/example", {})));
  if (own) return html`<main class="page" id="main" tabindex="-1"><${Own} back=${() => setOwn(false)} /></main>`;
  return html`<main class="page stack" id="main" tabindex="-1">
    <${Mark} /><h1>Weirbook</h1>
    <p>One bottle, from the discharge point to the signed certificate: logged without a network, diluted right the first time,
      digested, read, calculated with an honest uncertainty, held against the limit and certified.</p>
    ${server === null && html`<p class="card wait">The server cannot be reached from here. A programme is started with it at hand.</p>`}
    ${server?.started && html`<p class="card">A programme runs on this server already. <a href="/sign-in">Sign in</a></p>`}
    <button class="main" type="button" disabled=${server?.started} onClick=${() => setOwn(true)}>Start my own programme</button>
    <button type="button" onClick=${save} disabled=${busy || (server?.started && !server.example)} aria-live="polite">${busy ? "Filling the example…" : "Look around with an example"}</button>
    <p class="soft small">The example is invented: people, firms, places and numbers. It fills this server's empty store.</p>
    <${Problem} words=${problem} />
    <p><a href="/emergency">Emergency and first aid</a> · <a href="/sign-in">Sign in</a></p>
  </main>`;
}
