"""Detection limits as the server states them: a run's tube for a study, the limit, the one in force."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import asdict
from datetime import date

from app import verbs
from app.chemistry import rounding
from app.chemistry.detection import Workings, detection_limit, minimum_level, workings
from app.chemistry.detection_study import RECOMPUTE_MONTHS as MONTHS
from app.chemistry.detection_study import (
    StudyResult,
    blank_alone,
    counting,
    data_from,
    may_stand,
    months_later,
    study_gaps,
)
from app.errors import WeirbookError
from app.journal import measured
from app.records.change import Body, Stating
from app.records.laboratory import SOFTWARE, inputs_digest

FEWEST_BLANKS_OF_A_RUN = 2


def _result(row: Body) -> StudyResult:
    return StudyResult(
        date.fromisoformat(row["on"]), row["batch"], row["tube"], row["instrument"], row["mg_l"]
    )


def counted(study: Body, day: str) -> list[StudyResult]:
    """Return the results that count on a day: not left out, and young enough."""
    used = [_result(row) for row in study["rows"] if not row["left_out"].strip() and not row["waits"]]
    return list(counting(used, date.fromisoformat(day)))


def gaps(study: Body, instruments: Mapping[str, str], day: str) -> list[str]:
    """Return what a study still lacks, in words; tubes that wait for their number first."""
    waits = sum(1 for row in study["rows"] if row["waits"])
    words = [f"tubes of runs whose number is not known yet: {waits}"] if waits else []
    return words + list(study_gaps(counted(study, day), instruments, not study["limits"]))


def objection(run: Body, position: int | None, tube: str, level_mg_l: float) -> str:
    """Say why a tube of a run cannot stand for a study's spike or blank; empty when it can."""
    found = next((one for one in run["tubes"] if one["position"] == position), None)
    if found is None or found["absorbance"] is None or found["excluded"] is not None:
        return "There is no tube in this position that was read and kept."
    if run["answer"] is None:
        return "This run is not calculated yet."
    if tube == "blank":
        enough = len(_blanks(run)) >= FEWEST_BLANKS_OF_A_RUN
        return "" if found["role"] == "blank" and enough else "This is no blank among others of its run."
    expected = found["expected"] and measured.read(found["expected"]).value
    near = expected is not None and abs(expected - level_mg_l) <= 0.005 * level_mg_l
    return "" if near else f"This tube does not hold the study's spike of {level_mg_l:g} mg/L."


def _blanks(run: Body) -> list[Body]:
    return [
        one
        for one in run["tubes"]
        if one["role"] == "blank" and one["absorbance"] is not None and one["excluded"] is None
    ]


def take_tube(writing: Stating, about: str) -> None:
    """State what a tube of a run gave for a study: a blank is read against the other blanks of its run."""
    study_id, row_id = about.split(" ")
    study = writing.get("study", study_id) or {}
    row = next(one for one in study["rows"] if one["row"] == row_id)
    run = writing.get("run", row["run"]) or {}
    tube = next(one for one in run["tubes"] if one["position"] == row["position"])
    mg_l = _blank_mg_l(run, tube) if row["tube"] == "blank" else tube["in_tube"]
    body = {"software": SOFTWARE, "row": row_id, "mg_l": mg_l}
    writing.state("study.tube_found", study_id, body)


def _blank_mg_l(run: Body, tube: Body) -> float | None:
    blanks = _blanks(run)
    absorbances = [measured.value(one["absorbance"], "AU") or 0.0 for one in blanks]
    alone = blank_alone(absorbances, blanks.index(tube))
    curve = {name: run["input"]["calibration"][name] for name in ("standards", "model")}
    try:
        found = verbs.find("fit")(curve | {"weights": "equal", "read": [[alone]]})
    except WeirbookError:  # beyond the curve's turning point there is no number
        return None
    return float(found["read"][0]["cod"])


