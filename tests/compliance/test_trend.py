"""Trend: real dates, any order, ties and bounds as what they are."""

from __future__ import annotations

import math
from datetime import UTC, datetime, timedelta
from itertools import permutations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.trend import (
    exact_p,
    kendall_s,
    kendall_variance,
    kendall_z,
    mann_kendall,
    recode,
    seasonal_kendall,
)
from app.errors import InputError

DAY_0 = datetime(2031, 1, 1, tzinfo=UTC)
SERIES = st.lists(
    st.tuples(st.integers(0, 4000), st.integers(0, 60)), min_size=3, max_size=30, unique_by=lambda x: x[0]
)


def times(days: list[int]) -> list[datetime]:
    """Return times some days after the first."""
    return [DAY_0 + timedelta(days=d) for d in days]


@given(SERIES, st.randoms())
def test_the_order_given_never_matters(series, random):
    """Values are put in order of time first."""
    shuffled = list(series)
    random.shuffle(shuffled)
    one, other = (mann_kendall(times([d for d, _ in s]), [v for _, v in s]) for s in (series, shuffled))
    assert one == other


@given(SERIES)
def test_turning_time_around_turns_the_trend(series):
    """S and slope change sign, p does not."""
    days, values = [d for d, _ in series], [v for _, v in series]
    one, other = mann_kendall(times(days), values), mann_kendall(times([4000 - d for d in days]), values)
    assert (one.s, one.p, one.variance) == (-other.s, other.p, other.variance)
    assert one.sen_slope_per_day == pytest.approx(-other.sen_slope_per_day)


@given(SERIES, st.floats(0.1, 10), st.floats(-5, 5))
def test_a_straight_line_added_is_found_again_in_the_slope(series, scale, tilt):
    """Sen's slope is equivariant: scaled values scale it, an added line adds to it."""
    days, values = [d for d, _ in series], [v for _, v in series]
    one = mann_kendall(times(days), values).sen_slope_per_day
    other = mann_kendall(times(days), [scale * v + tilt * d for d, v in series]).sen_slope_per_day
    assert other == pytest.approx(scale * one + tilt, abs=1e-6)


def test_uneven_spacing_uses_real_days():
    """By index the slope would be 10; by day it is 1."""
    assert mann_kendall(times([0, 10, 20, 30]), [0, 10, 20, 30]).sen_slope_per_day == pytest.approx(1)


def test_the_exact_distribution_by_counting_every_order():
    """All 120 orders of five values, and all 24 of four."""
    for n in (4, 5):
        counts = [kendall_s(p) for p in permutations(range(n))]
        for s in set(counts):
            side = sum(c >= s for c in counts) if s >= 0 else sum(c <= s for c in counts)
            assert exact_p(s, n) == pytest.approx(side / math.factorial(n))


def test_the_variance_is_the_one_over_every_order_also_with_ties():
    """Var S under no trend is the mean of S squared over all orders of the values given."""
    values = (1, 1, 2, 3, 3)
    squares = [kendall_s(p) ** 2 for p in permutations(values)]
    assert kendall_variance(values) == pytest.approx(sum(squares) / len(squares))


def test_all_the_same_is_no_trend():
    """No variance, no division by it."""
    found = mann_kendall(times([0, 1, 2, 3]), [5, 5, 5, 5])
    assert (found.s, found.variance, found.z, found.p, found.sen_slope_per_day) == (0, 0, 0, 1, 0)
    assert kendall_z(0, 10) == (0, 1)


def test_the_exact_p_is_given_only_where_it_holds():
    """Under ten values and without ties."""
    assert mann_kendall(times([0, 1, 2]), [1, 2, 3]).p_exact == pytest.approx(2 / 6)
    assert mann_kendall(times([0, 1, 2]), [1, 2, 2]).p_exact is None
    assert mann_kendall(times(list(range(10))), list(range(10))).p_exact is None


def test_a_season_hides_what_the_seasonal_test_finds():
    """Every month rises from year to year while each year falls: plainly counted it looks falling."""
    days, values, seasons = [], [], []
    for year in range(6):
        for month in range(12):
            days.append(365 * year + 30 * month)
            values.append(100.0 * (11 - month) + year)
            seasons.append(month)
    assert mann_kendall(times(days), values).s < 0
    found = seasonal_kendall(times(days), values, seasons)
    assert found.p < 0.001
    assert found.slope_per_day * 365 == pytest.approx(1)


def test_seasons_with_one_value_compare_nothing():
    """They are not counted, and without any pair there is no slope."""
    found = seasonal_kendall(times([0, 30, 60]), [1, 2, 3], ["a", "b", "c"])
    assert (found.seasons, found.slope_per_day, found.p) == (0, None, 1)


def test_values_below_a_bound_become_one_tie():
    """Everything under the highest bound ties just under it; what is above stays."""
    coded = recode([5, 30, 20, 20, 12], [False, False, True, False, True])
    assert coded[0] == coded[2] == coded[4] < 20
    assert coded[1] == 30 and coded[3] == 20
    assert recode([1, 2], [False, False]) == [1, 2]


def test_what_has_no_trend_to_tell():
    """A naive time, one time twice, no number, too few; each named."""
    with pytest.raises(InputError) as caught:
        mann_kendall([datetime(2031, 1, 1), DAY_0, DAY_0], [1, float("nan"), 3])
    assert set(caught.value.fields) == {"values.0.at", "values.1.value", "values.2.at"}
    with pytest.raises(InputError):
        mann_kendall(times([0, 1]), [1, 2])
    with pytest.raises(InputError):
        mann_kendall(times(list(range(5001))), [0.0] * 5001)
