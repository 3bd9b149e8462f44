// This tablet's entries as a file: for a tablet that dies, or whose entries are to be discarded. It is made from what is
// in memory, so that it works when the store does not.

import { typed } from "./fields.js";
import { entries } from "./view.js";

/** What the file holds: every entry's own text, in the order of its number, and what stands unsaved in forms. */
export function fileOf(rows, forms) {
  const own = [...rows].sort((a, b) => a.n - b.n);
  return JSON.stringify({ weirbook_tablet: 1, made: new Date().toISOString(), entries: own.map((row) => row.text), unsaved: Object.fromEntries(forms) }, null, 1);
}

/** Save the file; returns its name. */
export function saveFile() {
  const name = `weirbook-tablet-${new Date().toISOString().slice(0, 16).replaceAll(":", "")}.json`;
  const link = document.createElement("a");
  link.href = URL.createObjectURL(new Blob([fileOf(entries(), typed)], { type: "application/json" }));
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 60000);
  return name;
}
