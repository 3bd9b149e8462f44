"""Budgets: what adds, what dominates, and what happens at the edges."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.uncertainty import (
    NORMAL_95,
    Component,
    bias_from_controls,
    combine,
    coverage_factor,
    effective_dof,
)
from app.errors import InputError

parts = st.lists(
    st.tuples(st.floats(1e-6, 1e6), st.none() | st.floats(1.0, 1e4)).map(lambda p: Component("c", *p)),
    min_size=1,
    max_size=6,
)


def test_nothing_uncertain_is_certain() -> None:
    budget = combine((Component("a", 0.0, 3), Component("b", 0.0)))
    assert (budget.u, budget.dof, budget.expanded_u, budget.shares()) == (0.0, None, 0.0, (0.0, 0.0))


@given(parts)
def test_the_whole_is_no_smaller_than_any_part_and_shares_add_up(components) -> None:
    budget = combine(components)
    assert budget.u >= max(c.u for c in components) * (1 - 1e-12)
    assert math.fsum(budget.shares()) == pytest.approx(1.0)


@given(parts)
def test_effective_degrees_of_freedom_lie_between_the_smallest_and_their_sum(components) -> None:
    finite = [c.dof for c in components if c.dof is not None]
    found = combine(components).dof
    if found is not None:
        assert found >= min(finite) * (1 - 1e-9)
    if found is not None and len(finite) == len(components):
        assert found <= math.fsum(finite) * (1 + 1e-9)


@given(parts, st.floats(1e-6, 1e6))
def test_the_unit_does_not_matter(components, factor) -> None:
    scaled = [Component(c.name, c.u * factor, c.dof) for c in components]
    one, two = combine(components), combine(scaled)
    assert two.u == pytest.approx(factor * one.u)
    assert two.coverage_factor == pytest.approx(one.coverage_factor, rel=1e-2)


def test_above_a_million_counts_as_infinite() -> None:
    assert effective_dof(1.0, [Component("a", 1.0, 1e6 * 1.001)]) is None
    assert effective_dof(1.0, [Component("a", 1.0, 999_999.0)]) == pytest.approx(999_999.0)


@pytest.mark.parametrize(("dof", "as_if"), [(0.4, 1), (1.9, 1), (18.9994, 18), (18.9995001, 19), (19.0, 19)])
def test_degrees_of_freedom_are_rounded_to_three_decimals_and_truncated(dof: float, as_if: int) -> None:
    assert coverage_factor(dof) == coverage_factor(float(as_if))


@given(st.floats(1.0, 9e5), st.floats(1.0, 9e5))
def test_fewer_degrees_of_freedom_never_give_a_smaller_factor(one: float, other: float) -> None:
    low, high = sorted((one, other))
    assert coverage_factor(low) >= coverage_factor(high) >= NORMAL_95


def test_wrong_control_samples_are_named() -> None:
    with pytest.raises(InputError) as refused:
        bias_from_controls([-1.0], 2.0)
    assert set(refused.value.fields) == {"recoveries_percent", "recoveries_percent.0", "reference_relative_u"}


def test_twenty_control_samples_are_enough() -> None:
    assert bias_from_controls([100.0, 102.0] * 10).enough
    assert not bias_from_controls([100.0] * 19).enough
