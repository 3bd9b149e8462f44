"""Control charts: limits frozen from a named baseline never move; what comes after is judged by them."""

from __future__ import annotations

import json
import random
from typing import Any

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from app.chemistry.control_charts import freeze, individuals_limits
from app.chemistry.judging import judge
from app.journal.kinds.settings import DEFAULTS
from app.records import charts
from tests.records.conftest import Desk
from tests.tools import devices

CHART = "ver:high:photometer"
BLANKS = [{"position": p, "role": "blank"} for p in (1, 2, 3)]
QUIET = ("0.2015", "0.2001", "0.2020", "0.1998", "0.2010")


def verified(desk: Desk, i: int, text: str) -> None:
    """Tell a run of blanks and one verification of 500 mg/L that reads so."""
    d, run = desk.device, f"run-{i:02}"
    tubes = [*BLANKS, {"position": 4, "role": "verification", "expected": "500"}]
    plan = json.loads(devices.planned(d, run, devices.CODES[0], tubes=tubes, name=f"Run {i}"))
    assert set(desk.held(json.dumps(plan), *devices.heated(d, run))) == {None}
    assert set(desk.held(*devices.read(d, run, ("0.011", "0.010", "0.012", text)))) == {None}


def freeze_entry(desk: Desk, last: str = "run-19", **changed: Any) -> str:
    """Return the entry that freezes a baseline of the first twenty runs."""
    body = {"name": "spring", "first": "run-00", "last": last, "spread": "standard deviation"}
    return desk.device.make("baseline.frozen", CHART, body | {"left_out": []} | changed)


def test_a_baseline_is_frozen_and_a_failure_after_it_is_judged_and_moves_nothing(ready: Desk) -> None:
    for i in range(19):
        verified(ready, i, QUIET[i % 5])
    assert ready.held(freeze_entry(ready, "run-18")) == ["wrong_baseline"], "nineteen are too few"
    verified(ready, 19, QUIET[4])
    assert ready.held(freeze_entry(ready)) == [None]
    before = ready.get("chart", CHART)["baseline"]
    assert before["n"] == 20
    verified(ready, 20, "0.2400")
    chart = ready.get("chart", CHART)
    assert chart["baseline"] == before
    assert chart["points"][-1]["fired"][0] == "beyond the action limit of 'spring'"
    run = ready.get("run", "run-20")
    assert [(one["subject"], one["stops"]) for one in run["fired"]] == [("verification, position 4", True)]
    asked = [one["what"] for one in run["questions"]]
    assert asked == ["verification", "control chart"]
    assert ready.held(freeze_entry(ready, "run-20", name="with the failure")) == ["wrong_baseline"]
    gone = [{"run": "run-20", "position": 4, "reason": "lamp was failing"}]
    assert ready.held(freeze_entry(ready, "run-20", name="summer", left_out=gone)) == [None]
    chart = ready.get("chart", CHART)
    assert [one["name"] for one in chart["baselines"]] == ["spring", "summer"]
    assert (chart["baseline"]["n"], chart["points"][-1]["left_out"]) == (20, "lamp was failing")
    assert chart["baseline"]["limits"] | {"baseline": ""} == before["limits"] | {"baseline": ""}


def test_the_charts_of_a_run_that_is_calculated_again_hold_its_points_once(ready: Desk) -> None:
    verified(ready, 0, "0.2015")
    verified(ready, 1, "0.2020")
    assert ready.held(ready.device.make("readings.finished", "run-00", {})) == [None]
    assert [one["run"] for one in ready.get("chart", CHART)["points"]] == ["run-00", "run-01"]
    assert len(ready.get("chart", "bla:high:photometer")["points"]) == 2
    assert ready.held(freeze_entry(ready, "run-07")) == ["wrong_baseline"], "not on the chart"


def chart_of(values: list[float]) -> dict[str, Any]:
    """Return a chart of recoveries whose first twenty are the baseline."""
    points = [
        {"run": f"r{i:03}", "name": f"r{i}", "at": f"2031-06-01T{i:03}", "position": 4, "value": value}
        | {"ok": True, "left_out": "", "base": i < 20}
        for i, value in enumerate(values)
    ]
    return {"what": "verification", "points": points}


@settings(max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(
    st.lists(st.floats(97, 103), min_size=20, max_size=20).filter(lambda v: max(v) - min(v) > 0.5),
    st.lists(st.floats(0, 300), max_size=12),
)
def test_whatever_comes_after_the_baseline_never_moves_its_limits(
    quiet: list[float], later: list[float]
) -> None:
    asked = {"name": "b", "first": "r000", "last": "r019", "spread": "standard deviation", "left_out": []}
    asked |= {"by": "M", "at": "2031"}
    alone = charts.frozen(chart_of(quiet), asked, DEFAULTS)
    assert charts.frozen(chart_of([*quiet, *later]), asked, DEFAULTS)["limits"] == alone["limits"]


def test_what_is_judged_first_is_judged_the_same_when_more_has_come() -> None:
    base = freeze("b", [99.0, 101.0, 100.5, 99.5] * 5)
    limits = individuals_limits(base)
    values = [100.2, 101.9, 101.8, 106.0, 100.0, 101.1, 101.2, 101.3, 101.2, 101.4]
    whole = judge(values, limits)
    assert [judge(values[: i + 1], limits)[-1] for i in range(len(values))] == list(whole)
    assert [i for i, one in enumerate(whole) if one.stops] == [3]
    assert any("moving average" in words for one in whole for words in one.fired)


def test_judging_goes_on_where_it_stood_and_says_the_same() -> None:
    limits = individuals_limits(freeze("b", [99.0, 101.0, 100.5, 99.5] * 5))
    rng = random.Random(7)
    values = [100 + rng.gauss(0.3, 1.0) for _ in range(60)]
    whole = judge(values, limits)
    for i in (1, 6, 20, 59):
        assert (*whole[:i], *judge(values[i:], limits, before=whole[:i])) == whole
    assert any(one.fired for one in whole)


def test_a_chart_keeps_its_baseline_and_its_latest_results() -> None:
    points = [{"n": i, "base": 5 <= i < 25} for i in range(300)]
    kept = charts.latest(points)
    assert [one["n"] for one in kept if one["base"]] == list(range(5, 25))
    assert [one["n"] for one in kept if not one["base"]] == list(range(100, 300))
    assert charts.latest(kept) == kept
