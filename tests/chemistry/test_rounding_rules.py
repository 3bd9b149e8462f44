"""Rounding: once, idempotent, monotone, and bounds that stay bounds."""

from __future__ import annotations

import math
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.rounding import bound_text, plain, reported_cod, reported_u, significant

numbers = st.floats(-1e9, 1e9, allow_nan=False)


@given(numbers)
def test_rounding_a_reported_number_changes_nothing(value: float) -> None:
    once = reported_cod(value)
    assert reported_cod(float(once)) == once
    assert reported_u(float(reported_u(abs(value)))) == reported_u(abs(value))


@given(numbers, st.integers(1, 6))
def test_rounding_moves_by_at_most_half_of_the_last_figure(value: float, digits: int) -> None:
    rounded = significant(value, digits)
    exact = Decimal(repr(value))
    last = Decimal(1).scaleb(exact.adjusted() - digits + 1) if exact else Decimal(1)
    assert abs(rounded - exact) <= last / 2
    assert len(rounded.as_tuple().digits) <= digits


@given(numbers, numbers, st.integers(1, 5))
def test_rounding_keeps_the_order(a: float, b: float, digits: int) -> None:
    low, high = sorted((a, b))
    assert significant(low, digits) <= significant(high, digits)


@given(numbers)
def test_plain_text_has_no_exponent_and_is_the_same_number(value: float) -> None:
    text = plain(reported_cod(value))
    assert "e" not in text.lower()
    assert Decimal(text) == reported_cod(value)


@given(st.floats(0.01, 2000.0), st.floats(1.0, 1000.0))
def test_a_bound_never_claims_more_than_is_known(in_tube: float, factor: float) -> None:
    exact = Decimal(repr(in_tube)) * Decimal(repr(factor))
    below, above = (Decimal(bound_text(sign, in_tube, factor)[2:]) for sign in ("<", ">"))
    assert above <= exact <= below
    assert math.isclose(float(below), float(exact), rel_tol=0.011)


@pytest.mark.parametrize(
    ("value", "text"), [(0.0, "0.0"), (-0.0, "0.0"), (1e-7, "0.0000001"), (1e6, "1000000")]
)
def test_edges(value: float, text: str) -> None:
    assert plain(reported_cod(value)) == text
