// Signing in. What is recorded on this device is kept, whoever signs in.

import { html, useEffect, useState } from "../parts/html.js";
import { TextField, useSaving } from "../parts/fields.js";
import { Problem, go } from "../parts/frame.js";
import { ask, askState, keep } from "../parts/session.js";
import { sync } from "../parts/sync.js";

/** The page for signing in. */
export function SignIn() {
  const [v, setV] = useState({ sign_in: "", password: "" });
  const [server, setServer] = useState(undefined);
  useEffect(() => { document.title = "Sign in · Weirbook"; }, []);
  useEffect(() => { askState().then(setServer, () => setServer(null)); }, []);
  const enter = async (state) => {
    await keep(state);
    await sync();
    go("/field");
  };
  const { save, problem, busy } = useSaving(async () => enter(await ask("POST", "/api/session", v)));
  const visit = useSaving(async () => enter(await ask("POST", "/api/example", {})));
  return html`<main class="page stack" id="main" tabindex="-1">
    <h1>Sign in</h1>
    ${server === null && html`<p class="card wait">The server cannot be reached from here. Sign in when it can; what was recorded on this tablet is kept.</p>`}
    ${server && !server.started && html`<p class="card">No programme runs on this server yet. <a href="/start">Start one</a>.</p>`}
    <form class="stack" onSubmit=${save}>
      <${TextField} label="Sign-in name" value=${v.sign_in} onInput=${(sign_in) => setV({ ...v, sign_in })} autocomplete="username" autocapitalize="none" required />
      <${TextField} label="Password" type="password" value=${v.password} onInput=${(password) => setV({ ...v, password })} autocomplete="current-password" required />
      <${Problem} words=${problem} />
      <button class="main" disabled=${busy}>${busy ? "Signing in…" : "Sign in"}</button>
    </form>
    ${server?.example && html`<button type="button" onClick=${visit.save} disabled=${visit.busy}>Look around with the example</button><${Problem} words=${visit.problem} />`}
    <p><a href="/emergency">Emergency and first aid</a></p>
  </main>`;
}
