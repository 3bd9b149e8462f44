// People of the programme and their roles. Adding one needs the server, since a password never lies in an entry.

import { html, useState } from "../parts/html.js";
import { Check, TextField, useSaving } from "../parts/fields.js";
import { Frame, Problem, say } from "../parts/frame.js";
import { ask } from "../parts/session.js";
import { sync } from "../parts/sync.js";
import { all, useView } from "../parts/view.js";

const ROLES = ["inspector", "analyst", "coordinator", "administrator"];
const empty = () => ({ name: "", sign_in: "", password: "", roles: ["inspector"] });

function Add() {
  const [v, setV] = useState(empty());
  const set = (name) => (value) => setV({ ...v, [name]: value });
  const { save, problem, busy } = useSaving(async () => {
    await ask("POST", "/api/people", v);
    say(`${v.name} can sign in now.`);
    setV(empty());
    await sync();
  });
  return html`<form class="card stack" onSubmit=${save}><h2>Add a person</h2>
    <${TextField} label="Name" value=${v.name} onInput=${set("name")} required />
    <${TextField} label="Sign-in name" value=${v.sign_in} onInput=${set("sign_in")} autocapitalize="none" autocomplete="off" required />
    <${TextField} label="First password" type="text" value=${v.password} onInput=${set("password")} hint="at least 12 characters" autocomplete="off" required />
    ${ROLES.map((role) => html`<${Check} key=${role} label=${role} checked=${v.roles.includes(role)} onChange=${(on) => set("roles")(on ? [...v.roles, role] : v.roles.filter((r) => r !== role))} />`)}
    <${Problem} words=${problem} /><button disabled=${busy}>${busy ? "Adding…" : "Add"}</button></form>`;
}

/** The people of the programme. */
export function People() {
  const people = useView(() => all("person")).sort((a, b) => (a.name < b.name ? -1 : 1));
  return html`<${Frame} place="review" title="People"><div class="stack">
    <section class="card"><table><thead><tr><th>Name</th><th>Roles</th></tr></thead><tbody>
      ${people.map((person) => html`<tr key=${person.id}><td>${person.name}${person.active ? "" : " (no longer)"}</td><td>${person.roles.join(", ")}</td></tr>`)}</tbody></table></section>
    <p><a href="/review/devices">Devices that sent entries</a></p>
    <${Add} /></div><//>`;
}
