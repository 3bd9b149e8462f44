// What each kind of entry is called on a screen.

const KINDS = new Map(Object.entries({
  "sample.taken": "Sample taken", "custody.handed_over": "Bottles handed over", "bottle.received": "Bottle received",
  "run.planned": "Run planned", "gate.confirmed": "Gate confirmed", "heating.started": "Heating started",
  "heating.ended": "Heating ended", "tube.read": "Tube read", "tube.excluded": "Tube excluded",
  "readings.finished": "Readings finished", "run.closed": "Run closed", "result.reviewed": "Result reviewed",
  "entry.settled": "Entry settled", "discharger.registered": "Discharger registered", "point.registered": "Point registered",
  "limit.set": "Limit set", "recipe.adopted": "Recipe adopted", "lot.made": "Lot made", "instrument.added": "Instrument added",
  "container.opened": "Container opened", "calibration.made": "Calibration made", "curve.checked": "Curve checked", "container.moved": "Container moved", "waste.added": "Waste added", "instrument.checked": "Instrument checked", "result.recorded": "Result recorded",
  "settings.changed": "Settings changed", "round.planned": "Round planned", "round.changed": "Round changed", "visit.begun": "Visit begun",
  "visit.ended": "Visit ended", "gas.tested": "Gas tested", "gas.confirmed": "Confirmed after a gas alarm", "flow.measured": "Flow measured",
  "sampler.set": "Sampler set", "sample.split": "Sample split", "meter.checked": "Meter checked",
  "bottle.measured": "Measured beside the COD", "study.planned": "Study planned",
  "study.result": "Result of a study", "study.finished": "Study finished", "baseline.frozen": "Baseline frozen",
}));

/** The version of a kind's body as this build makes it, where it is no longer the first. */
const VERSIONS = { "run.planned": 2, "sample.taken": 2, "custody.handed_over": 2 };

/** The version that this build states of a kind. */
export const versionOf = (kind) => VERSIONS[kind] ?? 1;

/** A kind of entry in words. */
export const kindWords = (kind) => KINDS.get(kind) ?? kind;
