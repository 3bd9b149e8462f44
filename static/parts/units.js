// The one table of units, the same file as the server's; it is part of the shell and so always at hand.

let table = {};

/** Read the table once, at the start. */
export async function loadUnits() {
  table = await (await fetch("/static/units.json")).json();
}

export const units = () => table;

/** How a unit is written for people. */
export const shown = (unit) => table[unit]?.shown ?? unit;
