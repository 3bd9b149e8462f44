"""Glassware chains, and the rule for the next dilution that knows only one tube."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.advice import LADDER, Seen, advise, next_dilution_by_rule
from app.chemistry.glassware import Step, chain_factor, chain_relative_u, tolerance_ml
from app.errors import InputError

factors = st.sampled_from(LADDER)


def seen(status: str, factor: float, in_tube: float | None, exhausted: bool = False) -> Seen:
    return Seen("S", status, factor, in_tube, exhausted, 20.0, 900.0)


@given(factors, st.floats(900.0, 1000.0))
def test_a_readable_tube_over_range_lands_in_the_range_next(factor: float, in_tube: float) -> None:
    found = next_dilution_by_rule(seen("over", factor, in_tube))
    assert 20.0 < factor * in_tube / found.dilution_factor <= 450.0 * (1 + 1e-9)


@given(factors, st.none() | st.floats(0.0, 1e4))
def test_an_exhausted_tube_asks_for_at_least_ten_times_more(factor: float, in_tube: float | None) -> None:
    found = next_dilution_by_rule(seen("over", factor, in_tube, exhausted=True))
    assert found.dilution_factor >= 10 * factor


@given(factors, st.none() | st.floats(-50.0, 19.99))
def test_a_repeat_after_below_cannot_go_over(factor: float, in_tube: float | None) -> None:
    found = next_dilution_by_rule(seen("below", factor, in_tube))
    assert 1 <= found.dilution_factor <= factor
    assert 20.0 * factor / found.dilution_factor <= 900.0 * (1 + 1e-9)


def test_an_undiluted_sample_below_the_range_is_reported() -> None:
    found = advise(seen("below", 1.0, 5.0))
    assert (found.action, found.dilution_factor) == ("accept the bound", None)


def test_tubes_that_disagree_are_digested_again_at_the_same_dilution() -> None:
    assert next_dilution_by_rule(seen("disagree", 10.0, 300.0)) is None
    found = advise(seen("disagree", 10.0, 300.0))
    assert (found.action, found.dilution_factor) == ("digest again", 10.0)


def test_a_rule_that_knows_nothing_still_leaves_advice() -> None:
    assert advise(seen("over", 10.0, 950.0), lambda _: None).action == "dilute more"
    assert advise(seen("below", 10.0, 5.0), lambda _: None).action == "accept the bound"


def test_steps_that_do_not_dilute_are_named() -> None:
    with pytest.raises(InputError) as refused:
        chain_factor([Step(10, 100), Step(100, 10), Step(0, 10)])
    assert set(refused.value.fields) == {"steps.1", "steps.2"}


@pytest.mark.parametrize(
    ("vessel", "size", "standard"), [("pipette", 7, "ASTM"), ("pipette", 3, "ISO"), ("flask", 300, "ISO")]
)
def test_a_size_that_no_standard_has_is_refused(vessel, size, standard) -> None:
    with pytest.raises(InputError) as refused:
        tolerance_ml(vessel, size, standard)
    assert list(refused.value.fields) == [f"{vessel}_ml"]


@given(st.lists(st.sampled_from([(10, 100), (5, 50), (25, 250), (1, 10), (50, 100)]), max_size=4))
def test_a_chain_is_the_product_of_its_steps(pairs) -> None:
    steps = [Step(*pair) for pair in pairs]
    assert chain_factor(steps) == pytest.approx(math.prod(f / p for p, f in pairs))
    assert chain_relative_u(steps) ** 2 == pytest.approx(sum(chain_relative_u([s]) ** 2 for s in steps))
    assert chain_relative_u(steps, shape="rectangular") == pytest.approx(2**0.5 * chain_relative_u(steps))
