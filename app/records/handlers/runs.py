"""Runs: planned, gated, heated, read, calculated, closed.

A run passes its stages in order; a step out of order is kept as held. The
gates and their wording come from :mod:`app.safety.gates`; here they are only
enforced.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from app.journal import measured
from app.records import controls, interferences
from app.records.change import Body, Change, Refused
from app.records.handlers import handles
from app.records.handlers.curves import unfit, wrong_curve
from app.records.handlers.field import bottle, put_bottle
from app.records.handlers.waste import DIGEST, add_to_month, day_of
from app.records.laboratory import waste_of
from app.safety import gates as safety

NEEDS = {
    "sample": ("bottle", "dilution"),
    "verification": ("expected",),
    "control": ("expected", "source"),
    "duplicate": ("bottle", "dilution"),
    "spike": ("bottle", "dilution", "spike"),
}
STAGES = ("planned", "heating", "cooling", "reading", "calculated", "closed", "failed")


def facts_of(recipe: Body) -> safety.RunFacts:
    """Return what the gates of a recipe's runs are held against."""
    return safety.RunFacts(
        chloride_limit_mg_l=(recipe["derived"] or {}).get("chloride_limit", 0.0),
        order=tuple(recipe["order"]),
        temperature_c=recipe["temperature_c"],
    )


def _open_gates(change: Change, run: Body, stage: safety.Stage) -> None:
    facts = facts_of(change.need("recipe", run["recipe"]))
    confirmed = {
        name: safety.Confirmation(name, one["value"], run["container"]) for name, one in run["gates"].items()
    }
    left = safety.missing(safety.run_gates(facts), confirmed, facts, stage)
    if left:
        raise Refused(
            "gate_open",
            f"“{left[0].gate.title}”: {left[0].why}. The step is kept, but it does not count before the gate "
            "is confirmed.",
            {f"gate.{one.gate.id}": [one.why] for one in left},
        )


def _in_state(run: Body, *states: str) -> None:
    if run["state"] not in states:
        raise Refused("wrong_step", f"This run is {run['state']}; the step belongs to {' or '.join(states)}.")


def _tube(run: Body, position: int) -> Body:
    for tube in run["tubes"]:
        if tube["position"] == position:
            found: Body = tube
            return found
    raise Refused("unknown_tube", f"There is no tube in position {position}.", {"position": ["Empty."]})


def _wrong_tubes(tubes: list[Body]) -> dict[str, list[str]]:
    """Return what keeps each tube out of the rack."""
    wrong: dict[str, list[str]] = {}
    positions = [tube["position"] for tube in tubes]
    for index, tube in enumerate(tubes):
        if positions.count(tube["position"]) > 1:
            wrong[f"tubes.{index}.position"] = ["Two tubes cannot stand in one position."]
        for name in NEEDS.get(tube["role"], ()):
            if tube.get(name) is None:
                wrong[f"tubes.{index}.{name}"] = [f"A {tube['role']} tube needs it."]
    own = {tube.get("bottle") for tube in tubes if tube["role"] == "sample"}
    for index, tube in enumerate(tubes):
        if tube["role"] in controls.EXTRA and tube.get("bottle") not in own:
            wrong[f"tubes.{index}.bottle"] = [f"A {tube['role']} needs its sample in the same rack."]
    return wrong


def _missing_controls(body: Body) -> dict[str, list[str]]:
    """Return the controls that are neither in a rack with samples nor left away with a reason."""
    there = {tube["role"] for tube in body["tubes"]}
    left = {"control", *controls.EXTRA} - there - {one["role"] for one in body["without"]}
    if "sample" not in there or not left:
        return {}
    return {"without": [f"No {role} stands in the rack: say why." for role in sorted(left)]}


def _check_plan(change: Change, body: Body) -> None:
    for name, type_ in (("recipe", "recipe"), ("block", "instrument"), ("container", "container")):
        change.need(type_, body[name])
    wrong = _wrong_tubes(body["tubes"]) | _missing_controls(body)
    if curve := wrong_curve(change, body):
        wrong["calibration"] = curve
    if change.need("container", body["container"])["state"] != "in use":
        wrong["container"] = ["It takes no more waste: choose another."]
    if change.need("lot", body["lot"])["recipe"] != body["recipe"]:
        wrong["lot"] = ["It belongs to another recipe."]
    if wrong:
        raise Refused("wrong_plan", "This run cannot be digested as planned.", wrong)


def _new_tube(tube: Body) -> Body:
    empty = {"bottle": None, "expected": None, "source": None, "dilution": None, "spike": None}
    read = {"absorbance": None, "colour": None, "remaining_oxidant": None, "excluded": None}
    return empty | tube | read | {"in_tube": None, "share": None, "readings": []}


