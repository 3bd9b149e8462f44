// A head at a weir or flume turned into a flow, or into the reason why not. The ratings come from the server's words,
// so that both sides have one table; tests hold both to the same vectors.

import { plain } from "./format.js";
import { valueOf, read } from "./measured.js";
import { units } from "./units.js";

/** The rating of a device that a form names, or null while its size is missing. */
export function deviceOf({ type, size, crest, crest_height }, ratings, table = units()) {
  if (type === "v-notch 90") return ratings.v_notch_90;
  if (type === "parshall") return ratings.parshall[size] ?? null;
  const crest_ft = valueOf(crest, "ft", table);
  if (!crest_ft) return null;
  const contracted = type === "rectangular contracted";
  const height = valueOf(crest_height, "ft", table);
  const high_ft = Math.min(crest_ft / 3, contracted || !height ? Infinity : 0.4 * height);
  return { ...ratings.rectangular, crest_ft, high_ft, contraction: contracted ? ratings.rectangular.contraction : 0 };
}

const cfs = (device, h) => device.coefficient * (device.crest_ft ? device.crest_ft - device.contraction * h : 1) * h ** device.exponent;

const rated = (device, h) => h >= device.low_ft && h <= device.high_ft;

function byHead(body, ratings, table) {
  const device = deviceOf(body.device, ratings, table);
  const head = valueOf(body.head, "ft", table);
  if (!device || head === null) return null;
  const nothing = { l_s: null, error_percent: null, volume_l: null };
  if (!rated(device, Number(head.toFixed(9)))) {
    return { ...nothing, status: "out of range", words: `Outside the rating of ${plain(device.low_ft, 2)} to ${plain(device.high_ft, 2)} ft: no flow can be given.` };
  }
  const tail = valueOf(body.tail, "ft", table);
  if (device.submergence && tail !== null && tail / head > device.submergence) {
    return { ...nothing, status: "submerged", words: `The tail water stands at ${Math.round((100 * tail) / head)} % of the head: the flume is submerged and no flow can be given.` };
  }
  const flow = cfs(device, head);
  const slip = valueOf(body.head_error, "ft", table);
  const known = slip && rated(device, head - slip) && rated(device, head + slip);
  const words = device.submergence && tail === null ? "Free flow is assumed: the tail water was not read." : "";
  return {
    status: "ok", l_s: (flow * table.cfs.factor), words, volume_l: null,
    error_percent: known ? [-slip, slip].map((d) => 100 * (cfs(device, head + d) / flow - 1)) : null,
  };
}

function byBucket(body, table) {
  const volume = valueOf(body.volume, "L", table);
  const seconds = body.seconds ? read(body.seconds).value : null;
  return volume && seconds ? { status: "ok", l_s: volume / seconds, words: "", error_percent: null, volume_l: volume } : null;
}

function byTotalizer({ register_start: start, register_end: end, count }, table) {
  const litres = valueOf(count, "L", table);
  if (!start || !end || start.length !== end.length || !litres) return null;
  const size = 10 ** end.length;
  const counts = (Number(end) - Number(start) + size) % size;
  const words = Number(end) < Number(start) ? "The register went through zero once." : "";
  return { status: "ok", l_s: null, words, error_percent: null, volume_l: counts * litres };
}

/** What a reading of the flow amounts to; null while something is missing. */
export function flowOf(body, ratings, table = units()) {
  const by = { bucket: byBucket, totalizer: byTotalizer }[body.device.type];
  const found = by ? by(body, table) : byHead(body, ratings, table);
  const meter = valueOf(body.meter, "L/s", table);
  return found && { ...found, meter_percent: meter !== null && found.l_s ? 100 * (meter / found.l_s - 1) : null };
}
