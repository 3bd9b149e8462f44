"""Dilutions, steps, splits and the worth of a reading."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.chemistry.glassware import chain_factor
from app.errors import InputError
from app.forecast import Now, Programme, Range, Sample, Shelf, expected, plan, posterior
from app.forecast.glass import FLASKS, PIPETTES, chains_for, factors_of
from app.forecast.worth import next_dilution, worth_measuring
from tests.forecast.made import HIGH, LADDER, normal, walk

levels = st.floats(60.0, 60000.0)
spreads = st.floats(0.05, 2.5)


@given(levels, spreads)
def test_the_choice_needs_the_fewest_tubes_of_what_is_usable(cod: float, sd: float) -> None:
    planned = plan(normal(cod, sd), (HIGH,), LADDER, Sample(3000.0, decision_limit=2000.0))
    usable = [p for p in planned.plans if p.usable and p.expected_tubes is not None]
    assert (planned.choice is None) == (not usable)
    if planned.choice is not None:
        assert planned.choice.expected_tubes == pytest.approx(min(p.expected_tubes or 0 for p in usable))
    for one in planned.plans:
        assert one.p_in_range + one.p_over + one.p_below == pytest.approx(1.0, abs=1e-9)
        assert (one.chloride_after or 0) <= 1998.0 or not one.usable
        assert (one.reporting_after or 0) <= 2000.0 or not one.usable
        assert bool(one.objections) != one.usable


@given(levels, spreads)
def test_a_split_is_offered_where_and_only_where_it_needs_fewer_tubes(cod: float, sd: float) -> None:
    """Every pair tried, the chance of at least one in range summed over the ends of both windows."""
    expectation, narrow = normal(cod, sd), Range("narrow", 50.0, 150.0)
    planned = plan(expectation, (narrow,), LADDER)

    def together(a: float, b: float) -> float:
        ends = sorted({50 * a, 150 * a, 50 * b, 150 * b})
        inside = [
            (x, y)
            for x, y in itertools.pairwise(ends)
            if any(50 * f <= math.sqrt(x * y) <= 150 * f for f in (a, b))
        ]
        return sum(expectation.cdf(y) - expectation.cdf(x) for x, y in inside)

    best = max(together(a, b) for a, b in itertools.combinations(LADDER, 2))
    single = max(p.p_in_range for p in planned.plans)
    if planned.split is None:
        assert single < 1e-6 or 4 / best >= 3 / single * (1 - 1e-6)
    else:
        assert planned.split.p_in_range == pytest.approx(best, abs=1e-9)
        assert planned.split.expected_tubes == pytest.approx(4 / best)
        assert planned.split.expected_tubes < 3 / single


def test_two_dilutions_are_offered_where_little_is_known() -> None:
    wide = expected(posterior(Programme.default(), None, []), Now(20205.0))
    planned = plan(wide, (HIGH,), LADDER)
    assert planned.split is not None
    assert planned.split.plans[0] < planned.split.plans[1]
    assert planned.split.tubes_each == 2
    known = expected(posterior(Programme.default(), None, walk(30)), Now(21000.0))
    assert plan(known, (HIGH,), LADDER).split is None


@pytest.mark.parametrize("factor", LADDER)
@pytest.mark.parametrize("solids", [False, True])
def test_a_chain_makes_its_factor_in_two_steps_at_most(factor: float, solids: bool) -> None:
    for chain in chains_for(factor, solids=solids):
        assert len(chain.steps) <= 2
        assert chain_factor(chain.steps) == pytest.approx(factor)
        assert all(step.pipette_ml >= 1.0 for step in chain.steps)
        assert not solids or chain.transfer_ml == 0 or chain.transfer_ml >= 10.0
    best = chains_for(factor, solids=solids)[0]
    assert best.transfer_ml == 0 or best.transfer_ml >= (10.0 if solids else 5.0)


def test_a_small_sample_takes_a_smaller_transfer() -> None:
    """1:5 takes 20 mL into 100 mL; from 12 mL of sample, 10 mL into 50 mL; from 0.5 mL nothing does."""
    found = {}
    for volume in (50.0, 12.0, 0.5):
        found[volume] = plan(normal(3000.0, 0.2), (HIGH,), (5.0,), Sample(volume_ml=volume)).plans[0]
    assert [one.chain and one.chain.transfer_ml for one in found.values()][:2] == [20.0, 10.0]
    assert not found[0.5].usable
    assert "0.5 mL are at hand" in found[0.5].objections[0]


def test_a_shelf_gives_the_factors_it_can_make() -> None:
    shelf = Shelf((5.0, 10.0), (50.0, 100.0))
    made = (1, 5, 10, 20, 25, 50, 100, 200, 400)
    assert factors_of(shelf.pipettes_ml, shelf.flasks_ml) == made
    planned = plan(normal(3000.0, 0.2), (HIGH,), None, shelf=shelf)
    assert planned.choice is not None
    assert planned.choice.chain is not None
    assert chain_factor(planned.choice.chain.steps) == planned.choice.dilution_factor


def test_a_dilution_that_the_shelf_does_not_make_is_not_usable() -> None:
    """1:7 and 1:13 from 5 and 10 mL into 50 and 100 mL: no chain of two; without a shelf they may be made."""
    shelf = Shelf((5.0, 10.0), (50.0, 100.0))
    planned = plan(normal(3000.0, 0.2), (HIGH,), (5.0, 7.0, 13.0), shelf=shelf)
    assert [one.usable for one in planned.plans] == [True, False, False]
    assert "does not make" in planned.plans[1].objections[0]
    assert all(one.usable for one in plan(normal(3000.0, 0.2), (HIGH,), (5.0, 7.0, 13.0)).plans)


def test_a_size_that_is_not_made_is_named() -> None:
    with pytest.raises(InputError) as caught:
        plan(normal(3000.0, 0.2), (HIGH,), None, shelf=Shelf((5.0, 7.0), (50.0, 60.0)))
    assert set(caught.value.fields) == {"pipettes_ml.1", "flasks_ml.1"}


def test_the_default_shelf_makes_the_ladder() -> None:
    assert set(LADDER) <= set(factors_of(PIPETTES, FLASKS))


def test_without_a_usable_plan_it_says_what_stands_against() -> None:
    planned = plan(normal(3000.0, 0.2), (HIGH,), (1.0, 2.0), Sample(chloride=9000.0))
    assert planned.choice is None
    assert "chloride" in planned.why


@pytest.mark.parametrize("dilutions", [(), (0.5,), (math.nan,)])
def test_a_plan_needs_dilutions(dilutions: tuple[float, ...]) -> None:
    with pytest.raises(InputError):
        plan(normal(3000.0, 0.2), (HIGH,), dilutions)


@given(levels, spreads, st.sampled_from(LADDER))
def test_after_a_miss_the_next_dilution_is_on_the_side_the_tube_has_shown(
    cod: float, sd: float, factor: float
) -> None:
    expectation = normal(cod, sd)
    over = next_dilution(expectation, 900.0 * factor, "over", (HIGH,), LADDER)
    below = next_dilution(expectation, 50.0 * factor, "below", (HIGH,), LADDER)
    if over is not None and expectation.cdf(900.0 * factor) < 1 - 1e-6:
        assert over.dilution_factor > factor or factor == LADDER[-1]
    if below is not None and expectation.cdf(50.0 * factor) > 1e-6:
        assert below.dilution_factor < factor or factor == 1.0


def test_a_tube_that_is_neither_over_nor_below_moves_nothing() -> None:
    with pytest.raises(InputError):
        next_dilution(normal(100.0, 1.0), 900.0, "ok", (HIGH,), LADDER)


def test_the_worth_of_a_reading_is_what_drawing_it_shows() -> None:
    """Against 2,000 draws of the meter from what is usual here, each planned anew."""
    history = walk(60, slope=1.2, noise=0.1)
    known = posterior(Programme.default(), None, history)
    now = Now(history[-1].days + 30, {"ph": 7.2}, "production")
    narrow = (Range("narrow", 100.0, 250.0),)
    planned = plan(expected(known, now), narrow, LADDER)
    found = {one.field: one for one in worth_measuring(known, now, planned, narrow)}
    best = []
    for draw in known.centre[0] + known.spread[0] * np.random.default_rng(3).standard_normal(2000):
        shown = Now(now.days, {**now.field, "conductivity_us_cm": 1000.0 * math.exp(draw)}, now.activity)
        best.append(max(p.p_in_range for p in plan(expected(known, shown), narrow, LADDER).plans))
    one = found["conductivity_us_cm"]
    assert "ph" not in found
    assert one.p_in_range_expected == pytest.approx(np.mean(best), abs=0.02)
    assert one.p_in_range_expected > one.p_in_range_now + 0.1


@given(levels)
@settings(max_examples=20)
def test_mercury_follows_the_tubes(cod: float) -> None:
    for one in plan(normal(cod, 0.5), (HIGH,), LADDER).plans:
        if one.expected_tubes is not None:
            assert one.expected_mercury_mg == pytest.approx(33.8 * one.expected_tubes)
