"""The back-test's own sums, on histories small enough to count by hand."""

from __future__ import annotations

import pytest

from app.errors import InputError
from app.forecast import Observation, Programme
from app.forecast.learning import Point
from app.forecast.trust import Shares, backtest
from tests.forecast.made import HIGH, LADDER, walk

START = Programme.default()


def point(*cods: float, state: str = "ok") -> Point:
    """Return a point with these results, the last one of a state."""
    found = [Observation(20000.0 + 30 * i, cod) for i, cod in enumerate(cods)]
    last = found[-1]
    return Point(None, [*found[:-1], Observation(last.days, last.cod, state)])  # type: ignore[arg-type]


def test_rules_of_thumb_by_hand() -> None:
    """Factors 1 and 10, windows 50-900 and 500-9000: the last value says 1:10, the median of five 1:1."""
    found = backtest(START, [point(100, 100, 100, 100, 4000, 150)], (HIGH,), (1.0, 10.0))
    assert found.last_value == Shares(1, 0.0, 0.0, 1.0, 0)
    assert found.median_of_five == Shares(1, 1.0, 0.0, 0.0, 0)
    assert found.same_dilution == Shares(1, 1.0, 0.0, 0.0, 0)
    assert found.oracle == Shares(1, 1.0, 0.0, 0.0, 0)


def test_no_rule_does_better_than_the_oracle() -> None:
    found = backtest(START, [Point(None, walk(80, seed, noise=0.8)) for seed in range(4)], (HIGH,), LADDER)
    best = found.oracle.right
    assert best is not None
    for one in (found.forecast, found.last_value, found.median_of_five, found.same_dilution):
        assert one.right is not None
        assert one.right <= best
        assert one.right + (one.over or 0) + (one.below or 0) == pytest.approx(1.0)


def test_a_bound_that_does_not_tell_is_not_counted() -> None:
    """Less than 400 in the window 50-900 may have been in range or not; less than 50 was not."""
    unknown = backtest(START, [point(200, 200, 200, 200, 200, 400, state="below")], (HIGH,), (1.0,))
    assert unknown.forecast == Shares(0, None, None, None, 1)
    below = backtest(START, [point(200, 200, 200, 200, 200, 50, state="below")], (HIGH,), (1.0,))
    assert below.forecast == Shares(1, 0.0, 0.0, 1.0, 0)
    over = backtest(START, [point(200, 200, 200, 200, 200, 900, state="over")], (HIGH,), (1.0,))
    assert over.forecast == Shares(1, 0.0, 1.0, 0.0, 0)


def test_without_a_result_to_judge_by_there_is_no_share() -> None:
    found = backtest(START, [point(200, 300)], (HIGH,), LADDER)
    assert found.forecast == Shares(0, None, None, None, 0)
    assert (found.measured, found.inside_90, found.log_density) == (0, None, None)


def test_a_back_test_needs_a_ladder() -> None:
    with pytest.raises(InputError):
        backtest(START, [], (HIGH,), ())
    with pytest.raises(InputError):
        backtest(START, [], (HIGH,), LADDER, first=0)


def test_the_intervals_hold_on_points_made_by_the_rules() -> None:
    found = backtest(START, [Point(None, walk(150, seed)) for seed in range(6)], (HIGH,), LADDER, first=20)
    assert found.inside_90 == pytest.approx(0.90, abs=0.04)
    assert found.inside_50 == pytest.approx(0.50, abs=0.08)
