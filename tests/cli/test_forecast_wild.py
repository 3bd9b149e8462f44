"""Whatever a script sends to ``plan``, ``learn`` or ``backtest``: an answer, or every bad field by name."""

from __future__ import annotations

import copy
import json
import math
from datetime import UTC, datetime, timedelta
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import InputError
from app.verbs.forecast import VERBS

BEGAN = datetime(2030, 1, 7, 15, 0, tzinfo=UTC)
RANGE = {"name": "high", "low": 50, "high": 900}


def result(day: float, cod: Any, **more: Any) -> dict[str, Any]:
    return {"at": (BEGAN + timedelta(days=day)).isoformat(), "cod": cod, **more}


def request(history: list[Any], field: dict[str, Any] | None = None) -> dict[str, Any]:
    """Return what ``plan`` reads, four years after the first result."""
    now = {"at": (BEGAN + timedelta(days=1500)).isoformat(), "field": field or {}}
    return {"history": history, "now": now, "ranges": [RANGE], "dilutions": [1, 2, 5, 10, 20, 50, 100]}


def bad_fields(verb: str, value: Any) -> set[str]:
    with pytest.raises(InputError) as caught:
        VERBS[verb](value)
    return set(caught.value.fields)


anything = st.recursive(
    st.none()
    | st.booleans()
    | st.integers(-(10**400), 10**400)
    | st.floats()
    | st.sampled_from(["", "ok", "over", "2031-01-12T09:00:00-06:00", "0001-01-01T00:00:00+23:59", "\ud800"])
    | st.text(max_size=8),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=8), inner, max_size=3),
    max_leaves=6,
)
WHOLE = {
    **request([result(0, 2300, state="ok", field={"ph": 7.0, "conductivity_us_cm": 1800}), result(9, 40)]),
    "sector": "dairy",
    "decision_limit": 1500,
    "replicates": 3,
    "glassware": {"pipettes_ml": [5, 10], "flasks_ml": [50, 100]},
    "programme": None,
}
PLACES = (
    *((key,) for key in WHOLE),
    *(("history", 0, key) for key in ("at", "cod", "state", "field", "activity")),
    *(("history", 0, "field", key) for key in ("ph", "turbidity_ntu")),
    *(("now", key) for key in ("at", "field", "activity", "chloride", "volume_ml", "solids")),
    *(("ranges", 0, key) for key in ("name", "low", "high", "chloride_limit", "reporting")),
    *(("glassware", key) for key in ("pipettes_ml", "flasks_ml")),
)


@given(st.lists(st.tuples(st.sampled_from(PLACES), anything), min_size=1, max_size=3))
@settings(max_examples=300)
def test_no_plan_ends_in_a_traceback(changes: list[tuple[tuple[Any, ...], Any]]) -> None:
    told = copy.deepcopy(WHOLE)
    for (*way, last), value in changes:
        place: Any = told
        for step in way:
            try:
                place = place[step]
            except (KeyError, IndexError, TypeError):
                place = {}
        if isinstance(place, (dict, list)) and (isinstance(place, dict) or place):
            place[last] = value
    try:
        found = VERBS["plan"](told)
    except InputError as error:
        assert error.fields
    else:
        json.dumps(found, allow_nan=False)


@given(st.sampled_from(["plan", "learn", "backtest"]), anything)
def test_another_thing_altogether_is_refused_with_its_fields(verb: str, value: Any) -> None:
    assert bad_fields(verb, value)


@given(
    st.lists(st.tuples(st.floats(0, 1500), st.floats(1e-3, 1e8), st.sampled_from(["ok", "over", "below"])))
)
@settings(max_examples=60)
def test_any_possible_history_in_any_order_gives_rising_quantiles_and_chances_that_sum(
    told: list[tuple[float, float, str]],
) -> None:
    found = VERBS["plan"](request([result(day, cod, state=state) for day, cod, state in told]))
    quantiles = list(found["expected"]["quantiles"].values())
    assert quantiles == sorted(quantiles)
    assert all(0 < one < math.inf for one in quantiles)
    for one in found["plans"]:
        assert one["p_in_range"] + one["p_over"] + one["p_below"] == pytest.approx(1.0, abs=1e-9)


def test_times_out_of_order_are_put_in_order() -> None:
    history = [result(day, 500 + 10 * day) for day in range(0, 600, 30)]
    assert VERBS["plan"](request(history[::-1]))["expected"] == VERBS["plan"](request(history))["expected"]


@pytest.mark.parametrize(("state", "side"), [("over", 1), ("below", -1)])
def test_a_history_of_one_bound_moves_the_choice_to_its_side(state: str, side: int) -> None:
    """From the wide start (median 1500), 45000 is far above and 20 far below."""
    nothing = VERBS["plan"](request([]))
    found = VERBS["plan"](request([result(1400, 45000 if side > 0 else 20, state=state)]))
    assert side * (found["expected"]["median"] - nothing["expected"]["median"]) > 0
    assert side * (found["choice"]["dilution_factor"] - nothing["choice"]["dilution_factor"]) >= 0


def test_a_script_that_is_wrong_in_many_ways_is_told_all_at_once() -> None:
    history = [
        result(0, -3),
        result(1, 700, field={"conductivity_ms_cm": 1.8, "ph": 71}),
        result(2, 700, unit="g/L"),
        {"cod": 5},
    ]
    told = request(history, {"turbidity_jtu": 4}) | {"dilutions": [0, 2, "x"], "ranges": [{"name": "high"}]}
    assert bad_fields("plan", told) == {
        "history.0.cod",
        "history.1.field.conductivity_ms_cm",
        "history.1.field.ph",
        "history.2.unit",
        "history.3.at",
        "now.field.turbidity_jtu",
        "dilutions.0",
        "dilutions.2",
        "ranges.0.low",
        "ranges.0.high",
    }
    points = [{"history": history}, {"history": [], "town": "x"}]
    named = {"points.0.history.0.cod", "points.0.history.3.at", "points.1.town"}
    assert named <= bad_fields("learn", {"points": points})
    assert named | {"ranges", "dilutions"} <= bad_fields("backtest", {"points": points})


def test_ten_thousand_results_are_planned_from() -> None:
    history = [result(i / 8, 2000 + 500 * math.sin(i / 40)) for i in range(10000)]
    assert VERBS["plan"](request(history))["choice"]["dilution_factor"] in (5, 10)
    assert set(bad_fields("plan", request(history * 3))) == {"history"}


def test_a_reading_far_out_pulls_no_farther_than_its_bound() -> None:
    history = [result(20 * i, 2000 + 30 * i, field={"turbidity_ntu": 80 + i}) for i in range(12)]
    far, farther = (VERBS["plan"](request(history, {"turbidity_ntu": one})) for one in (90000, 900000))
    assert far["bounded"] == ["turbidity_ntu"]
    assert far["expected"] == farther["expected"]
