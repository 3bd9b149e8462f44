"""Control charts of the laboratory: one of each check for a recipe and an instrument.

Points come from calculated runs, in time order. Limits are frozen once from a
named baseline and stay; what comes after is judged by them. A result with a
known failure enters no limit: it stays on the chart with its cause.
"""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from app import __version__
from app.chemistry.control_charts import Limits, ewma, freeze, individuals_limits, no_wider_than, range_limits
from app.chemistry.judging import CUSUM_DECISION, Judged, judge
from app.errors import InputError
from app.journal.entry import digest
from app.journal.kinds.charts import CHARTS
from app.records import controls
from app.records.change import Body, Stating

NAMES = {
    "blank": "blank",
    "verification": "verification",
    "control": "laboratory control",
    "duplicate": "duplicate",
    "spike": "spike recovery",
}
#: Results that a chart shows beside its baseline; older ones stand in the journal and in their runs.
MOST_POINTS = 200
_SUMS = ("average", "upper", "lower")
_JUDGEMENT: Body = {"fired": [], "stops": False, "average": None, "upper": None, "lower": None}


def chart_id(recipe: str, instrument: str, what: str) -> str:
    """Return a chart's identity; long ones are shortened to fit."""
    id_ = f"{what[:3]}:{recipe}:{instrument}"
    return id_ if len(id_) <= 80 else f"{what[:3]}:{digest(id_.encode())[:40]}"


def points_of(run_id: str, run: Body, what: str) -> list[Body]:
    """Return a calculated run's points on one chart."""
    at = (run.get("heating") or {}).get("started_at") or run["planned_at"]
    unused = controls.unused(run)
    return [
        {"run": run_id, "name": run["name"], "at": at, "position": one["position"], "value": one["value"]}
        | {"ok": one["ok"], "base": False, "decided": unused.get((what, one["subject"]), "")}
        | {"left_out": one["left_out"], **_JUDGEMENT}
        for one in run.get("checks") or []
        if one["what"] == what and one["value"] is not None
    ]


def key(point: Body) -> tuple[str, int | None]:
    """Return what names a point."""
    return point["run"], point["position"]


def judge_run(writing: Stating, run_id: str) -> None:
    """Put a run's checks on their charts, each with what it set off."""
    run = writing.get("run", run_id) or {}
    for what in CHARTS:
        id_ = chart_id(run["recipe"], run["instrument"], what)
        chart = writing.get("chart", id_)
        old = chart["points"] if chart else []
        new = points_of(run_id, run, what)
        if not new and all(point["run"] != run_id for point in old):
            continue
        baseline = chart["baseline"] if chart else None
        points = _judged(_joined(old, new, run_id), baseline, old)
        place = {"recipe": run["recipe"], "instrument": run["instrument"], "what": what}
        _state(writing, id_, place, old, points, baseline)


def _joined(old: list[Body], new: list[Body], run_id: str) -> list[Body]:
    """Return the points with a run's in their place; what a baseline said of a point stays."""
    before = {key(point): point for point in old}
    kept = [point for point in old if point["run"] != run_id]
    for point in new:
        known = before.get(key(point), point)
        said = {"base": known["base"], "left_out": point["left_out"] or known["left_out"]}
        if point["decided"]:
            said = {"base": False, "left_out": point["decided"], "stops": known["stops"]}
            said["fired"] = known["fired"][:1] if known["stops"] else []
        kept.append(point | said)
    return sorted(kept, key=lambda one: (one["at"], one["run"], one["position"] or 0))


def _raw(point: Body) -> Body:
    return {name: value for name, value in point.items() if name not in _JUDGEMENT}


def _judged(points: list[Body], baseline: Body | None, known: list[Body]) -> list[Body]:
    """Return the points, those outside the baseline and after its first judged by its limits.

    What was judged before the first change stands: sums go on from there.
    """
    first = next((i for i, point in enumerate(points) if point["base"]), None)
    if baseline is None or first is None:
        return points
    later = [i for i, point in enumerate(points) if i > first and not point["base"] and not point["left_out"]]
    limits = Limits(**baseline["limits"])
    same = (_raw(a) == _raw(b) for a, b in zip(known, points, strict=False))
    fresh = next((i for i, one in enumerate(same) if not one), min(len(known), len(points)))
    before = [_said(known[i]) for i in later if i < fresh]
    later = [i for i in later if i >= fresh]
    values = [points[i]["value"] for i in later]
    found = judge(values, limits, baseline["what"] == "duplicate", before)
    judged = [point if point["decided"] else point | _JUDGEMENT for point in points]
    judged[:fresh] = known[:fresh]
    for i, one in zip(later, found, strict=True):
        said = asdict(one)
        judged[i] |= {name: said[name] for name in _JUDGEMENT} | {"fired": list(one.fired)}
    return judged


def _said(point: Body) -> Judged:
    return Judged(point["value"], point["stops"], tuple(point["fired"]), *(point[name] for name in _SUMS))


def _state(
    writing: Stating, id_: str, place: Body, old: list[Body], points: list[Body], baseline: Body | None
) -> None:
    """State the points from the first that changed on."""
    same = (a == b for a, b in zip(old, points, strict=False))
    begins = next((i for i, one in enumerate(same) if not one), min(len(old), len(points)))
    values = ",".join(f"{point['run']} {point['position']} {point['value']!r}" for point in points)
    body = place | {"software": f"weirbook {__version__}", "inputs_digest": digest(values.encode())}
    writing.state(
        "chart.judged", id_, body | {"begins": begins, "points": points[begins:], "baseline": baseline}
    )