@handles("run.planned")
def run_planned(change: Change) -> None:
    """The rack as it is planned."""
    body = change.body
    if change.get("run", change.entry.about):
        raise Refused("already_stated", "This run was planned before.")
    if not change.replayed:
        _check_plan(change, body)
    tubes = [_new_tube(tube) for tube in sorted(body["tubes"], key=lambda one: one["position"])]
    run = body | {
        "state": "planned",
        "tubes": tubes,
        "gates": {},
        "heating": None,
        "answer": None,
        "input": None,
        "questions": [],
        "problem": None,
        "waste": None,
        "bracketing": None,
        "checks": [],
        "experience": None,
        "fired": [],
        "closed": None,
        "planned_by": change.name_of(change.entry.by),
        "planned_at": change.entry.at,
    }
    change.put("run", change.entry.about, run, at=change.entry.at)
    for code in sorted({tube["bottle"] for tube in tubes if tube["bottle"]}):
        known = bottle(change, code)
        put_bottle(change, known | {"runs": [*known["runs"], change.entry.about]})


def _on_run(step: Callable[[Change, Body], None]) -> Callable[[Change], None]:
    def handler(change: Change) -> None:
        run = change.need("run", change.entry.about)
        step(change, run)
        change.update("run", change.entry.about, run)

    return handler


def _chloride_gate(change: Change, run: Body) -> None:
    """Refuse a chloride gate that what was measured contradicts, unless a person says why."""
    if change.body["gate"] != "chloride_within_limit" or change.body.get("note", "").strip():
        return
    over = interferences.over_limit(change, run)
    if over:
        raise Refused(
            "chloride_over_limit",
            f"{' '.join(over)} Dilute it more in another run, or say why it is digested all the same.",
            {"note": over},
        )


@handles("gate.confirmed")
@_on_run
def gate_confirmed(change: Change, run: Body) -> None:
    """A person says that a gate's condition is met."""
    known = {gate.id for gate in safety.GATES}
    if change.body["gate"] not in known:
        raise Refused("unknown_gate", "There is no such gate.", {"gate": ["Not a gate of a run."]})
    _chloride_gate(change, run)
    run["gates"][change.body["gate"]] = {
        "by": change.name_of(change.entry.by),
        "at": change.entry.at,
        "value": measured.value(change.body.get("value"), "Cel"),
        "note": change.body.get("note", ""),
    }


@handles("heating.started")
@_on_run
def heating_started(change: Change, run: Body) -> None:
    """Heat on, once the gates before it are confirmed."""
    _in_state(run, "planned")
    _open_gates(change, run, "before heating")
    run["state"] = "heating"
    run["heating"] = change.body | {"ended_at": None, "complete": None, "reason": ""}


@handles("heating.ended")
@_on_run
def heating_ended(change: Change, run: Body) -> None:
    """Heat off; an interrupted digestion fails the run with its reason."""
    _in_state(run, "heating")
    run["heating"] |= change.body
    run["state"] = "cooling" if change.body["complete"] else "failed"


def _belongs(change: Change, run: Body) -> None:
    """Refuse a first reading that the run's curve does not serve; the number stays with the held entry."""
    if found := unfit(change, run):
        raise Refused(
            "wrong_curve",
            f"This curve does not serve this reading: {'; '.join(found)}. The reading is kept, but no result "
            "follows from it: plan these bottles again with a curve that holds.",
            {"calibration": found},
        )


@handles("tube.read")
@_on_run
def tube_read(change: Change, run: Body) -> None:
    """An absorbance; a second reading of a tube corrects the first and keeps it."""
    _in_state(run, "cooling", "reading", "calculated")
    _open_gates(change, run, "before reading")
    tube = _tube(run, change.body["position"])
    if tube["absorbance"] is None and not change.replayed:
        _belongs(change, run)
    if tube["absorbance"] is not None and not change.body.get("reason", "").strip():
        raise Refused(
            "reason_needed",
            "This tube was read before: a correction needs its reason.",
            {"reason": ["Missing."]},
        )
    reading = {
        "absorbance": change.body["absorbance"],
        "colour": change.body["colour"],
        "remaining_oxidant": change.body.get("remaining_oxidant"),
        "reason": change.body.get("reason", ""),
        "by": change.name_of(change.entry.by),
        "at": change.entry.at,
    }
    tube["readings"].append(reading)
    tube |= {name: reading[name] for name in ("absorbance", "colour", "remaining_oxidant")}
    run["state"] = "reading" if run["state"] == "cooling" else run["state"]


