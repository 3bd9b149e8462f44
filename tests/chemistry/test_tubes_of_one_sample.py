"""Replicates: who is set aside, who never is, and what the value is then."""

from __future__ import annotations

import random

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.repeatability import Repeatability
from app.chemistry.replicates import CAUSES, RANGE_FACTOR, dixon, grubbs, median, screen

FIVE = Repeatability(5.0, 0.0)
readings = st.lists(st.floats(0.0, 900.0).map(lambda v: round(v, 3)), min_size=1, max_size=10)


def same(value: float) -> float:
    return value


def look(*values: float, repeatability: Repeatability = FIVE):
    return screen(list(values), list(range(len(values))), same, repeatability)


def test_one_tube_agrees_with_itself() -> None:
    assert look(300.0).agree


def test_two_tubes_that_disagree_name_no_suspect() -> None:
    found = look(300.0, 400.0)
    assert (found.agree, found.suspect, found.absorbance) == (False, None, 350.0)


def test_three_tubes_never_convict_one_of_them() -> None:
    found = look(300.0, 301.0, 400.0)
    assert (found.agree, found.used, found.set_aside) == (False, (0, 1, 2), None)
    assert (found.suspect, found.absorbance) == (2, 301.0)


@pytest.mark.parametrize("far", [400.0, 200.0])
def test_of_four_the_far_one_is_set_aside_when_the_rest_agree(far: float) -> None:
    found = look(300.0, far, 301.0, 302.0)
    assert (found.agree, found.used, found.set_aside, found.suspect) == (True, (0, 2, 3), 1, None)
    assert found.absorbance == pytest.approx(301.0)


def test_only_one_is_ever_set_aside() -> None:
    found = look(300.0, 301.0, 302.0, 400.0, 700.0)
    assert (found.agree, found.set_aside, found.suspect, found.absorbance) == (False, None, 4, 302.0)


def test_none_is_set_aside_when_the_rest_still_disagrees() -> None:
    found = look(300.0, 320.0, 340.0, 900.0)
    assert (found.agree, found.set_aside, found.suspect) == (False, None, 3)


def test_a_tube_that_a_person_excluded_is_not_looked_at() -> None:
    found = screen([300.0, 900.0, 301.0], [0, 2], same, FIVE)
    assert (found.agree, found.used, found.absorbance) == (True, (0, 2), 300.5)


def test_the_indices_are_those_of_all_tubes() -> None:
    found = screen([900.0, 300.0, 400.0, 301.0, 302.0], [1, 2, 3, 4], same, FIVE)
    assert (found.set_aside, found.used) == (2, (1, 3, 4))


def test_a_tube_that_has_no_cod_makes_tubes_disagree() -> None:
    found = screen([0.2, 0.9], [0, 1], lambda a: None if a > 0.5 else 1000 * a, FIVE)
    assert not found.agree


def test_tubes_of_the_same_reading_agree_whatever_the_repeatability() -> None:
    assert look(300.0, 300.0, 300.0, repeatability=Repeatability(0.0, 0.0)).agree


@pytest.mark.parametrize(("p", "factor"), RANGE_FACTOR.items())
def test_the_critical_range_is_inclusive_of_its_edge(p: int, factor: float) -> None:
    inside, outside = factor * 5.0 * (1 - 1e-9), factor * 5.0 * (1 + 1e-9)
    middle = [inside / 2.0] * (p - 2)
    assert look(0.0, *middle, inside).agree
    if p < 4:
        assert not look(0.0, *middle, outside).agree


@given(readings, st.floats(0.5, 50.0))
def test_the_order_of_tubes_does_not_matter(values: list[float], a: float) -> None:
    order = list(range(len(values)))
    random.Random(3).shuffle(order)
    one = screen(values, list(range(len(values))), same, Repeatability(a, 0.0))
    two = screen([values[i] for i in order], list(range(len(values))), same, Repeatability(a, 0.0))
    assert two.agree == one.agree
    assert two.absorbance == pytest.approx(one.absorbance)
    assert sorted(values[order[i]] for i in two.used) == sorted(values[i] for i in one.used)


@given(readings, st.floats(0.5, 50.0), st.floats(-5.0, 5.0).filter(lambda s: abs(s) > 0.01))
def test_a_falling_signal_is_judged_like_a_rising_one(values: list[float], a: float, slope: float) -> None:
    kept = list(range(len(values)))
    one = screen(values, kept, same, Repeatability(a, 0.0))
    signal = [1.0 + slope * v for v in values]
    two = screen(signal, kept, lambda s: (s - 1.0) / slope, Repeatability(a, 0.0))
    if one.agree == two.agree and one.used == two.used:
        assert (two.absorbance - 1.0) / slope == pytest.approx(one.absorbance, abs=1e-6)
    else:
        assert_on_the_edge(values, a)


def assert_on_the_edge(values: list[float], a: float) -> None:
    """Only rounding may tell the two apart: the range, or a ratio, lies on its critical value."""
    spread = max(values) - min(values)
    edges = [abs(spread / (RANGE_FACTOR[len(values)] * a) - 1.0)]
    rest = sorted(values)
    for part in (rest[1:], rest[:-1]):
        edges.append(
            abs((part[-1] - part[0]) / (RANGE_FACTOR[len(part)] * a) - 1.0) if len(part) > 1 else 1.0
        )
        edges.append(abs(spread - (part[-1] - part[0])) / spread - abs(dixon(values).ratio))
    assert min(map(abs, edges)) < 1e-6


@given(readings.filter(lambda v: len(v) > 2))
def test_the_ratio_lies_between_zero_and_one(values: list[float]) -> None:
    assert 0.0 <= dixon(values).ratio <= 1.0
    largest = (len(values) - 1) / len(values) ** 0.5
    assert 0.0 <= grubbs(values).g <= largest * (1 + 1e-9)


@given(readings)
def test_half_of_the_values_lie_on_either_side_of_the_median(values: list[float]) -> None:
    middle = median(values)
    assert 2 * sum(v < middle for v in values) <= len(values)
    assert 2 * sum(v > middle for v in values) <= len(values)


def test_the_causes_are_words_and_differ() -> None:
    assert len(set(CAUSES)) == len(CAUSES)
    assert all(cause.strip() == cause and len(cause) > 5 for cause in CAUSES)
