"""Loads: the estimates agree where they must, and a sampled day needs its own flow."""

from __future__ import annotations

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from app.compliance.loads import estimate, expected_relative_error, load_of
from app.errors import InputError

FLOWS = st.lists(st.floats(1, 1e4), min_size=2, max_size=40)


@given(FLOWS, st.just(0.0) | st.floats(0.01, 5000), st.data())
def test_a_constant_concentration_gives_its_load_exactly(flows, cod, data):
    """Whatever is sampled: load = C x Q, without error."""
    days = data.draw(st.sets(st.integers(1, len(flows)), min_size=2))
    found = load_of(flows, [(d, cod) for d in days])
    truth = cod * sum(flows) / 1000
    assert found.ratio_kg == pytest.approx(truth)
    assert found.beale_kg == pytest.approx(truth)
    assert found.flow_weighted_mean == pytest.approx(cod)
    assert found.relative_standard_error in (None, pytest.approx(0, abs=1e-6))


@given(FLOWS, st.data())
def test_sampling_every_day_leaves_no_error(flows, data):
    """Theta is 0: the ratio estimate is the sum."""
    cods = data.draw(st.lists(st.floats(1, 5000), min_size=len(flows), max_size=len(flows)))
    found = load_of(flows, list(enumerate(cods, 1)))
    total = sum(q * c for q, c in zip(flows, cods, strict=True)) / 1000
    assert found.ratio_kg == pytest.approx(total) == found.beale_kg
    assert found.relative_standard_error == 0


@given(FLOWS, st.data(), st.floats(0.1, 10))
def test_the_load_scales_with_the_flow(flows, data, factor):
    """Twice the water at the same strength is twice the load, with the same relative error."""
    days = data.draw(st.lists(st.integers(1, len(flows)), min_size=2, unique=True))
    samples = [(d, data.draw(st.floats(10, 5000))) for d in days]
    one, other = load_of(flows, samples), load_of([q * factor for q in flows], samples)
    assert other.beale_kg == pytest.approx(one.beale_kg * factor)
    assert other.relative_standard_error == pytest.approx(one.relative_standard_error, abs=1e-7)


def test_what_few_samples_can_say():
    """One: a ratio only. Two: no interval. Five: weak."""
    flows = [100.0, 120.0, 90.0, 110.0, 130.0, 95.0]
    one = load_of(flows, [(1, 500)])
    assert (one.beale_kg, one.relative_standard_error, one.interval_kg) == (None, None, None)
    assert load_of(flows, [(1, 500), (2, 700)]).interval_kg is None
    five = load_of(flows, [(d, 500 + 40 * d) for d in range(1, 6)])
    assert five.interval_kg is not None and five.weak
    assert not load_of(flows, [(d, 500) for d in range(1, 7)]).weak


def test_days_without_flow():
    """No discharge on other days adds nothing; on every sampled day there is no ratio."""
    found = load_of([100, 0, 0, 100], [(1, 500), (2, 900), (4, 500)])
    assert found.ratio_kg == pytest.approx(100)
    with pytest.raises(InputError):
        load_of([100, 0], [(2, 900)])


def test_no_cod_at_all_is_no_load():
    """Zero, and no relative error of nothing."""
    found = load_of([100, 120, 90], [(1, 0), (2, 0), (3, 0)])
    assert (found.ratio_kg, found.beale_kg, found.relative_standard_error) == (0, 0, None)


def test_missing_flows_are_filled_counted_and_qualified():
    """The mean of the known days; more than a fifth is qualified."""
    found = load_of([100, None, 200, 150, 150], [(1, 500), (3, 500)])
    assert (found.filled, found.flow_m3, found.qualified) == (1, 750, False)
    assert load_of([100, None, None, 150, 150], [(1, 500)]).qualified


def test_every_bad_sample_is_named():
    """Outside the record, twice, without flow, negative."""
    with pytest.raises(InputError) as caught:
        load_of([100, None, 100], [(4, 1), (1, 1), (1, 2), (2, 5), (3, -1), (0, 3)])
    assert set(caught.value.fields) == {
        "samples.0.day",
        "samples.2.day",
        "samples.3.day",
        "samples.4.cod",
        "samples.5.day",
    }


@pytest.mark.parametrize(
    ("flows", "loads"),
    [([], {}), ([None], {1: 5}), ([-1, 5], {2: 5}), ([5], {}), ([5], {2: 5}), ([5], {1: float("nan")})],
)
def test_what_cannot_be_estimated(flows, loads):
    """No flow known, negative flow, nothing sampled, a day outside, no number."""
    with pytest.raises(InputError):
        estimate(flows, loads)


@given(st.floats(1e-300, 1e-290), st.floats(1, 1e9))
def test_absurdly_small_flows_give_finite_numbers(flow, cod):
    """Nothing is squared before it is scaled."""
    assume(flow > 0)
    found = load_of([flow, 2 * flow, 3 * flow], [(1, cod), (2, cod / 2), (3, cod)])
    assert found.relative_standard_error == 0


def test_more_samples_never_widen_the_expected_error():
    """And sampling every day leaves none."""
    errors = [expected_relative_error(0.5, n, 30)[0] for n in range(1, 31)]
    assert errors == sorted(errors, reverse=True) and errors[-1] == 0
    with pytest.raises(InputError):
        expected_relative_error(0.5, 31, 30)