def latest(points: list[Body]) -> list[Body]:
    """Return a chart's baseline and its latest other results."""
    gone = len([point for point in points if not point["base"]]) - MOST_POINTS
    kept = []
    for point in points:
        if point["base"] or gone <= 0:
            kept.append(point)
        else:
            gone -= 1
    return kept


def members(chart: Body, asked: Body) -> list[Body]:
    """Return the points of a chart from the first run of a baseline to the last, with the causes given.

    Raises
    ------
    InputError
        If the runs are not on the chart, or a failed check is not left out.
    """
    runs = [point["run"] for point in chart["points"]]
    wrong = {name: ["Not a run of this chart."] for name in ("first", "last") if asked[name] not in runs}
    if wrong:
        raise InputError("This baseline names a run that is not on the chart.", wrong)
    begins, ends = runs.index(asked["first"]), len(runs) - runs[::-1].index(asked["last"])
    said = {(one["run"], one["position"]): one["reason"] for one in asked["left_out"]}
    found = [
        point | {"left_out": said.get(key(point), point["left_out"])}
        for point in chart["points"][begins:ends]
    ]
    failed = [point["name"] for point in found if point["ok"] is False and not point["left_out"]]
    if failed:
        raise InputError(
            f"A failed check enters no limit: leave it out with its cause ({', '.join(failed)}).",
            {"left_out": failed},
        )
    return found


def frozen(chart: Body, asked: Body, settings: Body) -> Body:
    """Return the limits that follow from a baseline.

    Raises
    ------
    InputError
        If no limits follow from these results.
    """
    found = members(chart, asked)
    left_out = {i: point["left_out"] for i, point in enumerate(found) if point["left_out"]}
    base = freeze(asked["name"], [point["value"] for point in found], left_out)
    what, method = chart["what"], _method(chart["what"], settings)
    limits = range_limits(base) if what == "duplicate" else individuals_limits(base, asked["spread"])
    if limits.sigma <= 0:
        raise InputError("These results are all the same: no limits follow.", {"first": ["No scatter."]})
    own = limits
    if method:
        limits = no_wider_than(limits, *method)
    if not limits.lower_action <= limits.centre <= limits.upper_action:
        raise InputError(
            f"The mean of these results, {base.mean:.1f}, lies outside the method's limits: find the cause.",
            {"first": ["Mean outside the method's limits."]},
        )
    average = None if what == "duplicate" else ewma([], limits.centre, limits.sigma)
    body: dict[str, Any] = {name: asked[name] for name in ("name", "first", "last", "spread")}
    body |= {"what": what, "n": base.n, "mean": base.mean, "sd": base.sd, "limits": asdict(limits)}
    body |= {
        "mean_moving_range": base.mean_moving_range,
        "method": method,
        "by": asked["by"],
        "at": asked["at"],
    }
    body |= {"average": average and [average.lower, average.upper], "decision": CUSUM_DECISION}
    return body | {"words": _words(body, found, limits, tighter=limits == own)}


def _method(what: str, settings: Body) -> list[float] | None:
    """Return the method's own limits, which the laboratory's may not exceed."""
    if what in ("verification", "control"):
        within = settings["verification_percent"]
        return [100.0 - within, 100.0 + within]
    if what == "duplicate":
        return [0.0, settings["duplicate_rpd_percent"]]
    return list(settings["spike_percent"]) if what == "spike" else None


def _words(body: Body, found: list[Body], limits: Limits, tighter: bool) -> list[str]:
    unit = "mAU" if body["what"] == "blank" else "%"
    how = {
        "standard deviation": f"three standard deviations ({body['sd']:.2f} {unit}) on both sides",
        "moving range": f"2.66 mean moving ranges ({body['mean_moving_range']:.2f} {unit}) on both sides",
    }[body["spread"]]
    if body["what"] == "duplicate":
        how = "3.267 mean ranges, warning at 2.512"
    words = [
        f"“{body['name']}”: {body['n']} results, {found[0]['name']} to {found[-1]['name']}, "
        f"frozen by {body['by']}.",
        f"Mean {body['mean']:.2f} {unit}; action limits {limits.lower_action:.2f} and "
        f"{limits.upper_action:.2f}: {how}.",
    ]
    method = body["method"]
    if method and not tighter:
        words.append(f"No wider than the method's own limits, {method[0]:g} to {method[1]:g} %.")
    return words


def freeze_baseline(writing: Stating, id_: str) -> None:
    """State the limits of the baseline that was asked for, and judge what came after it."""
    chart = writing.get("chart", id_) or {}
    asked, settings = chart["asked"], writing.find("programme")[0][1]["settings"]
    baseline = frozen(chart, asked, settings)
    inside = {key(point): point for point in members(chart, asked)}
    points = []
    for point in chart["points"]:
        one = inside.get(key(point))
        points.append(
            point
            | {"base": bool(one and not one["left_out"]), **({"left_out": one["left_out"]} if one else {})}
        )
    place = {name: chart[name] for name in ("recipe", "instrument", "what")}
    _state(writing, id_, place, chart["points"], _judged(points, baseline, []), baseline)
