// This device's own entries laid over the server's records, so that what was stated offline is seen at once.
// Only what a screen shows is made here; once an entry is in the records, the server's word stands.

import { read, valueOf } from "./measured.js";
import { units } from "./units.js";

const number = (text) => read(text).value ?? null;

/** A writable view of the records: a type's map is copied when it is first changed. */
class Layer {
  constructor(base, table) {
    this.maps = new Map(base);
    this.copied = new Set();
    this.units = table;
  }

  /** A measured value as a number in a unit, or null. */
  value(measured, unit) {
    return valueOf(measured ?? null, unit, this.units);
  }

  /** The ids of a parent's records of a type. */
  under(type, parent) {
    return [...(this.maps.get(type)?.values() ?? [])].filter((record) => record.parent === parent).map((record) => record.id);
  }

  get(type, id) {
    return this.maps.get(type)?.get(id)?.body ?? null;
  }

  put(type, id, body, { parent = "", at = "" } = {}) {
    if (!this.copied.has(type)) {
      this.maps.set(type, new Map(this.maps.get(type)));
      this.copied.add(type);
    }
    const before = this.maps.get(type).get(id);
    const where = before ? { parent: before.parent, at: before.at } : { parent, at };
    this.maps.get(type).set(id, { type, id, position: null, local: true, ...where, body });
  }

  update(type, id, change) {
    const body = this.get(type, id);
    if (body) this.put(type, id, { ...body, ...change(structuredClone(body)) });
  }

  name(person) {
    return this.get("person", person)?.name ?? "";
  }
}

const EMPTY_BOTTLE = {
  sample: null, point: null, holder: null, received: null, runs: [], results: [], certificate: null, state: "unknown",
};

function stateOf(bottle) {
  if (bottle.certificate) return "certified";
  if (bottle.results.length) return "result";
  if (bottle.runs.length) return "in digestion";
  if (bottle.received) return bottle.received.decision === "rejected" ? "rejected" : "received";
  return bottle.holder ? "handed over" : "taken";
}

function putBottle(layer, code, change) {
  const bottle = { ...EMPTY_BOTTLE, code, ...layer.get("bottle", code), ...change };
  bottle.state = stateOf(bottle);
  layer.put("bottle", code, bottle, { parent: bottle.sample ?? "" });
  const { holder, received, results, certificate, state } = bottle;
  if (bottle.sample) layer.update("sample", bottle.sample, () => ({ holder, received, results, certificate, state }));
}

const RECIPE_NUMBERS = [
  "sample_ml", "digestion_solution_ml", "acid_reagent_ml", "dichromate_g_per_l", "mercury_sulfate_g_per_l",
  "silver_sulfate_g_per_l", "wavelength_nm", "working_low", "working_high", "temperature_c", "minutes",
];

const newTube = (tube) => ({
  bottle: null, expected: null, source: null, dilution: null, spike: null, ...tube, absorbance: null, colour: null, remaining_oxidant: null,
  excluded: null, in_tube: null, share: null, readings: [],
});

function tubes(run, position, change) {
  return run.tubes.map((tube) => (tube.position === position ? { ...tube, ...change(tube) } : tube));
}

const HOLD_DAYS = 28;

