"""Values below a bound: a bound is never read as its number, and conventions are stated."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.nondetects import advised, average, kaplan_meier, ros
from app.errors import InputError

VALUES = st.lists(st.tuples(st.integers(1, 500), st.booleans()), min_size=4, max_size=30).filter(
    lambda rows: len({v for v, b in rows if not b}) > 1
)


@given(VALUES)
def test_only_what_lies_below_a_bound_is_filled_in(rows):
    """As many imputed values as bounds, all above zero; measured values stay."""
    values, below = [float(v) for v, _ in rows], [b for _, b in rows]
    found = ros(values, below)
    assert len(found.imputed) == sum(below)
    assert all(v > 0 and math.isfinite(v) for v in found.imputed)
    whole = [v for v, b in rows if not b] + list(found.imputed)
    assert found.mean == pytest.approx(sum(whole) / len(whole))


@given(VALUES)
def test_without_bounds_both_ways_give_the_plain_numbers(rows):
    """Nothing below: the mean is the mean."""
    values, below = [float(v) for v, _ in rows], [False] * len(rows)
    assert ros(values, below).mean == pytest.approx(np.mean(values))
    assert kaplan_meier(values, below).mean == pytest.approx(np.mean(values))
    assert kaplan_meier(values, below).sd == pytest.approx(np.std(values))
    assert kaplan_meier(values, below).unplaced == pytest.approx(0, abs=1e-12)


@given(VALUES)
def test_the_conventions_stand_in_their_order(rows):
    """Zero gives the lowest mean, and every mean lies within the values."""
    values, below = [float(v) for v, _ in rows], [b for _, b in rows]
    zero, detect = (kaplan_meier(values, below, place).mean for place in ("zero", "smallest detect"))
    assert 0 <= zero <= detect + 1e-9
    assert detect <= max(values)


@given(VALUES, st.floats(0.01, 1))
def test_a_percentile_is_a_measured_value_or_not_known(rows, share):
    """Below the smallest measured value nothing is claimed."""
    values, below = [float(v) for v, _ in rows], [b for _, b in rows]
    found = kaplan_meier(values, below)
    percentile = found.percentile(share)
    assert (percentile is None) == (share <= found.unplaced)
    assert percentile is None or percentile in found.values


@given(VALUES)
def test_averages_by_the_three_shares_stand_in_their_order(rows):
    """Zero, half, all."""
    values, below = [float(v) for v, _ in rows], [b for _, b in rows]
    zero, half, limit = (average(values, below, rule).value for rule in ("zero", "half", "limit"))
    assert zero <= half <= limit
    assert half == pytest.approx((zero + limit) / 2)


def test_the_median_rule_orders_bounds_first():
    """An odd and an even count; without bounds it is the plain mean."""
    assert str(average([10, 40, 50], [True, False, False], "median")) == "40"
    assert str(average([10, 40], [True, False], "median")) == "< 10"
    assert str(average([10, 40], [False, False], "median")) == "25"


@pytest.mark.parametrize(
    ("below", "way"), [(0, "kaplan-meier"), (4, "kaplan-meier"), (5, "ros"), (8, "ros"), (9, "share above")]
)
def test_which_way_for_which_share(below, way):
    """Under a half, up to four fifths, beyond."""
    assert advised([1.0] * 10, [True] * below + [False] * (10 - below)) == way


@pytest.mark.parametrize(
    ("values", "below"),
    [
        ([1, 2], [True, True]),
        ([1, 2, 3], [True, True, False]),
        ([5, 5, 1], [False, False, True]),
        ([0, 2, 3], [False, False, False]),
        ([1, float("nan"), 3], [False] * 3),
        ([1, 2, 3], [False] * 2),
    ],
)
def test_what_ros_cannot_fill(values, below):
    """Nothing or one measured, all the same, zero, no number, unequal lengths."""
    with pytest.raises(InputError):
        ros(values, below)


def test_nothing_measured_has_no_distribution():
    """And nothing at all has no average."""
    with pytest.raises(InputError):
        kaplan_meier([1, 2], [True, True])
    with pytest.raises(InputError):
        average([], [], "zero")
