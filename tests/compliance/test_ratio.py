"""BOD from COD: intervals widen outward, and the line is suspended when it no longer holds."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.ratio import correlate, drift, suspended
from app.errors import InputError

PAIRS = st.lists(st.tuples(st.integers(1, 5000), st.integers(0, 3000)), min_size=3, max_size=30).filter(
    lambda pairs: len({c for c, _ in pairs}) > 1
)


@given(PAIRS)
def test_the_line_passes_through_the_mean(pairs):
    """Least squares with an intercept."""
    line = correlate(pairs)
    mean = sum(b for _, b in pairs) / len(pairs)
    assert line.at(line.cod_mean).bod == pytest.approx(mean, abs=1e-6)


@given(PAIRS, st.floats(0, 5000))
def test_the_interval_is_narrowest_at_the_mean(pairs, away):
    """And symmetric around it."""
    line = correlate(pairs)
    middle = line.half_width(line.cod_mean)
    assert line.half_width(line.cod_mean + away) >= middle
    assert line.half_width(line.cod_mean + away) == pytest.approx(line.half_width(line.cod_mean - away))


@given(PAIRS, st.floats(0, 10000))
def test_inside_the_range_means_between_the_pairs(pairs, cod):
    """Outside it the number is given and marked."""
    line = correlate(pairs)
    low, high = min(c for c, _ in pairs), max(c for c, _ in pairs)
    assert line.at(cod).inside_range == (low <= cod <= high)


def test_the_same_bod_everywhere_has_no_r_squared():
    """Nothing is explained where nothing varies."""
    line = correlate([(100, 50), (200, 50), (300, 50)])
    assert (line.slope, line.r_squared, line.residual_sd) == (0, None, 0)


@pytest.mark.parametrize(
    "pairs",
    [
        [],
        [(1, 2), (3, 4)],
        [(5, 1), (5, 2), (5, 3)],
        [(5, 1), (5 + 1e-12, 2), (5, 3)],
        [(1, 1), (2, 2), (3, float("nan"))],
        [(1, 1), (2, 2), (-3, 3)],
    ],
)
def test_no_line_from_these(pairs):
    """Too few, all at one COD, no number, negative."""
    with pytest.raises(InputError):
        correlate(pairs)


def test_drift_of_a_perfect_line_is_infinite_or_nothing():
    """Without scatter any gap is too much."""
    line = correlate([(100, 50), (200, 100), (300, 150)])
    assert drift(line, [(200, 100), (200, 101), (200, 99)]) == [0, math.inf, -math.inf]


@pytest.mark.parametrize(
    ("drifts", "stopped"),
    [([], False), ([2.0], False), ([2.0, 0.5, 2.0], False), ([0.5, -1.5, 1.2], True), ([1.0, 1.0], False)],
)
def test_two_in_a_row_outside_suspend(drifts, stopped):
    """On either side; exactly at the interval is inside."""
    assert suspended(drifts) == stopped
