// The small sums of a stop, each the same as the server's: gas alarms, meter checks, pacing, shares by flow.
// tests/client/test_field_sums.py holds both sides to the same cases.

import { plain } from "./format.js";
import { read } from "./measured.js";

/** The gases of a test: [name in the entry, label, unit]. */
export const GASES = [["oxygen_percent", "Oxygen", "%"], ["lel_percent", "Combustible gas, of the lower explosive limit", "%"], ["h2s_ppm", "Hydrogen sulfide", "ppm"], ["co_ppm", "Carbon monoxide", "ppm"]];
/** What in a reading blocks, in words; the set points are the server's. */
export function alarmsOf(reading, points) {
  const value = (name) => (reading[name] === null ? null : read(reading[name]).value);
  const found = GASES.filter(([name]) => value(name) === null).map(([, label]) => `${label.toLowerCase()} was not measured`);
  const oxygen = value("oxygen_percent");
  if (oxygen !== null && oxygen < points.oxygen_low_percent) found.push(`oxygen ${plain(oxygen, 1)} % is below ${plain(points.oxygen_low_percent, 1)} %`);
  if (oxygen > points.oxygen_high_percent) found.push(`oxygen ${plain(oxygen, 1)} % is above ${plain(points.oxygen_high_percent, 1)} %`);
  for (const [name, label, unit] of GASES.slice(1)) {
    if (value(name) !== null && value(name) >= points[name]) found.push(`${label.toLowerCase()} ${plain(value(name))} ${unit} is at or above ${plain(points[name])} ${unit}`);
  }
  return found;
}

/** Whether typed references are met, by the server's acceptances: {off, limit, ok} a row; null where a number is missing. */
export function judged(quantity, points, acceptances) {
  const rule = acceptances[quantity];
  return points.map(({ reference, read: shown }) => {
    const [wanted, found] = [read(reference).value, read(shown).value];
    if (!rule || wanted === undefined || found === undefined) return null;
    const off = rule.relative ? 100 * Math.abs(found / wanted - 1) : Math.abs(found - wanted);
    return { off, limit: rule.limit, ok: off <= rule.limit + 1e-9, unit: rule.relative ? "%" : "" };
  });
}

/** The volumes of a composite made by hand: each grab by its flow. */
export function sharesOf(total, flows) {
  const sum = flows.reduce((all_, flow) => all_ + flow, 0);
  return sum > 0 ? flows.map((flow) => (total * flow) / sum) : [];
}

/** Aliquots that fit in what is expected, their litres, and whether the bottle holds them; null where it is not known. */
export function aliquotsOf(expected, every, aliquot_ml, bottle_l) {
  const aliquots = Math.floor(expected / every + 1e-9);
  const collected = aliquot_ml === null ? null : (aliquots * aliquot_ml) / 1000;
  return { aliquots, collected, fits: collected === null || bottle_l === null ? null : collected < bottle_l };
}
