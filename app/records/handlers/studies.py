"""Detection limit studies: what is planned, what came in, what is still missing, the limit."""

from __future__ import annotations

from datetime import date

from app.chemistry.detection_study import level_fits, plan_study
from app.errors import InputError
from app.journal import measured
from app.records import studies
from app.records.change import Body, Change, Refused
from app.records.handlers import handles


@handles("study.planned")
def study_planned(change: Change) -> None:
    """A study with its tubes spread over its days."""
    body = change.body
    if change.get("study", change.entry.about):
        raise Refused("already_stated", "This study was planned before.")
    change.need("recipe", body["recipe"])
    for id_ in body["instruments"]:
        change.need("instrument", id_)
    estimate, level = (measured.value(body[name], "mg/L") or 0.0 for name in ("estimate", "level"))
    if not level_fits(estimate, level):
        low, high = 2 * estimate, 10 * estimate
        raise Refused(
            "wrong_level",
            f"The spike must lie at 2 to 10 times the estimate: {low:g} to {high:g} mg/L.",
            {"level": ["Not at 2 to 10 times the estimate."]},
        )
    try:
        plan = plan_study(estimate, [date.fromisoformat(day) for day in body["days"]])
    except InputError as error:
        raise Refused("wrong_study", error.message, error.fields) from None
    study = body | {
        "estimate_mg_l": estimate,
        "level_mg_l": level,
        "plan": [{"on": d.on.isoformat(), "spikes": d.spikes, "blanks": d.blanks} for d in plan.days],
        "rows": [],
        "state": "open",
        "finished": None,
        "limits": [],
        "planned_by": change.name_of(change.entry.by),
        "planned_at": change.entry.at,
    }
    _put(change, study)


def _put(change: Change, study: Body) -> None:
    study["gaps"] = studies.gaps(study, _names(change, study), change.entry.at[:10])
    change.put("study", change.entry.about, study, parent=study["recipe"], at=study["planned_at"])


def _names(change: Change, study: Body) -> dict[str, str]:
    return {id_: change.need("instrument", id_)["name"] for id_ in study["instruments"]}


def _check_row(change: Change, study: Body, before: Body | None) -> None:
    body = change.body
    if body["instrument"] not in study["instruments"]:
        raise Refused("wrong_instrument", "This instrument is not one of the study's.")
    if body["on"] > change.entry.at[:10]:
        raise Refused("wrong_day", "The day of a result cannot lie ahead.", {"on": ["Still to come."]})
    if before and not body["reason"].strip():
        raise Refused(
            "reason_needed", "A correction needs its reason.", {"reason": ["Say why the result changes."]}
        )
    typed = body["result"]
    if typed and measured.read(typed["text"]).sign == ">":
        raise Refused(
            "wrong_result", "A result over something is none here.", {"result": ["No upper bound."]}
        )
    if body["run"] is not None:
        _check_tube(change, study)


def _check_tube(change: Change, study: Body) -> None:
    body = change.body
    run = change.need("run", body["run"])
    wrong = studies.objection(run, body["position"], body["tube"], study["level_mg_l"])
    same = (body["run"], body["position"])
    if any((row["run"], row["position"]) == same for row in study["rows"] if row["row"] != body["row"]):
        wrong = "This tube is in the study already."
    if wrong:
        raise Refused("wrong_tube", wrong, {"position": [wrong]})


@handles("study.result")
def study_result(change: Change) -> None:
    """One tube's result; a correction keeps what stood before."""
    body, study = change.body, change.need("study", change.entry.about)
    before = next((row for row in study["rows"] if row["row"] == body["row"]), None)
    _check_row(change, study, before)
    typed = body["result"]
    number = typed and measured.read(typed["text"]).sign == "="
    row = body | {
        "mg_l": measured.value(typed, "mg/L") if number else None,
        "waits": body["run"] is not None,
        "by": change.name_of(change.entry.by),
        "at": change.entry.at,
        "before": [] if before is None else [*before["before"], _stood(before)],
    }
    rows = [one for one in study["rows"] if one["row"] != body["row"]]
    study["rows"] = sorted([*rows, row], key=lambda one: (one["on"], one["batch"], one["tube"], one["row"]))
    _put(change, study)


def _stood(row: Body) -> Body:
    return {name: row[name] for name in ("result", "mg_l", "left_out", "by", "at")}


@handles("study.tube_found")
def study_tube_found(change: Change) -> None:
    """The number of a tube that was taken from a run."""
    study = change.need("study", change.entry.about)
    for row in study["rows"]:
        if row["row"] == change.body["row"]:
            row |= {"mg_l": change.body["mg_l"], "waits": False}
    _put(change, study)


@handles("study.finished")
def study_finished(change: Change) -> None:
    """The limit is asked for; a study with gaps gives none."""
    study = change.need("study", change.entry.about)
    left = studies.gaps(study, _names(change, study), change.entry.at[:10])
    if left:
        raise Refused("study_gaps", f"Still missing: {'; '.join(left)}.", {"rows": left})
    by = change.name_of(change.entry.by)
    study["finished"] = change.body | {"by": by, "at": change.entry.at}
    _put(change, study)


@handles("study.computed")
def study_computed(change: Change) -> None:
    """The limit of a study; it is in force from its day for the study's instruments."""
    study = change.need("study", change.entry.about)
    limit = change.body | {
        "study": change.entry.about,
        "name": study["name"],
        "recipe": study["recipe"],
        "instruments": study["instruments"],
    }
    study["limits"].append(limit)
    study["state"] = "finished"
    _put(change, study)
    id_ = f"{change.entry.about}:{len(study['limits'])}"
    change.put("detection_limit", id_, limit, parent=study["recipe"], at=change.body["computed_on"])
