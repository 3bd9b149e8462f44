"""Rounds, visits, samplers and the meters that were carried.

A visit is opened by its arrival and closed by its outcome; what happens in
between is kept in it. A sample of a visit counts only when the gas readings of
that visit allow it.
"""

from __future__ import annotations

from datetime import datetime
from typing import Any

from app.compliance import meters
from app.errors import InputError
from app.journal import measured
from app.records.change import Body, Change, Refused
from app.records.flows import flow_of
from app.records.handlers import handles
from app.safety.gas import GasReading, gas_gate

GAS_HAZARDS = {"gases", "confined_space"}
KEPT_CHECKS, KEPT_SAMPLES = 60, 300
FIELD_QUANTITIES = {
    "conductivity_us_cm": "conductivity",
    "turbidity_ntu": "turbidity",
    "ph": "pH",
    "temperature_c": "temperature",
}


@handles("round.planned")
def round_planned(change: Change) -> None:
    """A day's stops, in their first order."""
    for stop in change.body["stops"]:
        change.need("point", stop["point"])
    body = {**change.body, "planned_by": change.name_of(change.entry.by), "planned_at": change.entry.at}
    change.put("round", change.entry.about, body | {"changed": None, "visits": {}}, at=change.body["day"])


@handles("round.changed")
def round_changed(change: Change) -> None:
    """The stops in another order, or one more; a stop that was visited never leaves the round."""
    known = change.need("round", change.entry.about)
    for stop in change.body["stops"]:
        change.need("point", stop["point"])
    if set(known["visits"]) - {stop["id"] for stop in change.body["stops"]}:
        raise Refused("stop_visited", "A stop that was visited stays in its round.")
    changed = {"by": change.name_of(change.entry.by), "at": change.entry.at}
    change.update("round", change.entry.about, known | {"stops": change.body["stops"], "changed": changed})


@handles("visit.begun")
def visit_begun(change: Change) -> None:
    """The inspector is at a point."""
    if change.get("visit", change.entry.about):
        raise Refused("already_stated", "This visit was begun before.")
    change.need("point", change.body["point"])
    body = {
        **change.body,
        "by": change.entry.by,
        "by_name": change.name_of(change.entry.by),
        "gas": [],
        "gas_confirmed": None,
        "flows": [],
        "samples": [],
        "sampler": None,
        "outcome": None,
        "ended": None,
    }
    change.put("visit", change.entry.about, body, parent=change.body["point"], at=change.body["arrived_at"])
    round_, stop = change.body["round"], change.body["stop"]
    known = round_ and change.get("round", round_)
    if known and stop:
        change.update("round", round_, known | {"visits": known["visits"] | {stop: change.entry.about}})


def _open(change: Change) -> Body:
    visit = change.need("visit", change.entry.about)
    if visit["ended"]:
        raise Refused("visit_ended", "This visit has ended; begin another one.")
    return visit


@handles("gas.tested")
def gas_tested(change: Change) -> None:
    """A gas reading; a confirmation holds for the readings before it only."""
    visit = _open(change)
    visit["gas"].append({**change.body, "by": change.name_of(change.entry.by)})
    change.update("visit", change.entry.about, visit | {"gas_confirmed": None})


@handles("gas.confirmed")
def gas_confirmed(change: Change) -> None:
    """A person confirms after an alarm; the last reading must lie below every alarm point."""
    visit = _open(change)
    who = change.name_of(change.entry.by)
    gate = gas_gate(readings_of(visit), confirmed_by=who)
    if gate.blocked:
        raise Refused("gas_alarm", f"{'; '.join(gate.why)}. {gate.words}")
    told = {"by": who, "at": change.entry.at, "note": change.body["note"]}
    change.update("visit", change.entry.about, visit | {"gas_confirmed": told})


def readings_of(visit: Body) -> list[GasReading]:
    """Return a visit's gas readings as numbers, in the order in which they were stated."""
    names = ("oxygen_percent", "lel_percent", "h2s_ppm", "co_ppm")
    return [
        GasReading(*(None if one[name] is None else measured.read(one[name]).value for name in names))
        for one in visit["gas"]
    ]


def need_safe(point: Body, visit: Body) -> None:
    """Refuse a sample while the gas readings of its visit do not allow it.

    Raises
    ------
    Refused
        With what alarmed and what is needed.
    """
    if not visit["gas"] and not GAS_HAZARDS & set(point["hazards"]):
        return
    confirmed = visit["gas_confirmed"]
    gate = gas_gate(readings_of(visit), confirmed and confirmed["by"])
    if gate.blocked:
        raise Refused(
            "gas_alarm",
            f"The gas readings of this visit do not allow a sample: {'; '.join(gate.why)}. {gate.words} "
            "The entry is kept; a coordinator decides.",
        )


