"""One bottle's way as a tablet states it: set-up, sample, hand-over, receipt, run to the last reading."""

from __future__ import annotations

import json
from collections.abc import Iterator
from itertools import count
from typing import Any

from app.journal.entry import digest
from app.journal.kinds import table
from app.safety.gates import GATES

CODE = "2YGD99"
DEVICE = "0193a000-0000-7000-8000-0000000000d1"
INCARNATION = "0193a000-0000-7000-8000-0000000000e1"
STANDARDS = {"0": "0.000", "100": "0.040", "300": "0.121", "500": "0.201", "700": "0.279", "900": "0.361"}
RECIPE = {
    "name": "High range",
    "source": "test",
    "sample_ml": "2,5",
    "digestion_solution_ml": "1.5",
    "acid_reagent_ml": "3.5",
    "dichromate_g_per_l": "10.216",
    "mercury_sulfate_g_per_l": "33.3",
    "silver_sulfate_g_per_l": "10.12",
    "wavelength_nm": "600",
    "working_low": "50",
    "working_high": "900",
    "temperature_c": "150",
    "minutes": "120",
    "order": ["digestion solution", "acid reagent", "sample"],
}
SIGNED = {"name": "L. Marsden", "strokes": "M1 1L2 2"}
PERIOD: dict[str, Any] = {
    "started_at": "2026-11-01T10:15:00-06:00",
    "paced_by": "time",
    "planned": 96,
    "taken": 95,
    "missed": "",
    "volume": {"text": "9", "unit": "L"},
    "temperature": None,
    "seal": "intact",
    "portions": [],
}
STEPS = [{"pipette_ml": 20.0, "flask_ml": 100.0}]
DILUTION = {"factor": 5.0, "steps": STEPS, "relative_u": 0.002, "reason": ""}
TUBES = [
    {"position": 3, "role": "sample", "bottle": CODE, "dilution": DILUTION},
    {"position": 1, "role": "blank"},
    {"position": 2, "role": "verification", "expected": "500"},
]


def _setting_up() -> Iterator[tuple[str, str, dict[str, Any]]]:
    yield "discharger.registered", "d1", {"name": "Hollin Vale Creamery", "sector": "dairy", "address": ""}
    point = {
        "name": "Outlet B",
        "access": "",
        "hazards": ["traffic"],
        "sample_kind": "grab",
        "flow_device": None,
    }
    yield "point.registered", "p1", {"discharger": "d1", **point}
    limit = {"basis": "daily_maximum", "from": "2026-01-01", "source": "Permit 12"}
    yield "limit.set", "p1", {**limit, "value": {"text": "1.4", "unit": "g/L"}}
    yield "limit.set", "p1", {**limit, "value": {"text": "1500", "unit": "mg/L"}}
    yield "recipe.adopted", "r1", RECIPE
    yield "lot.made", "l1", {"recipe": "r1", "name": "A", "made_on": "2026-01-02", "expires_on": "2027-01-02"}
    yield "instrument.added", "i1", {"name": "Photometer", "what": "photometer"}
    yield "instrument.added", "i2", {"name": "Block", "what": "block", "positions": 25}
    yield "container.opened", "c1", {"name": "12", "capacity_ml": "5000"}
    move = {"to": "over the limit", "on": "2026-11-02", "by": "", "manifest": "", "note": ""}
    yield "container.opened", "c2", {"name": "13", "capacity_ml": "5000"}
    yield "container.moved", "c2", move
    probe = {"what": "block temperature", "on": "2026-11-02", "wanted": "150", "found": ["150,4"]}
    yield "instrument.checked", "i2", {**probe, "water_c": None, "next_on": "2027-02-01", "note": ""}
    made = {"recipe": "r1", "lot": "l1", "instrument": "i1", "wavelength_nm": "600", "model": "linear"}
    standards = [{"cod": cod, "absorbance": [read]} for cod, read in STANDARDS.items()]
    yield "calibration.made", "k1", {**made, "valid_until": "2027-01-01", "standards": standards}
    check = {"what": "second source", "source": "ampoule K-3", "expected": "500", "note": ""}
    yield "curve.checked", "k1", {**check, "absorbance": ["0,19"]}


