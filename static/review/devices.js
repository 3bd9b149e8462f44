// The devices that ever sent an entry: how far each got, what never came, what came twice. The server counts; it needs a contact.

import { html, useEffect, useState } from "../parts/html.js";
import { ago, dayAndTime } from "../parts/format.js";
import { Empty, Frame, Problem } from "../parts/frame.js";
import { ask } from "../parts/session.js";
import { one, programme, useView } from "../parts/view.js";

function Device({ row, zone }) {
  const wrong = [row.missing && `${row.missing} of ${row.last} never came`, row.doubled && `${row.doubled} came twice with different content: the device was copied`,
    row.breaks && `${row.breaks} do not follow the one before: its store was changed or put back`].filter(Boolean);
  return html`<li class="item"><div class="row spread"><strong class="code">${row.device.slice(0, 8)} · ${row.incarnation.slice(0, 4)}</strong><span>${wrong.length ? html`<strong class="above">▲ look at it</strong>` : "● whole"}</span></div>
    <div class="under"><span>${row.entries} entries, expected up to ${row.last}</span><span>${one("person", row.carrier)?.name ?? row.carrier}, ${ago(row.seen)} (${dayAndTime(row.seen, zone)})</span></div>
    ${wrong.map((words) => html`<div class="above" key=${words}>▲ ${words}</div>`)}</li>`;
}

/** The list of devices. */
export function Devices() {
  const zone = useView(programme)?.zone;
  const [found, setFound] = useState(null);
  const [problem, setProblem] = useState("");
  useEffect(() => { ask("GET", "/api/devices").then(({ devices }) => setFound(devices), (error) => setProblem(error.message)); }, []);
  return html`<${Frame} place="review" title="Devices"><div class="stack"><p class="soft">Each store of each device numbers its entries and names the one before; the server counts them.</p>
    <${Problem} words=${problem} />
    ${found && (found.length ? html`<ul class="plain list">${found.map((row) => html`<${Device} key=${row.device + row.incarnation} row=${row} zone=${zone} />`)}</ul>` : html`<${Empty} title="No device has sent anything yet">They appear with their first entry.<//>`)}
    <p><a href="/review/people">People</a> · <a href="/review/held">Held entries</a></p></div><//>`;
}
