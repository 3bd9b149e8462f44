// What is due at the bench: checks, curves, lots and containers whose day is near or past.

import { html } from "../parts/html.js";
import { day } from "../parts/format.js";
import { all, one, programme, useView } from "../parts/view.js";

const NEAR_DAYS = 14;
const inDays = (days) => day(new Date(Date.now() + days * 86_400_000), programme()?.zone);

function found() {
  const near = inDays(NEAR_DAYS);
  const today = inDays(0);
  const newest = new Map();
  for (const curve of all("calibration")) newest.set(`${curve.recipe} ${curve.instrument}`, curve);
  const rows = [...newest.values()].flatMap((curve) => {
    const name = one("recipe", curve.recipe)?.name ?? "a recipe";
    const check = (curve.checks ?? []).findLast((one_) => one_.judged);
    return [[curve.valid_until, `curve of ${name} ends`, `/bench/curve/${curve.id}`], ...(check && curve.valid_until >= today ? [[check.judged.due_on, `${check.what} of ${name}`, `/bench/curve/${curve.id}`]] : [])];
  });
  rows.push(...all("instrument").flatMap((row) => (row.checks?.at(-1)?.next_on ? [[row.checks.at(-1).next_on, `check of ${row.name}`, `/bench/instrument/${row.id}`]] : [])));
  rows.push(...all("instrument").filter((row) => row.checks?.at(-1)?.ok === false).map((row) => [today, `${row.name} failed its check`, `/bench/instrument/${row.id}`]));
  rows.push(...all("lot").filter((lot) => lot.expires_on >= today).map((lot) => [lot.expires_on, `lot ${lot.name} expires`, "/bench/stores"]));
  rows.push(...all("container").filter((row) => row.clock && row.state !== "picked up").map((row) => [row.clock.due, `${row.name}: ship or move`, "/bench/waste"]));
  return rows.filter(([on]) => on <= near).sort(([a], [b]) => (a < b ? -1 : 1)).map(([on, words, to]) => ({ on, words, to, late: on < today }));
}

/** The list of what is due; nothing when nothing is. */
export function Due() {
  const rows = useView(found);
  if (!rows.length) return null;
  return html`<h2>Due</h2><nav class="list" aria-label="Due">${rows.map((row) => html`<a key=${row.to + row.words} href=${row.to}><span class=${row.late ? "above" : ""}>${row.late ? "▲ over since " : ""}${row.on}</span> ${row.words}</a>`)}</nav>`;
}