def _visiting() -> Iterator[tuple[str, str, dict[str, Any]]]:
    yield "instrument.added", "i3", {"name": "Field meter", "what": "meter"}
    check = {"what": "calibration", "quantity": "pH", "at": "2026-11-02T07:00:00-06:00", "note": ""}
    points = [{"reference": "4.01", "read": "4,0", "lot": ""}, {"reference": "7", "read": "7", "lot": ""}]
    yield "meter.checked", "i3", {**check, "points": points, "slope_percent": "98", "passed": None}
    stop = {"id": "stop-1", "point": "p1", "sample_kind": "composite", "bottles": 1, "note": ""}
    other = stop | {"id": "stop-2"}
    yield "round.planned", "o1", {"name": "N", "day": "2026-11-02", "inspector": None, "stops": [stop]}
    yield "round.changed", "o1", {"stops": [other, stop]}
    begun = {"round": "o1", "stop": "stop-1", "point": "p1", "arrived_at": "2026-11-02T09:00:00-06:00"}
    there = {"introduced": True, "present": [], "activity": "idle", "production": "", "weather": "dry"}
    yield "visit.begun", "v1", begun | there
    gas = {"at": "2026-11-02T09:01:00-06:00", "meter": "", "oxygen_percent": "20,9", "lel_percent": "0"}
    yield "gas.tested", "v1", gas | {"h2s_ppm": "14", "co_ppm": "0"}
    yield "gas.tested", "v1", gas | {"h2s_ppm": "0", "co_ppm": "0"}
    yield "gas.confirmed", "v1", {"note": "aired"}
    flow: dict[str, Any] = {"at": "2026-11-02T09:10:00-06:00", "note": ""}
    flow |= dict.fromkeys(("head_error", "tail", "volume", "seconds", "register_start", "register_end"))
    flow |= {"device": {"type": "v-notch 90", "size": None, "crest": None, "crest_height": None}}
    head = {"text": "0,5", "unit": "ft"}
    yield "flow.measured", "v1", flow | {"head": head, "count": None, "meter": None}
    sampler = {"point": "p1", "visit": "v1", "started_at": PERIOD["started_at"], "paced_by": "time"}
    sampler |= dict.fromkeys(("every_volume", "expected_volume", "aliquot", "bottle_volume", "temperature"))
    sampler |= dict.fromkeys(("intake", "tubing", "seal", "lock"), "")
    yield "sampler.set", "s1", sampler | {"every_minutes": "15", "planned": 96, "cooling": "ice"}


def _sampling() -> Iterator[tuple[str, str, dict[str, Any]]]:
    sample = {
        "point": "p1",
        "visit": "v1",
        "purpose": "sample",
        "of": None,
        "bottle": CODE,
        "sample_kind": "composite",
        "composite": PERIOD,
        "meter": "i3",
        "collected_at": "2026-11-02T10:15:00-06:00",
        "field": {"conductivity_us_cm": {"text": "1,9", "unit": "mS/cm"}},
        "activity": "production",
        "appearance": "milky",
        "preservation": {"acid": True, "ph": {"text": "< 2", "unit": "pH"}, "cooled": True},
        "plan": None,
        "note": "",
    }
    yield "sample.taken", "s1", sample
    split = {"to": "L. Marsden", "container": "", "receipt": "refused", "signature": None, "note": ""}
    yield "sample.split", "s1", split
    left = {"left_at": "2026-11-02T11:00:00-06:00", "reason": "", "told": "", "remarks": "none"}
    yield "visit.ended", "v1", {"outcome": "sampled", **left, "signature": SIGNED, "declined": False}
    over = {"bottles": [CODE], "to": "Courier", "to_kind": "person", "seal": "", "given": SIGNED}
    yield "custody.handed_over", "h1", over | {"taken": None, "temperature": None, "note": ""}
    receipt = {
        "bottle": CODE,
        "temperature": {"text": "4", "unit": "Cel"},
        "ph": None,
        "seal": "intact",
        "note": "",
    }
    condition = {"container": "sound", "label_agrees": True, "decision": "accepted", "reasons": []}
    yield "bottle.received", CODE, receipt | condition


