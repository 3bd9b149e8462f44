"""``plan``, ``learn`` and ``backtest``: what they answer, and how they refuse."""

from __future__ import annotations

import copy
import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from app.errors import InputError
from app.verbs.forecast import VERBS

ROOT = Path(__file__).resolve().parents[2]
RANGE = {
    "name": "high",
    "low": 50,
    "high": 900,
    "chloride_limit": 1998,
    "reporting": 20,
    "recipe_mg_mercury": 33.8,
}
RESULT = {
    "at": "2031-03-02T10:15:00-05:00",
    "cod": 2310,
    "state": "ok",
    "field": {"conductivity_us_cm": 1800, "turbidity_ntu": 210},
    "activity": "production",
}
PLAN: dict[str, Any] = {
    "sector": "dairy",
    "history": [RESULT, {"at": "2031-04-02T10:15:00-05:00", "cod": 18000, "state": "over"}],
    "now": {
        "at": "2031-05-02T10:15:00-05:00",
        "field": {"conductivity_us_cm": 1900},
        "activity": "cleaning",
        "chloride": 900,
        "volume_ml": 250,
    },
    "ranges": [RANGE],
    "dilutions": [1, 2, 5, 10, 20, 50, 100],
    "decision_limit": 1500,
    "replicates": 3,
}


def plan_with(path: str, value: Any) -> dict[str, Any]:
    """Return the request with one thing changed."""
    changed = copy.deepcopy(PLAN)
    *way, last = [int(step) if step.isdigit() else step for step in path.split(".")]
    place: Any = changed
    for step in way:
        place = place[step]
    place[last] = value
    return changed


def fields_of(verb: str, value: Any) -> set[str]:
    with pytest.raises(InputError) as caught:
        VERBS[verb](value)
    return set(caught.value.fields)


def run(verb: str, text: str, *more: str) -> subprocess.CompletedProcess[str]:
    command = [sys.executable, "-m", "app", verb, *more]
    return subprocess.run(command, cwd=ROOT, input=text, capture_output=True, text=True, check=False)


def test_a_plan_has_what_the_contract_names() -> None:
    found = VERBS["plan"](PLAN)
    assert set(found) >= {"expected", "plans", "choice", "split", "worth_measuring", "why"}
    quantiles = list(found["expected"]["quantiles"].values())
    assert quantiles == sorted(quantiles)
    assert found["expected"]["median"] == found["expected"]["quantiles"]["0.5"]
    for one in found["plans"]:
        factor = one["dilution_factor"]
        assert one["chloride_after"] == pytest.approx(900 / factor)
        assert one["reporting_after"] == pytest.approx(20 * factor)
        assert one["usable"] == (20 * factor <= 1500)
        assert one["expected_tubes"] == pytest.approx(3 / one["p_in_range"])
        assert one["expected_mercury_mg"] == pytest.approx(33.8 * one["expected_tubes"])
        made = 1.0
        for step in one["steps"]:
            made *= step["flask_ml"] / step["pipette_ml"]
        assert made == pytest.approx(factor)
    usable = [one for one in found["plans"] if one["usable"]]
    assert found["choice"] == min(usable, key=lambda one: one["expected_tubes"])
    assert json.loads(json.dumps(found, allow_nan=False)) == found


def test_glassware_gives_the_dilutions() -> None:
    changed = {**PLAN, "glassware": {"pipettes_ml": [5, 10], "flasks_ml": [50, 100]}}
    del changed["dilutions"]
    factors = [one["dilution_factor"] for one in VERBS["plan"](changed)["plans"]]
    assert factors == [1, 5, 10, 20, 25, 50, 100, 200, 400]


