// This device's own entries: where each one is, and what is held and why.

import { html } from "../parts/html.js";
import { dayAndTime } from "../parts/format.js";
import { Empty, Frame, WORDS, exchangeNow } from "../parts/frame.js";
import { entries, placeOf, useView } from "../parts/view.js";
import { kindWords } from "../parts/kinds.js";

function Row({ row }) {
  const body = JSON.parse(row.text).body;
  const subject = body.bottle ?? body.bottles?.join(", ") ?? body.name ?? (body.position ? `position ${body.position}` : "");
  const place = placeOf(row);
  const kind = { tablet: "wait", server: "good", backup: "good", held: "stop", other: "wait" }[place];
  return html`<li class="item"><div class="row spread"><strong>${kindWords(row.kind)} ${subject}</strong>
      <span class="tag ${kind}">${WORDS[place]}</span></div>
    <span class="soft small">${dayAndTime(row.at)}</span>
    ${row.told && html`<p class="above">▲ ${row.told.message}</p>
      <ul>${Object.entries(row.told.fields ?? {}).map(([path, lines]) => html`<li key=${path}>${path}: ${lines.join(" ")}</li>`)}</ul>
      ${row.state === "held" && html`<p>It is kept on the server; a coordinator decides in <a href="/review">Review</a>.</p>`}`}
  </li>`;
}

/** The page of one's own entries. */
export function Waiting() {
  const rows = useView(entries).slice(0, 200);
  return html`<${Frame} title="My entries" about="from this tablet">
    <p class="soft"><strong>On this tablet</strong> survives closing and crashing. <strong>On the server</strong> survives losing the tablet. <strong>In a verified backup</strong> survives losing the server.</p>
    <button type="button" onClick=${exchangeNow}>Exchange now</button>
    ${rows.length ? html`<ul class="plain list">${rows.map((row) => html`<${Row} key=${row.n} row=${row} />`)}</ul>`
      : html`<${Empty} title="Nothing was stated on this tablet yet">What you record in Field or on the Bench appears here.<//>`}
  <//>`;
}