def _running() -> Iterator[tuple[str, str, dict[str, Any]]]:
    plan = {
        "name": "Run 1",
        "recipe": "r1",
        "lot": "l1",
        "instrument": "i1",
        "block": "i2",
        "container": "c1",
    }
    without = [{"role": role, "reason": "a trial"} for role in ("control", "duplicate", "spike")]
    yield "run.planned", "u1", {**plan, "calibration": "k1", "tubes": TUBES, "without": without}
    for gate in GATES:
        yield "gate.confirmed", "u1", {"gate": gate.id, "value": {"text": "150", "unit": "Cel"}}
    started = {"started_at": "2026-11-03T09:00:00-06:00", "minutes": 120}
    yield "heating.started", "u1", {**started, "temperature": {"text": "150", "unit": "Cel"}}
    yield "heating.ended", "u1", {"ended_at": "2026-11-03T11:00:00-06:00", "complete": True, "reason": ""}
    read = {"absorbance": {"text": "0,002", "unit": "AU"}, "colour": "orange"}
    yield "tube.read", "u1", {"position": 1, **read}
    yield "tube.read", "u1", {"position": 1, **read, "reason": "smear on the tube"}
    yield "tube.excluded", "u1", {"position": 2, "cause": "cap leaked", "note": ""}


def _measuring() -> Iterator[tuple[str, str, dict[str, Any]]]:
    beside = {"bottle": CODE, "how": "strip", "note": "", "species": {"chloride": mg("< 500")}}
    yield "bottle.measured", CODE, beside
    yield "bottle.measured", CODE, beside | {"species": {"nitrite": mg("3,2")}, "how": "photometer"}
    plan = {"name": "Study", "recipe": "r1", "instruments": ["i1"], "estimate": mg("4"), "note": ""}
    days = ["2026-10-01", "2026-10-02", "2026-10-08"]
    yield "study.planned", "y1", {**plan, "level": mg("0,01", "g/L"), "days": days}
    row = {"tube": "spike", "on": days[1], "batch": "B", "instrument": "i1", "run": None, "position": None}
    row |= {"left_out": "", "reason": ""}
    yield "study.result", "y1", {**row, "row": "w2", "result": mg("92")}
    yield "study.result", "y1", {**row, "row": "w1", "result": None, "tube": "blank", "on": days[0]}
    yield "study.result", "y1", {**row, "row": "w2", "result": mg("9.2"), "reason": "point forgotten"}


def mg(text: str, unit: str = "mg/L") -> dict[str, str]:
    """Return a concentration as it was typed."""
    return {"text": text, "unit": unit}


def statements() -> list[tuple[str, str, dict[str, Any]]]:
    """Return (kind, about, body) of everything, in order."""
    return [*_setting_up(), *_visiting(), *_sampling(), *_running(), *_measuring()]


def texts(person: str) -> list[str]:
    """Return the entries' texts as one device makes them, chained and numbered."""
    made: list[str] = []
    previous = None
    numbers = count(1)
    for kind, about, body in statements():
        n = next(numbers)
        entry = {
            "id": f"0193a000-0000-7000-8000-{n:012d}",
            "device": DEVICE,
            "incarnation": INCARNATION,
            "n": n,
            "prev": previous,
            "kind": kind,
            "version": table()[kind].version,
            "about": about,
            "at": f"2026-11-03T12:00:{n:02d}-06:00",
            "zone": "America/Chicago",
            "skew_ms": 0,
            "by": person,
            "base": 0,
            "body": body,
            "blobs": [],
        }
        made.append(json.dumps(entry, ensure_ascii=False))
        previous = digest(made[-1].encode())
    return made