@handles("flow.measured")
def flow_measured(change: Change) -> None:
    """A flow at the point; what it amounts to follows from the rating."""
    visit = _open(change)
    try:
        found = flow_of(change.body)
    except InputError as error:
        raise Refused("invalid", error.message, error.fields) from None
    visit["flows"].append({**change.body, **found, "by": change.name_of(change.entry.by)})
    change.update("visit", change.entry.about, visit)


@handles("visit.ended")
def visit_ended(change: Change) -> None:
    """What came of the visit; anything but a sample needs its reason."""
    visit = _open(change)
    outcome = change.body["outcome"]
    if outcome not in ("sampled", "sampler set") and not change.body["reason"].strip():
        raise Refused("reason_needed", "Say what happened: a visit without a sample is never a blank.")
    if change.body["left_at"] and _earlier(change.body["left_at"], visit["arrived_at"]):
        raise Refused("wrong_order", "The visit cannot end before it began.")
    ended = {**change.body, "by": change.name_of(change.entry.by), "at": change.entry.at}
    change.update("visit", change.entry.about, visit | {"outcome": outcome, "ended": ended})


def _earlier(one: str, other: str) -> bool:
    return datetime.fromisoformat(one) < datetime.fromisoformat(other)


@handles("sampler.set")
def sampler_set(change: Change) -> None:
    """A sampler runs; the sample of the same id is picked up later."""
    change.need("point", change.body["point"])
    if change.get("sampler", change.entry.about) or change.get("sample", change.entry.about):
        raise Refused("already_stated", "This sampler was set before.")
    body = {**change.body, "by": change.entry.by, "by_name": change.name_of(change.entry.by)}
    change.put(
        "sampler",
        change.entry.about,
        body | {"state": "running"},
        parent=change.body["point"],
        at=change.body["started_at"],
    )
    if change.body["visit"]:
        visit = change.need("visit", change.body["visit"])
        change.update("visit", change.body["visit"], visit | {"sampler": change.entry.about})


@handles("sample.split")
def sample_split(change: Change) -> None:
    """The discharger has part of the sample, or refused it."""
    sample = change.need("sample", change.entry.about)
    split = {**change.body, "by": change.name_of(change.entry.by), "at": change.entry.at}
    change.update("sample", change.entry.about, sample | {"split": split})


@handles("meter.checked")
def meter_checked(change: Change) -> None:
    """A check of a field meter, judged by its acceptance; a failed one casts doubt on readings."""
    change.need("instrument", change.entry.about)
    body = change.body
    judged = _judged(body)
    check = {**body, "ok": judged.ok, "words": list(judged.words), "by": change.name_of(change.entry.by)}
    meter = _meter(change, change.entry.about)
    meter["checks"] = [*meter["checks"], check][-KEPT_CHECKS:]
    _doubt(change, change.entry.about, meter)


def _judged(body: Body) -> meters.Judged:
    if body["quantity"] == "gas":
        ok = bool(body["passed"])
        return meters.Judged(ok, 0.0, ("passed" if ok else "did not respond to test gas as it must",))
    points = [
        meters.Point(measured.read(one["reference"]).value, measured.read(one["read"]).value)
        for one in body["points"]
    ]
    slope = None if body["slope_percent"] is None else measured.read(body["slope_percent"]).value
    try:
        return meters.judge(body["quantity"], points, slope, body["what"] == "calibration")
    except InputError as error:
        raise Refused("invalid", error.message, error.fields) from None


def _meter(change: Change, id_: str) -> Body:
    return change.get("meter", id_) or {"checks": [], "samples": []}


def meter_used(change: Change, id_: str, sample: str, body: Body) -> None:
    """Remember which readings a meter gave, so that a later check can cast doubt on them."""
    change.need("instrument", id_)
    meter = _meter(change, id_)
    read = [FIELD_QUANTITIES[name] for name in body["field"] if name in FIELD_QUANTITIES]
    used = {"sample": sample, "at": body["collected_at"], "quantities": read}
    meter["samples"] = [*meter["samples"], used][-KEPT_SAMPLES:]
    _doubt(change, id_, meter)


def _doubt(change: Change, id_: str, meter: Body) -> None:
    """Put the meter, and mark each sample with the readings that its checks no longer enclose."""
    change.put("meter", id_, meter)
    name = change.need("instrument", id_)["name"]
    for used in meter["samples"]:
        words = [
            f"{quantity}: {name} failed its check afterwards"
            for quantity in used["quantities"]
            if _in_doubt(meter, quantity, used["at"])
        ]
        sample = change.get("sample", used["sample"])
        if sample and sample.get("doubts", []) != words:
            change.update("sample", used["sample"], sample | {"doubts": words})


def _in_doubt(meter: Body, quantity: str, at: str) -> bool:
    checks: list[tuple[datetime, Any]] = [
        (datetime.fromisoformat(one["at"]), one["ok"])
        for one in meter["checks"]
        if one["quantity"] == quantity
    ]
    return bool(meters.in_doubt(checks, [datetime.fromisoformat(at)]))
