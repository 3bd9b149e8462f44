"""Splits: the sign is kept, both sides may be wrong, and few pairs are only listed."""

from __future__ import annotations

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.compliance.compare import deming, differences, passing_bablok, signed_rank, signed_rpd_percent
from app.errors import InputError

PAIRS = st.lists(st.tuples(st.integers(1, 2000), st.integers(1, 2000)), min_size=10, max_size=25)


@given(st.floats(1, 1e5), st.floats(1, 1e5))
def test_the_difference_keeps_its_sign(a, b):
    """Swapping the two turns it around."""
    assert signed_rpd_percent(a, b) == pytest.approx(-signed_rpd_percent(b, a))
    assert abs(signed_rpd_percent(a, b)) <= 200


@given(PAIRS)
def test_swapping_the_laboratories_turns_every_difference(pairs):
    """Bias is symmetric: mean, limits and ratio turn around."""
    one, other = differences(pairs), differences([(b, a) for a, b in pairs])
    assert one.mean_percent == pytest.approx(-other.mean_percent, abs=1e-9)
    assert one.low_percent == pytest.approx(-other.high_percent, abs=1e-9)
    assert one.ratio == pytest.approx(1 / other.ratio)
    assert one.same_sign == other.same_sign


@given(st.floats(0.5, 2), st.lists(st.integers(10, 2000), min_size=10, max_size=20, unique=True))
def test_a_proportional_difference_is_found_exactly(factor, own):
    """Without scatter Deming and Passing-Bablok agree on slope and no intercept."""
    pairs = [(x, factor * x) for x in own]
    for line in (deming(pairs), passing_bablok(pairs)):
        assert line.slope == pytest.approx(factor)
        assert line.intercept == pytest.approx(0, abs=1e-6)


@given(st.permutations(range(14)), st.lists(st.integers(-900, 900), min_size=14, max_size=14))
def test_passing_bablok_is_symmetric(order, noise):
    """Swapping the sides inverts the interval (Passing and Bablok 1983): slopes under -1 shift the median."""
    pairs = [(1000.0 + 100 * i, 1000.0 + 100 * i + noise[k] + 0.001 * k) for k, i in enumerate(order)]
    try:
        one, other = passing_bablok(pairs), passing_bablok([(b, a) for a, b in pairs])
    except InputError:
        return
    low, high = one.slope_interval
    assume(low > 1e-6)
    assert other.slope_interval == pytest.approx((1 / high, 1 / low))


@given(PAIRS)
def test_deming_is_symmetric(pairs):
    """With equal errors, swapping the sides inverts the slope: ordinary least squares would not."""
    try:
        one, other = deming(pairs), deming([(b, a) for a, b in pairs])
    except InputError:
        return
    assume(abs(one.slope) > 1e-6)
    assert one.slope == pytest.approx(1 / other.slope, rel=1e-6)


@pytest.mark.parametrize(
    ("gaps", "asked"),
    [([30, 30, 30], True), ([30, -30, 30, 30], False), ([30, 30, 5, 30], False), ([-30, -40, -50], True)],
)
def test_three_of_one_sign_in_a_row_call_for_a_question(gaps, asked):
    """Beyond the duplicate limit, on one side, one after another."""
    pairs = [(1000, 1000 * (200 + g) / (200 - g)) for g in gaps]
    assert differences(pairs).same_sign == asked


def test_one_pair_says_what_one_pair_can():
    """A difference; no limits, no test."""
    found = differences([(500, 550)])
    assert (found.n, found.low_percent, found.t, found.ratio_low) == (1, None, None, None)
    assert found.ratio == pytest.approx(1.1)


def test_identical_results_have_no_test():
    """No spread, no t; no gaps, p of 1."""
    assert differences([(500, 500)] * 3).t is None
    assert signed_rank([(500, 500)] * 3) == (0, 1)


def test_nine_pairs_are_only_listed():
    """A line needs ten."""
    pairs = [(100 * i, 100 * i + i) for i in range(1, 10)]
    for fit in (deming, passing_bablok):
        with pytest.raises(InputError) as caught:
            fit(pairs)
        assert caught.value.fields["pairs"] == ["needs at least 10"]


def test_what_cannot_be_compared():
    """Zeros, no numbers, one inspector's value throughout, too many for exact ranks."""
    with pytest.raises(InputError) as caught:
        differences([(0, 5), (5, float("nan"))])
    assert set(caught.value.fields) == {"pairs.0.own", "pairs.1.other"}
    with pytest.raises(InputError):
        signed_rpd_percent(0, 0)
    with pytest.raises(InputError):
        deming([(100, i + 1) for i in range(10)])
    with pytest.raises(InputError):
        passing_bablok([(100, i + 1) for i in range(10)])
    with pytest.raises(InputError):
        passing_bablok([(100, 100)] * 10)
    with pytest.raises(InputError):
        signed_rank([(100, 100 + i) for i in range(1, 102)])
