"""Recipes: what is refused, what is warned about, what scales with what."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.recipe import Recipe, derive, per_litre, slope_band, usable_top
from app.errors import InputError
from tests.chemistry.bench_run import HIGH, LOW


def test_every_wrong_field_is_named_at_once() -> None:
    with pytest.raises(InputError) as refused:
        Recipe(0.0, -1.0, float("nan"), float("inf"), -0.1, 10.0, 5000.0)
    assert set(refused.value.fields) == {
        "sample_ml",
        "digestion_solution_ml",
        "acid_reagent_ml",
        "dichromate_g_per_l",
        "mercury_sulfate_g_per_l",
        "wavelength_nm",
    }


@pytest.mark.parametrize(
    ("recipe", "working_range", "word"),
    [
        (HIGH, (20.0, 950.0), "90 %"),
        (HIGH, (20.0, 1200.0), "500 mL"),
        (replace(HIGH, mercury_sulfate_g_per_l=0.0), None, "chloride"),
        (replace(HIGH, silver_sulfate_g_per_l=0.0), None, "silver"),
        (replace(HIGH, wavelength_nm=510.0), None, "510 nm"),
    ],
)
def test_warns_in_words(recipe: Recipe, working_range: tuple[float, float] | None, word: str) -> None:
    assert any(word in warning for warning in derive(recipe, working_range).warnings)


@pytest.mark.parametrize(("recipe", "top"), [(HIGH, 900.0), (LOW, 90.0)])
def test_a_sound_recipe_warns_of_nothing(recipe: Recipe, top: float) -> None:
    assert derive(recipe, (10.0, top)).warnings == ()


def test_the_usable_top_is_the_lower_of_range_and_nine_tenths_of_the_capacity() -> None:
    assert usable_top(HIGH, (20.0, 800.0)) == 800.0
    assert usable_top(HIGH, (20.0, 990.0)) == pytest.approx(0.9 * HIGH.oxidant_capacity)


@pytest.mark.parametrize(
    ("nm", "response"), [(600, "rises"), (620, "rises"), (420, "falls"), (440, "falls"), (510, None)]
)
def test_the_colour_that_is_read_gives_the_direction(nm: float, response: str | None) -> None:
    assert replace(HIGH, wavelength_nm=nm).response == response


@given(st.floats(0.1, 100.0))
def test_a_larger_tube_changes_metals_and_nothing_else(times: float) -> None:
    """Same shares of sample and reagents: capacity, chloride limit and slope band stay."""
    large = replace(
        HIGH, sample_ml=2.5 * times, digestion_solution_ml=1.5 * times, acid_reagent_ml=3.5 * times
    )
    small, big = derive(HIGH), derive(large)
    assert big.oxidant_capacity == pytest.approx(small.oxidant_capacity)
    assert big.chloride_limit == pytest.approx(small.chloride_limit)
    assert slope_band(large) == pytest.approx(slope_band(HIGH))
    assert big.per_tube_mg.mercury == pytest.approx(times * small.per_tube_mg.mercury)


@given(st.floats(0.5, 5.0))
def test_more_sample_means_less_capacity_and_a_steeper_slope(sample_ml: float) -> None:
    other = replace(HIGH, sample_ml=sample_ml)
    assert other.oxidant_capacity * sample_ml == pytest.approx(HIGH.oxidant_capacity * 2.5)
    assert (slope_band(other)[0] < slope_band(HIGH)[0]) == (sample_ml / (sample_ml + 5.0) > 2.5 / 7.5)


def test_grams_for_no_volume_are_refused() -> None:
    with pytest.raises(InputError) as refused:
        per_litre(-1.0, 0.0)
    assert set(refused.value.fields) == {"grams", "final_volume_ml"}
