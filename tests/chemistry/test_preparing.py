"""Preparation sheets and standard series: masses balance and glassware exists."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.glassware import FLASKS_ML, PIPETTES_ML
from app.chemistry.preparation import Purity, phthalate_stock, preparation_sheet
from app.chemistry.recipe import per_litre
from app.chemistry.standard_recipes import STANDARD_RECIPES
from app.chemistry.standard_series import standard_series
from app.errors import InputError

EPA = next(s for s in STANDARD_RECIPES if s.name.startswith("EPA"))


def test_half_a_litre_of_the_digestion_solution_of_epa_410_4() -> None:
    """Source: EPA 410.4 rev. 2.0, 7.2: 5.1 g K2Cr2O7, 84 mL acid and 16.7 g HgSO4 in 500 mL."""
    sheet = preparation_sheet(EPA.recipe, 500, 0, EPA.digestion_acid_ml_per_l)
    assert [(line.unit, pytest.approx(line.amount)) for line in sheet] == [
        ("g", 5.1),
        ("mL", 84),
        ("g", 16.7),
    ]


def test_a_bottle_of_acid_reagent() -> None:
    """Source: EPA 410.4 rev. 2.0, 7.4: 22 g Ag2SO4 in a 4.09 kg bottle (2223 mL at 1.84 kg/L)."""
    sheet = preparation_sheet(EPA.recipe, 0, 4090 / 1.84, 168)
    assert sheet[0].amount == pytest.approx(22.0)
    assert [line.unit for line in sheet] == ["g", "mL"]


def test_less_pure_chemicals_are_weighed_in_larger_amounts() -> None:
    pure = preparation_sheet(EPA.recipe, 500, 100, 168)
    real = preparation_sheet(EPA.recipe, 500, 100, 168, Purity(0.99, 0.98, 0.995))
    ratios = [b.amount / a.amount for a, b in zip(pure, real, strict=True)]
    assert ratios == pytest.approx([1 / 0.99, 1, 1 / 0.98, 1 / 0.995, 1])


def test_every_line_carries_a_caution_that_defers_to_the_safety_data_sheet() -> None:
    for line in preparation_sheet(EPA.recipe, 500, 100, 168):
        assert "safety data sheet" in line.caution


def test_the_stock_of_potassium_hydrogen_phthalate() -> None:
    """Source: arithmetic: exactly 500 mg/L needs 425.49 mg, exactly 1000 mg/L 850.98 mg in a litre."""
    assert phthalate_stock(500, 1000).amount == pytest.approx(0.42549, abs=5e-6)
    assert phthalate_stock(1000, 1000).amount == pytest.approx(0.85098, abs=5e-6)
    assert phthalate_stock(1000, 500, 0.9995).amount == pytest.approx(0.85098 / 2 / 0.9995, abs=5e-6)


def test_the_usual_levels_are_met_exactly() -> None:
    levels = [0, 20, 50, 100, 250, 500, 700, 750, 900, 1000]
    series = standard_series(1000, levels)
    assert [s.cod for s in series] == pytest.approx(levels)
    assert series[0].words.startswith("water")
    assert series[-1].portions == ()
    assert series[6].words == "50 and 20 mL to 100 mL"


@given(st.floats(100, 10000), st.lists(st.floats(0.001, 1.0), min_size=1, max_size=5))
def test_any_series_uses_glassware_that_exists_and_says_what_it_gives(
    stock: float, shares: list[float]
) -> None:
    for one in standard_series(stock, [stock * share for share in shares]):
        factor = 1.0
        for portion in one.portions:
            assert portion.flask_ml in FLASKS_ML
            assert all(p in PIPETTES_ML for p in portion.pipettes_ml)
            assert sum(portion.pipettes_ml) < portion.flask_ml
            factor *= portion.flask_ml / sum(portion.pipettes_ml)
        assert one.cod == pytest.approx(stock / factor)
        assert one.cod == pytest.approx(one.wanted, rel=0.1)
        assert one.relative_u < 0.01


def test_wrong_numbers_are_named() -> None:
    with pytest.raises(InputError) as refused:
        preparation_sheet(EPA.recipe, -1, float("nan"), 2000, Purity(0, 1.1))
    assert set(refused.value.fields) == {
        "digestion_solution_ml",
        "acid_reagent_ml",
        "digestion_acid_ml_per_l",
        "purity.dichromate",
        "purity.mercury_sulfate",
    }
    with pytest.raises(InputError) as refused:
        standard_series(1000, [50, 1001, -1])
    assert set(refused.value.fields) == {"levels.1", "levels.2"}
    with pytest.raises(InputError) as refused:
        phthalate_stock(0, -1, 2)
    assert set(refused.value.fields) == {"cod", "volume_ml", "purity"}
    with pytest.raises(InputError):
        per_litre(1, -1)