@handles("tube.excluded")
@_on_run
def tube_excluded(change: Change, run: Body) -> None:
    """A tube is left out for a cause that was seen; its reading stays on record."""
    _in_state(run, "heating", "cooling", "reading", "calculated")
    tube = _tube(run, change.body["position"])
    tube["excluded"] = {
        "cause": change.body["cause"],
        "note": change.body["note"],
        "by": change.name_of(change.entry.by),
        "at": change.entry.at,
    }


@handles("readings.finished")
@_on_run
def readings_finished(change: Change, run: Body) -> None:
    """Every tube has a reading or a cause why not."""
    _in_state(run, "reading", "calculated")
    unread = [t["position"] for t in run["tubes"] if t["absorbance"] is None and t["excluded"] is None]
    if unread:
        raise Refused(
            "unread_tubes",
            f"Not read yet: position {', '.join(map(str, unread))}. Read them or give the cause why not.",
            {f"tubes.{position}": ["Not read."] for position in unread},
        )


def _questions(body: Body) -> list[dict[str, Any]]:
    """Return what must be decided; answers of before the checks had words are read from the sum."""
    if "checks" in body:
        return controls.questions(body)
    answer = body["answer"]
    found = [
        {"what": one["status"], "subject": one["sample"]}
        for one in answer["samples"]
        if one["status"] in ("over", "disagree")
    ]
    for index, one in enumerate(answer["checks"]["verifications"]):
        if not one["ok"]:
            found.append({"what": "verification", "subject": f"{index + 1}: {one['expected']:g} mg/L"})
    return found


@handles("run.calculated")
def run_calculated(change: Change) -> None:
    """The server's answer, and a result for each sample of the rack."""
    run = change.need("run", change.entry.about)
    by_position = {tube["position"]: tube for tube in change.body["tubes"]}
    for tube in run["tubes"]:
        tube |= {name: by_position.get(tube["position"], {}).get(name) for name in ("in_tube", "share")}
    run |= {
        "state": "calculated",
        "answer": change.body["answer"],
        "input": change.body["input"],
        "questions": _questions(change.body),
        "problem": None,
        "waste": change.body["waste"],
        "bracketing": change.body.get("bracketing"),
        "checks": change.body.get("checks", []),
        "experience": change.body.get("experience"),
        "fired": [],
    }
    change.update("run", change.entry.about, run)
    for result in change.body["results"]:
        put_result(change, result["id"], {name: result[name] for name in result if name != "id"})


def put_result(change: Change, id_: str, result: Body) -> None:
    """Put a result and tell its bottle; a result that was issued on paper is never replaced."""
    before = change.get("result", id_)
    if before and before["certificate"]:
        raise Refused("certified", "A certificate was issued for this result: it can only be amended.")
    body = result | {"review": None, "certificate": None}
    change.put("result", id_, body, parent=result["point"] or "", at=result["collected_at"] or "")
    if result["bottle"]:
        known = bottle(change, result["bottle"])
        results = [*[one for one in known["results"] if one != id_], id_]
        put_bottle(change, known | {"results": results})


@handles("run.closed")
@_on_run
def run_closed(change: Change, run: Body) -> None:
    """The run is done: each question has a decision, and its waste is in the container."""
    _in_state(run, "calculated", "failed")
    decided = {(one["what"], one["subject"]) for one in change.body["decisions"]}
    asked = [(one["what"], one["subject"]) for one in run["questions"]]
    left = [f"{what} {subject}" for what, subject in asked if (what, subject) not in decided]
    if left:
        raise Refused("undecided", f"Still to decide: {', '.join(left)}.", {"decisions": left})
    _open_gates(change, run, "before closing" if run["state"] == "calculated" else "before heating")
    by = change.name_of(change.entry.by)
    run["closed"] = {"by": by, "at": change.entry.at, "decisions": change.body["decisions"]}
    run["state"] = "closed" if run["state"] == "calculated" else "failed"
    _fill_container(change, run)


def _fill_container(change: Change, run: Body) -> None:
    container = change.need("container", run["container"])
    if run["waste"] is None:
        # The tubes of a digestion that failed are waste like any others.
        run["waste"] = waste_of(run, change.need("recipe", run["recipe"]))
    waste = run["waste"]
    add_to_month(change, day_of(change), DIGEST, waste["mass_g"] / 1000.0)
    for name in ("mercury_mg", "chromium_mg", "silver_mg", "acid_reagent_ml", "sulfuric_acid_g", "mass_g"):
        container[name] += waste[name]
    container["filled_ml"] += waste["volume_ml"]
    container["tubes"] += waste["tubes"]
    container["runs"].append(change.entry.about)
    change.update("container", run["container"], container)
