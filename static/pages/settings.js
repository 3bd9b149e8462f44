// This device: how it looks, what it keeps, who is here.

import { html, useEffect, useState } from "../parts/html.js";
import { OwnValues } from "../bench/charts.js";
import { getMeta } from "../parts/db.js";
import { askToKeep, durability, gradeWords } from "../parts/durability.js";
import { saveFile } from "../parts/export.js";
import { Check, Choice } from "../parts/fields.js";
import { dayAndTime } from "../parts/format.js";
import { Frame, exchangeNow } from "../parts/frame.js";
import { health } from "../parts/sync.js";
import { programme, useView } from "../parts/view.js";
import { Leave } from "./leave.js";

const PLAIN = { theme: "auto", gloves: false };

const COMFORT = "weirbook-comfort";

/** How this device looks. It is kept where it is read before the first drawing: nothing flickers, no choice is lost. */
function comfortHere() {
  try {
    return { ...PLAIN, ...JSON.parse(localStorage.getItem(COMFORT) ?? "{}") };
  } catch {
    return PLAIN;
  }
}

/** Put the device's comfort settings on the root. */
export function applyComfort() {
  const comfort = comfortHere();
  document.documentElement.dataset.theme = comfort.theme;
  document.documentElement.dataset.gloves = comfort.gloves ? "yes" : "no";
  return comfort;
}

function Comfort() {
  const [comfort, setComfort] = useState(comfortHere);
  const choose = (change) => {
    const next = { ...comfort, ...change };
    setComfort(next);
    localStorage.setItem(COMFORT, JSON.stringify(next));
    applyComfort();
  };
  return html`<section class="card stack"><h2>This tablet</h2>
    <${Choice} label="Look" value=${comfort.theme} onChoose=${(theme) => choose({ theme })}
      options=${[["auto", "As the device"], ["light", "Paper"], ["sun", "Sunlight"], ["dark", "Dark"]]} />
    <${Check} label="Gloves: larger targets" checked=${comfort.gloves} onChange=${(gloves) => choose({ gloves })} />
  </section>`;
}

function Storage() {
  const [grade, setGrade] = useState(null);
  const look = async () => {
    const room = await navigator.storage?.estimate?.();
    setGrade({ ...durability, room });
  };
  useEffect(() => { look().catch(() => {}); }, []);
  const protect = () => { askToKeep().then(look).catch(() => {}); };
  if (!grade) return null;
  return html`<section class="card stack"><h2>Storage</h2>
    <p>${gradeWords(grade)}</p>
    ${grade.room && html`<p class="soft small">${Math.round(grade.room.usage / 1e5) / 10} of ${Math.round(grade.room.quota / 1e6)} MB used.</p>`}
    ${!grade.kept && html`<button type="button" onClick=${protect}>Ask the browser to keep it</button>`}
  </section>`;
}

/** How the server's own backups go; told with the last contact. */
function Backups() {
  const [server, setServer] = useState(null);
  useEffect(() => { getMeta("server").then(setServer, () => {}); }, []);
  if (!server) return null;
  const { backup } = server;
  return html`<section class="card stack ${backup?.problem ? "stop" : ""}"><h2>Backups of the server</h2>
    ${!backup ? html`<p>The server makes none by itself: its administrator starts it with a folder for them, or copies it by <code>backup</code>.</p>`
      : backup.problem ? html`<p><strong>▲ ${backup.problem}</strong></p>` : html`<p>${backup.at ? `Last one ${dayAndTime(backup.at)}, verified, up to entry ${backup.position}` : "None was made yet"}; one every ${backup.hours} h.</p>`}</section>`;
}

/** The settings page. */
export function Settings() {
  const settings = useView(programme);
  const [person, setPerson] = useState(null);
  useEffect(() => { getMeta("person").then(setPerson, () => {}); }, []);
  return html`<${Frame} title="Settings" about=${settings?.name}>
    <div class="stack">
      <section class="card stack"><h2>Who is here</h2>
        <p>${person?.name ? html`<strong>${person.name}</strong>, ${person.roles.join(", ")}` : html`Nobody. <a href="/sign-in">Sign in</a>`}</p>
        ${person?.id && html`<${Leave} />`}
      </section>
      <section class="card stack"><h2>Exchange</h2>
        <p>Last contact: ${dayAndTime(health.contact)}. ${health.problem}</p>
        <div class="row"><button type="button" onClick=${exchangeNow}>Exchange now</button><a class="button" href="/waiting">My entries</a></div>
        <button type="button" class="quiet" onClick=${saveFile}>Save this tablet's entries as a file</button>
      </section>
      <${OwnValues} /><${Comfort} /><${Storage} /><${Backups} />
      <p><a href="/emergency">Emergency and first aid</a></p>
    </div>
  <//>`;
}
