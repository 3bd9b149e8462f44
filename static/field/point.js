// What the Field's screens ask of a point: its name, its limit today, its dangers, its readings.

import { Check, measuredOf } from "../parts/fields.js";
import { html } from "../parts/html.js";

export { limitOf } from "../parts/ask.js";

/** The readings a meter can give at a point: [key, label, units, the body's name]. */
export const READINGS = [
  ["conductivity", "Conductivity", ["uS/cm", "mS/cm"], "conductivity_us_cm"],
  ["turbidity", "Turbidity", ["NTU", "FNU"], "turbidity_ntu"],
  ["ph", "pH", ["pH"], "ph"],
  ["temperature", "Temperature of the water", ["Cel", "degF"], "temperature_c"],
  ["chloride", "Chloride strip", ["mg/L"], "chloride_mg_l"],
];

export const ACTIVITIES = [["production", "Production"], ["cleaning", "Cleaning"], ["idle", "Idle"]];

/** An empty form for a sample; the card and the form share its draft. */
export const BLANK = {
  bottle: "", time: "", conductivity: "", conductivity_unit: "uS/cm", turbidity: "", turbidity_unit: "NTU", ph: "",
  ph_unit: "pH", temperature: "", temperature_unit: "Cel", chloride: "", chloride_unit: "mg/L", activity: null, appearance: "", acid: false, acid_ph: "",
  cooled: false, note: "", factor: null, reason: "", solids: false, purpose: "sample", of: "", meter: null, kind: "", kept_at: "",
  c_start: "", c_planned: "", c_taken: "", c_missed: "", c_volume: "", c_volume_unit: "L", c_temperature: "", c_seal: "intact", c_paced: "hand", portions: [],
};

/** The readings of a form as measured values, by the body's names. */
export function fieldOf(values) {
  const given = READINGS.map(([key, , , name]) => [name, measuredOf(values[key], values[`${key}_unit`])]);
  return Object.fromEntries(given.filter(([, measured]) => measured));
}

/** The key of a point's draft. */
export const draftKey = (point) => `sample:${point}`;

/** The address of a point's card. */
export const cardOf = (id) => `/field/point/${encodeURIComponent(id)}`;

/** A point's whole name, the firm first. */
export const nameOf = (point) => `${point.discharger_name}, ${point.name}`;

/** Whether what was typed into the search is in a point's names. */
export function matches(point, text) {
  const words = text.toLowerCase().split(/\s+/u).filter(Boolean);
  const all = `${point.discharger_name} ${point.name} ${point.sector ?? ""} ${point.access}`.toLowerCase();
  return words.every((word) => all.includes(word));
}

/** A hazard in the server's words, or at least its name. */
export function hazardOf(words, id) {
  return words?.field?.find((one) => one.id === id) ?? { id, name: id.replaceAll("_", " "), caution: "" };
}

/** Whether the water holds solids: the bench then takes 10 mL or more of it, with a wide bore. */
export const Solids = ({ values, set }) => html`<${Check} label="Visible solids: shake well; at least 10 mL a transfer" checked=${values.solids} onChange=${(on) => set("solids", on)} />`;
