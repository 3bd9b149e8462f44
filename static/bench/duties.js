// What a detection limit asks for: calculated again in time, spikes every quarter on each instrument (40 CFR 136 App. B).

import { all, one } from "../parts/view.js";

const SPIKES = 2;

/** The last day of a day's calendar quarter, as 2031-06-30. */
export function quarterEnd(day) {
  const [year, month] = day.split("-").map(Number);
  const last = Math.ceil(month / 3) * 3;
  return `${year}-${String(last).padStart(2, "0")}-${last === 6 || last === 9 ? 30 : 31}`;
}

/** What is due for a study's limit as seen on a day, the earliest first: {what, due}. */
export function dutiesOf(study, today, nameOf = (id) => one("instrument", id)?.name ?? id) {
  const limit = study.limits.at(-1);
  if (!limit) return [];
  const end = quarterEnd(today);
  const done = (id) => study.rows.filter((row) => row.tube === "spike" && row.instrument === id && !row.left_out && row.on <= today && quarterEnd(row.on) === end).length;
  const spikes = study.instruments.filter((id) => done(id) < SPIKES).map((id) => ({ what: `${nameOf(id)}: spikes still missing in this quarter: ${SPIKES - done(id)}`, due: end }));
  return [{ what: "calculate the detection limit again", due: limit.again_by }, ...spikes].sort((a, b) => (a.due < b.due ? -1 : a.due > b.due ? 1 : 0));
}

/** Everything that is due, by day: only the newest limit of a recipe and its instruments asks for more. */
export function dueList(today) {
  const studies = all("study").filter((study) => study.limits.length);
  const newer = (one_, other) => other !== one_ && other.recipe === one_.recipe && one_.instruments.every((id) => other.instruments.includes(id)) && other.limits.at(-1).computed_on > one_.limits.at(-1).computed_on;
  return studies.filter((study) => !studies.some((other) => newer(study, other)))
    .flatMap((study) => dutiesOf(study, today).map((duty) => ({ ...duty, study })))
    .sort((a, b) => (a.due < b.due ? -1 : 1));
}