def compute_limit(writing: Stating, id_: str) -> None:
    """State a study's detection limit by the verb; an older one may stand where the rule lets it."""
    study = writing.get("study", id_) or {}
    day = study["finished"]["at"][:10]
    rows = counted(study, day)
    spikes = [row.mg_l for row in rows if row.kind == "spike" and row.mg_l is not None and row.mg_l > 0]
    blanks = [row.mg_l for row in rows if row.kind == "blank"]
    given: Body = {"spikes": spikes, "blanks": blanks}
    answer = verbs.find("detection-limit")(given)
    before = _limit_for(writing, study["recipe"], study["instruments"], day)
    allowed = before is not None and may_stand(before["mg_l"], answer["mdl"], _since(rows, before))
    stood = allowed and study["finished"]["keep"]
    mg_l = before["mg_l"] if before and stood else answer["mdl"]
    on = date.fromisoformat(day)
    recipe = writing.get("recipe", study["recipe"]) or {}
    words = [*_workings_words(workings(spikes, blanks), answer, spikes, blanks)]
    words += _level_words(mg_l, recipe) + _standing_words(before, allowed, stood)
    body = {
        "software": SOFTWARE,
        "inputs_digest": inputs_digest(given),
        "input": given,
        "answer": answer,
        "workings": asdict(workings(spikes, blanks)),
        "mg_l": mg_l,
        "shown": _two(mg_l),
        "computed_on": day,
        "again_by": months_later(on, MONTHS).isoformat(),
        "data_from": data_from(on).isoformat(),
        "stood": stood,
        "words": words,
    }
    writing.state("study.computed", id_, body)


def _since(rows: list[StudyResult], before: Body) -> list[float | None]:
    return [row.mg_l for row in rows if row.kind == "blank" and row.on.isoformat() > before["computed_on"]]


def _two(value: float) -> str:
    return rounding.plain(rounding.significant(value, 2))


def _workings_words(
    how: Workings, answer: Body, spikes: list[float], blanks: list[float | None]
) -> list[str]:
    """Return the sum in words: spikes, blanks, which counts."""
    found = detection_limit(spikes, blanks)
    words = [
        f"{how.spikes} spikes: mean {how.spikes_mean:.2f}, standard deviation {how.spikes_sd:.3f} mg/L, "
        f"t(0.99, {how.spikes_dof}) = {how.spikes_t:.3f}: {answer['mdl_spikes']:.2f} mg/L from the spikes, "
        f"95 % interval {_two(found.low)} to {_two(found.high)}."
    ]
    if how.blanks_rule == "none":
        words.append(f"None of {how.blanks} blanks gave a number: the spikes alone decide.")
    elif how.blanks_rule == "highest":
        words.append(
            f"{how.blanks_with_number} of {how.blanks} blanks gave a number: the highest counts, "
            f"{answer['mdl_blanks']:.2f} mg/L from the blanks."
        )
    else:
        words.append(
            f"{how.blanks} blanks, all with a number: mean {how.blanks_mean:.2f}"
            f"{' (counts as 0)' if (how.blanks_mean or 0.0) < 0 else ''}, standard deviation "
            f"{how.blanks_sd:.3f} mg/L, t(0.99, {how.blanks_dof}) = {how.blanks_t:.3f}: "
            f"{answer['mdl_blanks']:.2f} mg/L from the blanks."
        )
    return [*words, f"The larger is the detection limit: {_two(answer['mdl'])} mg/L."]


def _level_words(mg_l: float, recipe: Body) -> list[str]:
    level, low = minimum_level(mg_l), recipe["working_low"]
    verdict = "is not below it" if low >= level else "▲ is below it: report from the minimum level on"
    return [f"EPA's minimum level is {level:g} mg/L; the recipe's working range from {low:g} mg/L {verdict}."]


def _standing_words(before: Body | None, allowed: bool, stood: bool) -> list[str]:
    if before is None:
        return []
    old = f"The limit of {before['computed_on']}, {before['shown']} mg/L,"
    if stood:
        return [f"{old} stands: the new one lies within half to twice of it, and few blanks exceed it."]
    return [f"{old} {'might have stood' if allowed else 'may not stand'}; the new one is in force."]


def _limit_for(writing: Stating, recipe: str, instruments: list[str], day: str) -> Body | None:
    found = [
        body
        for _, body in writing.find("detection_limit", recipe)
        if body["computed_on"] <= day and set(instruments) <= set(body["instruments"])
    ]
    return found[-1] if found else None


def day_of(run: Body) -> str:
    """Return the day on which a run was heated, or planned where it was not heated yet."""
    began: str = (run.get("heating") or {}).get("started_at") or run["planned_at"]
    return began[:10]


def in_force(writing: Stating, run: Body) -> Body | None:
    """Return the detection limit that was in force for a run's recipe and photometer on its day."""
    limit = _limit_for(writing, run["recipe"], [run["instrument"]], day_of(run))
    names = ("study", "name", "mg_l", "shown", "computed_on", "again_by")
    return None if limit is None else {name: limit[name] for name in names}
