"""Control charts: a baseline is asked for by name; points and limits come from the server."""

from __future__ import annotations

from app.errors import InputError
from app.records import charts
from app.records.change import Body, Change, Refused
from app.records.handlers import handles


@handles("baseline.frozen")
def baseline_frozen(change: Change) -> None:
    """A person names the runs that the limits of a chart are frozen from."""
    chart = change.need("chart", change.entry.about)
    asked = change.body | {"by": change.name_of(change.entry.by), "at": change.entry.at}
    try:
        charts.frozen(chart, asked, change.find("programme")[0][1]["settings"])
    except InputError as error:
        raise Refused("wrong_baseline", error.message, error.fields) from None
    change.update("chart", change.entry.about, chart | {"asked": asked})


@handles("chart.judged")
def chart_judged(change: Change) -> None:
    """The points of a chart from one place on; what a run set off stands in its own record too."""
    body, id_ = change.body, change.entry.about
    chart = change.get("chart", id_) or {"points": [], "baseline": None, "baselines": [], "asked": None}
    before: dict[str, list[Body]] = {point["run"]: [] for point in body["points"]}
    for point in body["points"]:
        before[point["run"]] += [_fired(id_, body["what"], point)] if point["fired"] else []
    for run_id, fired in before.items():
        _tell_run(change, run_id, id_, fired)
    points = charts.latest(chart["points"][: body["begins"]] + body["points"])
    old = chart["baselines"]
    new = [body["baseline"]] if body["baseline"] and body["baseline"] != chart["baseline"] else []
    chart |= {name: body[name] for name in ("recipe", "instrument", "what", "baseline")}
    at = points[-1]["at"] if points else ""
    change.put("chart", id_, chart | {"points": points, "baselines": [*old, *new]}, body["recipe"], at)


def _fired(chart: str, what: str, point: Body) -> Body:
    where = "" if point["position"] is None else f", position {point['position']}"
    said = {"what": what, "position": point["position"], "words": point["fired"], "stops": point["stops"]}
    return said | {"chart": chart, "subject": f"{charts.NAMES[what]}{where}"}


def _tell_run(change: Change, run_id: str, chart: str, fired: list[Body]) -> None:
    """Note in a run what it set off; a result beyond an action limit waits for a decision."""
    run = change.get("run", run_id)
    if run is None:
        return
    told = [one for one in run.get("fired") or [] if one["chart"] != chart] + fired
    if told == (run.get("fired") or []):
        return
    run["fired"] = told
    if run["state"] == "calculated":
        asked = [one for one in run["questions"] if one["what"] != "control chart"]
        stops = [{"what": "control chart", "subject": one["subject"]} for one in told if one["stops"]]
        run["questions"] = asked + stops
    change.update("run", run_id, run)