@pytest.mark.parametrize(
    ("path", "value", "named"),
    [
        ("history.0.cod", -5, "history.0.cod"),
        ("history.0.cod", 0, "history.0.cod"),
        ("history.0.cod", True, "history.0.cod"),
        ("history.0.cod", 10**400, "history.0.cod"),
        ("history.0.at", "2031-03-02T10:15:00", "history.0.at"),
        ("history.0.at", "2031-06-02T10:15:00-05:00", "history.0.at"),
        ("history.0.state", "green", "history.0.state"),
        ("history.0.state", [], "history.0.state"),
        ("history.0.activity", "party", "history.0.activity"),
        ("history.0.colour", 3, "history.0.colour"),
        ("history.0.field", {"conductivity_ms_cm": 1.8}, "history.0.field.conductivity_ms_cm"),
        ("history.0.field", {"ph": 70}, "history.0.field.ph"),
        ("history.1", "over", "history.1"),
        ("history", {}, "history"),
        ("now.at", "today", "now.at"),
        ("now.field", {"ph": "7"}, "now.field.ph"),
        ("now.volume_ml", -1, "now.volume_ml"),
        ("ranges", [], "ranges"),
        ("ranges.0.low", 900, "ranges.0.low"),
        ("ranges.0.name", "", "ranges.0.name"),
        ("dilutions", [0.5], "dilutions.0"),
        ("dilutions", [], "dilutions"),
        ("dilutions", None, "dilutions"),
        ("decision_limit", 0, "decision_limit"),
        ("replicates", 0, "replicates"),
        ("programme", {"version": 1}, "programme"),
        ("horoscope", 1, "horoscope"),
    ],
)
def test_what_cannot_be_used_is_named(path: str, value: Any, named: str) -> None:
    assert fields_of("plan", plan_with(path, value)) == {named}


def test_all_bad_fields_are_named_at_once() -> None:
    found = fields_of("plan", {"history": [{"at": "yesterday", "cod": "many"}]})
    assert found == {"history.0.at", "history.0.cod", "now", "ranges"}


@pytest.mark.parametrize("verb", ["plan", "learn", "backtest"])
@pytest.mark.parametrize("value", [None, [], 3, "plan", {}])
def test_another_thing_is_refused(verb: str, value: Any) -> None:
    assert fields_of(verb, value)


def test_a_learnt_programme_travels_with_a_plan() -> None:
    learnt = VERBS["learn"]({"points": [{"sector": "dairy", "history": [RESULT] * 3}]})
    changed = {**PLAN, "programme": json.loads(json.dumps(learnt["programme"]))}
    assert VERBS["plan"](changed)["expected"] != VERBS["plan"](PLAN)["expected"]


def test_a_back_test_has_the_forecast_the_rules_and_the_oracle() -> None:
    history = [
        {**RESULT, "at": f"2031-{month:02d}-02T10:15:00Z", "cod": 900 + 100 * month} for month in range(1, 13)
    ]
    told = {"points": [{"history": history}], "ranges": [RANGE], "dilutions": PLAN["dilutions"]}
    found = VERBS["backtest"](told)
    assert found["n"] == 7
    assert set(found["rules"]) == {"last_value", "median_of_five", "same_dilution"}
    assert found["oracle"]["right"] == 1.0
    assert found["right"] == 1.0
    assert 0 <= found["coverage_50"] <= found["coverage_90"] <= 1


def test_a_reading_far_outside_its_past_is_flagged() -> None:
    history = [{**RESULT, "at": f"2031-03-{day:02d}T10:15:00Z"} for day in range(1, 11)]
    changed = {**PLAN, "history": history}
    changed["now"] = {**PLAN["now"], "field": {"conductivity_us_cm": 900000}}
    found = VERBS["plan"](changed)
    assert found["bounded"] == ["conductivity_us_cm"]
    assert "check the reading" in found["why"]


def test_wrong_input_on_the_command_line() -> None:
    done = run("plan", '{"history":[{"at":"yesterday","cod":"many"}]}')
    assert (done.returncode, done.stdout) == (2, "")
    assert {"history.0.at", "history.0.cod"} <= set(json.loads(done.stderr)["fields"])
    done = run("plan", json.dumps(PLAN).replace("2310", "NaN"))
    assert done.returncode == 2
    assert "Traceback" not in done.stderr


def test_line_by_line_a_bad_line_is_answered_in_its_place() -> None:
    good = json.dumps(PLAN)
    done = run("plan", f'{good}\n{{"history": 3}}\n{good}\n', "--lines")
    first, second, third = [json.loads(line) for line in done.stdout.splitlines()]
    assert done.returncode == 2
    assert "history" in second["fields"]
    assert first == third