/** What each kind does: (layer, entry, body). */
const KINDS = new Map(Object.entries({
  "discharger.registered": (layer, { about }, body) => {
    layer.put("discharger", about, body);
    const names = { discharger_name: body.name, sector: body.sector };
    layer.under("point", about).forEach((id) => layer.update("point", id, () => names));
  },
  "point.registered": (layer, { about }, body) => {
    const discharger = layer.get("discharger", body.discharger);
    const limits = layer.get("point", about)?.limits ?? [];
    const names = { discharger_name: discharger?.name ?? "", sector: discharger?.sector ?? null };
    layer.put("point", about, { ...body, ...names, limits }, { parent: body.discharger });
  },
  "limit.set": (layer, { about, by }, body) => layer.update("point", about, (point) => {
    const { basis, from, source } = body;
    const kept = point.limits.filter((limit) => limit.basis !== basis || limit.from !== from);
    const made = { basis, value: layer.value(body.value, "mg/L"), unit: "mg/L", from, source, set_by: layer.name(by) };
    const order = (limit) => `${limit.basis} ${limit.from}`;
    return { limits: [...kept, made].sort((one, other) => (order(one) < order(other) ? -1 : 1)) };
  }),
  "recipe.adopted": (layer, { about }, body) => {
    const numbers = Object.fromEntries(RECIPE_NUMBERS.map((name) => [name, number(body[name])]));
    const acid = body.digestion_acid_ml_per_l ?? null;
    layer.put("recipe", about, { ...body, ...numbers, digestion_acid_ml_per_l: acid === null ? null : number(acid), tube: body.tube ?? "", derived: null });
  },
  "lot.made": (layer, { about }, body) => layer.put("lot", about, { origin: "made", standardised_on: null, standardised: "", ...body }, { parent: body.recipe, at: body.made_on }),
  "instrument.added": (layer, { about }, body) => layer.put("instrument", about, { positions: null, ...body, checks: [] }),
  "instrument.checked": (layer, { about, by }, body) => layer.update("instrument", about, (row) => ({ checks: [...row.checks, { ...body, by: layer.name(by) }] })),
  "container.moved": (layer, { about, at, by }, body) => layer.update("container", about, (row) => ({
    state: body.to, moves: [...row.moves, { ...body, recorded_by: layer.name(by), at }],
  })),
  "container.opened": (layer, { about, at }, body) => layer.put("container", about, {
    name: body.name, capacity_ml: number(body.capacity_ml), filled_ml: 0, mercury_mg: 0, chromium_mg: 0, silver_mg: 0,
    acid_reagent_ml: 0, sulfuric_acid_g: 0, mass_g: 0, tubes: 0, runs: [], opened_at: at, state: "in use", moves: [], clock: null,
  }),
  "calibration.made": (layer, { about, at, by }, body) => layer.put("calibration", about, {
    weights: "equal", ...body, wavelength_nm: number(body.wavelength_nm), made_at: at, made_by: layer.name(by), fitted: null,
    tube: layer.get("recipe", body.recipe)?.tube ?? "", checks: [], due: {},
  }, { parent: body.recipe, at }),
  "curve.checked": (layer, { id, about, at, by }, body) => layer.update("calibration", about, (curve) => ({
    checks: [...curve.checks, { ...body, id, at, by: layer.name(by), judged: null }],
  })),
  "sample.taken": (layer, { about, at, by }, body) => {
    const until = new Date(new Date(body.collected_at).getTime() + HOLD_DAYS * 86400000).toISOString();
    const stated = { ...body, by, by_name: layer.name(by), recorded_at: at, hold_until: until };
    const state = { holder: null, received: null, results: [], certificate: null, state: "taken", split: null, doubts: [] };
    layer.put("sample", about, { ...stated, ...state }, { parent: body.point, at: body.collected_at });
    putBottle(layer, body.bottle, { sample: about, point: body.point });
    if (body.visit) layer.update("visit", body.visit, (visit) => ({ samples: [...visit.samples, about] }));
    layer.update("sampler", about, () => ({ state: "picked up" }));
  },
  "custody.handed_over": (layer, _entry, body) => body.bottles.forEach((code) => putBottle(layer, code, { holder: body.to })),
  "bottle.received": (layer, { at, by }, body) => putBottle(layer, body.bottle, {
    received: { ...body, at, by, by_name: layer.name(by) }, holder: "laboratory",
  }),
  "round.planned": (layer, { about, at, by }, body) => layer.put("round", about, {
    ...body, planned_by: layer.name(by), planned_at: at, changed: null, visits: {},
  }, { at: body.day }),
  "round.changed": (layer, { about, at, by }, body) => layer.update("round", about, () => ({ ...body, changed: { by: layer.name(by), at } })),
  "visit.begun": (layer, { about, by }, body) => {
    const nothing = { gas: [], gas_confirmed: null, flows: [], samples: [], sampler: null, outcome: null, ended: null };
    layer.put("visit", about, { ...body, by, by_name: layer.name(by), ...nothing }, { parent: body.point, at: body.arrived_at });
    if (body.round && body.stop) layer.update("round", body.round, (round) => ({ visits: { ...round.visits, [body.stop]: about } }));
  },
  "gas.tested": (layer, { about, by }, body) => layer.update("visit", about, (visit) => ({
    gas: [...visit.gas, { ...body, by: layer.name(by) }], gas_confirmed: null,
  })),
  "gas.confirmed": (layer, { about, at, by }, body) => layer.update("visit", about, () => ({ gas_confirmed: { ...body, by: layer.name(by), at } })),
  "flow.measured": (layer, { about, by }, body) => layer.update("visit", about, (visit) => ({ flows: [...visit.flows, { ...body, by: layer.name(by) }] })),
  "visit.ended": (layer, { about, at, by }, body) => layer.update("visit", about, () => ({
    outcome: body.outcome, ended: { ...body, by: layer.name(by), at },
  })),
  "sampler.set": (layer, { about, by }, body) => {
    layer.put("sampler", about, { ...body, by, by_name: layer.name(by), state: "running" }, { parent: body.point, at: body.started_at });
    if (body.visit) layer.update("visit", body.visit, () => ({ sampler: about }));
  },
  "sample.split": (layer, { about, at, by }, body) => layer.update("sample", about, () => ({ split: { ...body, by: layer.name(by), at } })),
  "meter.checked": (layer, { about, by }, body) => {
    const meter = layer.get("meter", about) ?? { checks: [], samples: [] };
    layer.put("meter", about, { ...meter, checks: [...meter.checks, { ...body, by: layer.name(by) }] });
  },
  "run.planned": (layer, { about, at, by }, body) => {
    layer.put("run", about, {
      ...body, state: "planned", tubes: [...body.tubes].sort((a, b) => a.position - b.position).map(newTube), gates: {},
      heating: null, answer: null, input: null, questions: [], problem: null, waste: null, bracketing: null, checks: [], experience: null,
      fired: [], closed: null, planned_by: layer.name(by), planned_at: at,
    }, { at });
    for (const code of new Set(body.tubes.map((tube) => tube.bottle).filter(Boolean))) {
      const runs = layer.get("bottle", code)?.runs ?? [];
      putBottle(layer, code, { runs: [...runs, about] });
    }
  },
  "gate.confirmed": (layer, { about, at, by }, body) => layer.update("run", about, (run) => ({
    gates: { ...run.gates, [body.gate]: { by: layer.name(by), at, value: layer.value(body.value, "Cel"), note: body.note ?? "" } },
  })),
  "heating.started": (layer, { about }, body) => layer.update("run", about, () => ({
    state: "heating", heating: { ...body, ended_at: null, complete: null, reason: "" },
  })),
  "heating.ended": (layer, { about }, body) => layer.update("run", about, (run) => ({
    state: body.complete ? "cooling" : "failed", heating: { ...run.heating, ...body },
  })),
  "tube.read": (layer, { about, at, by }, body) => layer.update("run", about, (run) => ({
    state: run.state === "cooling" ? "reading" : run.state,
    tubes: tubes(run, body.position, (tube) => {
      const { absorbance, colour, remaining_oxidant = null } = body;
      const reading = { absorbance, colour, remaining_oxidant, reason: body.reason ?? "", by: layer.name(by), at };
      return { absorbance, colour, remaining_oxidant, readings: [...tube.readings, reading] };
    }),
  })),
  "tube.excluded": (layer, { about, at, by }, body) => layer.update("run", about, (run) => ({
    tubes: tubes(run, body.position, () => ({ excluded: { cause: body.cause, note: body.note, by: layer.name(by), at } })),
  })),
  "readings.finished": (layer, { about }) => layer.update("run", about, () => ({ asked: true })),
  "run.closed": (layer, { about, at, by }, body) => layer.update("run", about, (run) => ({
    state: run.state === "failed" ? "failed" : "closed", closed: { by: layer.name(by), at, decisions: body.decisions },
  })),
  "result.reviewed": (layer, { about, at, by }, body) => layer.update("result", about, () => ({
    review: { ...body, by: layer.name(by), at },
  })),
  "bottle.measured": (layer, { about, at, by }, body) => {
    const said = { how: body.how, note: body.note, by: layer.name(by), at };
    const found = Object.entries(body.species).map(([name, given]) => [name, { ...said, given }]);
    layer.put("interferents", about, { ...layer.get("interferents", about), ...Object.fromEntries(found) }, { parent: about, at });
  },
  "study.planned": (layer, { about, at, by }, body) => layer.put("study", about, {
    ...body, estimate_mg_l: layer.value(body.estimate, "mg/L"), level_mg_l: layer.value(body.level, "mg/L"), plan: null, rows: [],
    state: "open", finished: null, limits: [], gaps: null, planned_by: layer.name(by), planned_at: at,
  }, { parent: body.recipe, at }),
  "study.result": (layer, { about, at, by }, body) => layer.update("study", about, (study) => {
    const old = study.rows.find((row) => row.row === body.row);
    const number_ = body.result && read(body.result.text).sign === "=";
    const stood = old && { result: old.result, mg_l: old.mg_l, left_out: old.left_out, by: old.by, at: old.at };
    const row = {
      ...body, mg_l: number_ ? layer.value(body.result, "mg/L") : null, waits: body.run !== null, by: layer.name(by), at,
      before: old ? [...old.before, stood] : [],
    };
    const key = (one) => [one.on, one.batch, one.tube, one.row].join("\u0001");
    return { gaps: null, rows: [...study.rows.filter((one) => one !== old), row].sort((a, b) => (key(a) < key(b) ? -1 : 1)) };
  }),
  "study.finished": (layer, { about, at, by }, body) => layer.update("study", about, () => ({
    finished: { ...body, by: layer.name(by), at },
  })),
  "baseline.frozen": (layer, { about, at, by }, body) => layer.update("chart", about, () => ({ asked: { ...body, by: layer.name(by), at } })),
  "entry.settled": (layer, { about }, body) => layer.update("held", about, () => ({
    state: body.decision === "admit" ? "admitted" : "set aside",
  })),
}));

/**
 * Lay entries over records.
 * @param {Map<string, Map<string, object>>} base the server's records by type and id; left as they are
 * @param {{text: string}[]} rows this device's entries, oldest first
 * @param {object} table the units
 */
export function overlay(base, rows, table = units()) {
  if (!rows.length) return base;
  const layer = new Layer(base, table);
  for (const row of rows) {
    const entry = JSON.parse(row.text);
    KINDS.get(entry.kind)?.(layer, entry, entry.body);
  }
  return layer.maps;
}
