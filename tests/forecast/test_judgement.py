"""A back-test in words: counts that add up, and a judgement that the counts bear out."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.forecast import Observation, Programme
from app.forecast.judgement import LEAST, judge
from app.forecast.learning import Point
from app.forecast.trust import Shares, Trust, backtest, backtest_each
from tests.forecast.made import HIGH, LADDER, walk

START = Programme.default()


def trust(n: int, right: int, same: int, inside: int) -> Trust:
    """Return a back-test of n results with so many right, by the forecast and by one dilution."""
    shares = {k: Shares(n, k / n if n else None, 0.0, 1 - k / n if n else None, 0) for k in (right, same, n)}
    rest = (shares[same], shares[same], shares[same], shares[n])
    return Trust(shares[right], *rest, n, 0.5, inside / n if n else None, -1.0)


def test_few_results_allow_no_judgement() -> None:
    found = judge(trust(LEAST - 1, 7, 0, 7))
    assert found.predictable is None
    assert found.words == ("Too few results to judge: 7 results could be forecast from what came before.",)


def test_a_point_where_one_dilution_does_as_well_is_not_predictable() -> None:
    found = judge(trust(20, 11, 12, 18))
    assert found.predictable is False
    assert "right 11 times of 20" in found.words[0]
    assert "the same dilution 12 times" in found.words[0]
    assert judge(trust(20, 13, 12, 18)).predictable is True
    assert judge(trust(20, 17, 20, 18)).predictable is True


@pytest.mark.parametrize(("inside", "narrow"), [(18, False), (14, False), (13, True), (9, True)])
def test_a_range_is_called_narrow_when_chance_does_not_explain_it(inside: int, narrow: bool) -> None:
    """Of 20 at nine in ten, 14 or fewer come by chance in 1.1 %, 13 or fewer in 0.24 % (binomial tables)."""
    found = judge(trust(20, 18, 10, inside))
    assert f"held {inside} of 20 values" in found.words[1]
    assert ("too narrow" in found.words[1]) == narrow


def test_a_range_that_holds_far_too_much_is_called_wide() -> None:
    """All of 60 come by chance in 0.18 % at nine in ten, all of 30 in 4.2 %."""
    assert "wider than it need be" in judge(trust(60, 50, 10, 60)).words[1]
    assert "as it should" in judge(trust(30, 25, 10, 30)).words[1]


def test_the_parts_of_a_back_test_are_the_back_tests_of_the_parts() -> None:
    points = [Point(None, walk(20, seed)) for seed in range(3)]
    together, each = backtest_each(START, points, (HIGH,), LADDER)
    assert together == backtest(START, points, (HIGH,), LADDER)
    assert each == [backtest(START, [one], (HIGH,), LADDER) for one in points]
    assert sum(judge(one).forecast.right for one in each) == judge(together).forecast.right


def test_what_swings_without_a_pattern_is_told_as_not_predictable() -> None:
    wild = [
        replace(one, cod=(80.0, 30000.0, 900.0, 4.0, 90000.0)[(7 * i * i + i) % 5], field={})
        for i, one in enumerate(walk(40))
    ]
    assert judge(backtest(START, [Point(None, wild)], (HIGH,), LADDER)).predictable is False
    calm = [Observation(one.days, 2000.0 + i % 7) for i, one in enumerate(walk(40))]
    assert judge(backtest(START, [Point(None, calm)], (HIGH,), LADDER)).predictable is True
