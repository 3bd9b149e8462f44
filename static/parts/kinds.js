// What each kind of entry is called on a screen.

const KINDS = new Map(Object.entries({
  "sample.taken": "Sample taken", "custody.handed_over": "Bottles handed over", "bottle.received": "Bottle received",
  "run.planned": "Run planned", "gate.confirmed": "Gate confirmed", "heating.started": "Heating started",
  "heating.ended": "Heating ended", "tube.read": "Tube read", "tube.excluded": "Tube excluded",
  "readings.finished": "Readings finished", "run.closed": "Run closed", "result.reviewed": "Result reviewed",
  "entry.settled": "Entry settled", "discharger.registered": "Discharger registered", "point.registered": "Point registered",
  "limit.set": "Limit set", "recipe.adopted": "Recipe adopted", "lot.made": "Lot made", "instrument.added": "Instrument added",
  "container.opened": "Container opened", "calibration.made": "Calibration made", "result.recorded": "Result recorded",
  "settings.changed": "Settings changed",
}));

/** The version of a kind's body as this build makes it, where it is no longer the first. */
const VERSIONS = {};

/** The version that this build states of a kind. */
export const versionOf = (kind) => VERSIONS[kind] ?? 1;

/** A kind of entry in words. */
export const kindWords = (kind) => KINDS.get(kind) ?? kind;
