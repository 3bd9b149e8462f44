"""Percentiles, sampling and control charts: monotone, bounded, and refused where nothing can be told."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.control import ewma
from app.compliance.percentiles import (
    chance_of_seeing,
    empirical_percentile,
    lognormal,
    multiplier,
    projected_maximum_multiplier,
    samples_for,
)
from app.errors import InputError

VALUES = st.lists(st.floats(1, 5000), min_size=2, max_size=30)


@given(VALUES, st.floats(0.01, 0.98))
def test_percentile_and_chance_above_are_inverse(values, share):
    """What is exceeded with a chance is the percentile of the rest."""
    found = lognormal(values)
    if found.log_sd > 1e-6:
        assert found.chance_above(found.percentile(share)) == pytest.approx(1 - share, abs=1e-6)


@given(VALUES)
def test_a_tolerance_limit_lies_above_its_percentile(values):
    """Confidence costs."""
    found = lognormal(values)
    assert found.upper_tolerance_limit() >= found.percentile(0.95) * (1 - 1e-9)


def test_the_same_value_throughout():
    """Exceeded surely or never."""
    found = lognormal([500, 500])
    assert (found.chance_above(499), found.chance_above(501)) == (1, 0)


@given(VALUES, st.floats(0, 1))
def test_an_empirical_percentile_lies_between_the_values(values, share):
    """By either definition."""
    for definition in ("linear", "weibull"):
        assert min(values) <= empirical_percentile(values, share, definition) <= max(values)


@given(st.floats(0.1, 2), st.floats(0.05, 0.5))
def test_the_number_of_samples_is_the_least(cv, error):
    """One fewer would not do."""
    from scipy.stats import t

    n = samples_for(cv, error)

    def width(k: int) -> float:
        return float(t.ppf(0.975, k - 1)) * cv / k**0.5

    assert width(n) <= error
    assert n == 2 or width(n - 1) > error


@given(st.floats(0, 2), st.integers(1, 50))
def test_more_samples_raise_the_largest_less(cv, n):
    """And without variation nothing is raised."""
    assert projected_maximum_multiplier(cv, n) >= projected_maximum_multiplier(cv, n + 1) - 1e-12
    assert projected_maximum_multiplier(0, n) == 1
    assert multiplier(0, 0.99) == 1
    assert 0 <= chance_of_seeing(0.1, n) < chance_of_seeing(0.1, n + 1) <= 1


@given(st.lists(st.floats(-100, 100), max_size=30), st.floats(0.05, 1))
def test_an_average_stays_within_what_it_averages(values, weight):
    """Between the centre and the extremes; limits widen to the steady state."""
    found = ewma(values, 0.0, 1.0, weight=weight, steady=False)
    steady = ewma(values, 0.0, 1.0, weight=weight)
    bound = max((abs(v) for v in values), default=0)
    assert all(abs(p) <= bound + 1e-9 for p in found.points)
    assert all(a <= b + 1e-12 for a, b in zip(found.upper, steady.upper, strict=True))
    assert list(found.upper) == sorted(found.upper)


def test_a_shift_is_seen():
    """Two standard deviations for ten results leave the limits."""
    assert ewma([0.0] * 5 + [2.0] * 10, 0.0, 1.0).out != ()


@pytest.mark.parametrize("weight", [0, -0.1, 1.1, float("nan")])
def test_a_weight_is_a_share(weight):
    """Above 0, at most 1."""
    with pytest.raises(InputError):
        ewma([1.0], 0.0, 1.0, weight=weight)


def test_what_cannot_be_described():
    """One value, zero, none, an error that no sampling reaches."""
    for values in ([5], [0, 5], [float("inf"), 5]):
        with pytest.raises(InputError):
            lognormal(values)
    with pytest.raises(InputError):
        empirical_percentile([], 0.5, "linear")
    with pytest.raises(InputError):
        samples_for(1, 1e-9)
    with pytest.raises(InputError):
        samples_for(1, 0)
