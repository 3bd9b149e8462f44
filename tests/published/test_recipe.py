"""Capacity, chloride limit and metals of the published recipes.

Expected values are arithmetic on the published amounts (mass, molar mass,
volume), done apart from this program.
"""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.chemistry.atoms import DICHROMATE
from app.chemistry.calibration import Standard, fit
from app.chemistry.recipe import (
    COMMON_PRACTICE_C,
    COMMON_PRACTICE_HIGH_NM,
    COMMON_PRACTICE_HOURS,
    COMMON_PRACTICE_LOW_NM,
    COMMON_PRACTICE_REPLICATES,
    COMMON_PRACTICE_TUBE_ML,
    Recipe,
    chromium_mmol_per_l,
    derive,
    per_litre,
    slope_band,
)
from app.chemistry.standard_recipes import STANDARD_RECIPES, in_tube

pytestmark = pytest.mark.published

BY_NAME = {standard.name: standard for standard in STANDARD_RECIPES}
SM_HIGH = BY_NAME["Standard Methods 5220 D, high range"]
SM_LOW = BY_NAME["Standard Methods 5220 D, low range"]
EPA = BY_NAME["EPA 410.4, manual"]
ISO_HIGH = BY_NAME["ISO 15705, high range"]
ISO_LOW = BY_NAME["ISO 15705, low range"]


def test_molar_mass_of_potassium_dichromate() -> None:
    """Source: 294.18 g/mol in every handbook."""
    assert pytest.approx(294.182, abs=0.005) == DICHROMATE


@pytest.mark.parametrize(
    ("standard", "capacity", "tolerance"),
    [
        (SM_HIGH, 1000.1, 0.5),
        (SM_LOW, 100.0, 0.1),
        (EPA, 998.5, 0.5),
        (ISO_HIGH, 1199.9, 0.5),
        (ISO_LOW, 180.0, 0.1),
    ],
    ids=lambda value: getattr(value, "name", None),
)
def test_capacity_of_the_published_forms(standard, capacity: float, tolerance: float) -> None:
    """Source: amounts of Standard Methods 5220 D, EPA 410.4 rev. 2.0 and ISO 15705; six electrons each."""
    assert derive(standard.recipe).oxidant_capacity == pytest.approx(capacity, abs=tolerance)


def test_a_solution_of_a_24th_normal_holds_333_mg_o2() -> None:
    """Source: 0.041667 N dichromate is 6.9445 mmol/L, hence 333.3 mg O2 per litre of solution."""
    one_to_one = Recipe(1.0, 1.0, 1.0, 6.9445e-3 * 294.182, 0.0, 0.0, 600.0)
    assert derive(one_to_one).oxidant_capacity == pytest.approx(333.3, abs=0.1)


@pytest.mark.parametrize(
    ("standard", "limit", "tolerance"),
    [(SM_HIGH, 1998, 2), (SM_LOW, 1998, 2), (EPA, 2004, 2), (ISO_HIGH, 4005, 5)],
    ids=lambda value: getattr(value, "name", None),
)
def test_chloride_limit_is_a_tenth_of_the_mercury_sulfate(standard, limit: float, tolerance: float) -> None:
    """Source: EPA 410.3, 10 mg HgSO4 per mg chloride; Standard Methods 5220 A, 1 g for 50 mL at 2000 mg/L."""
    assert derive(standard.recipe).chloride_limit == pytest.approx(limit, abs=tolerance)


def test_metals_of_the_small_tube() -> None:
    """Source: arithmetic on Standard Methods 5220 D in a 16 x 100 mm tube."""
    metals = derive(SM_HIGH.recipe).per_tube_mg
    assert metals.mercury == pytest.approx(33.78, abs=0.05)
    assert metals.chromium == pytest.approx(5.417, abs=0.005)
    assert metals.silver == pytest.approx(24.51, abs=0.02)


def test_metals_of_epa_410_4() -> None:
    """Source: arithmetic on EPA 410.4 rev. 2.0, 7.2 to 7.5."""
    metals = derive(EPA.recipe).per_tube_mg
    assert metals.mercury == pytest.approx(33.88, abs=0.05)
    assert metals.chromium == pytest.approx(5.408, abs=0.005)
    assert metals.silver == pytest.approx(23.97, abs=0.02)


def test_metals_of_iso_15705() -> None:
    """Source: arithmetic on ISO 15705 (0.50 mL of 0.1 mol/L, 0.20 mL of 1.35 mol/L, 2.5 mL of 12 g/L)."""
    metals = derive(ISO_HIGH.recipe).per_tube_mg
    assert metals.mercury == pytest.approx(54.16, abs=0.03)
    assert metals.chromium == pytest.approx(5.200, abs=0.003)
    assert metals.silver == pytest.approx(20.76, abs=0.01)


def test_a_larger_tube_has_the_same_capacity_and_four_times_the_metal() -> None:
    """Source: tube table of Standard Methods 5220 D (10.00/6.00/14.0 mL)."""
    small, large = derive(SM_HIGH.recipe), derive(in_tube(SM_HIGH.recipe, "25 x 150 mm"))
    assert large.oxidant_capacity == pytest.approx(small.oxidant_capacity, rel=1e-12)
    assert large.per_tube_mg.mercury == pytest.approx(135.1, abs=0.1)
    assert large.per_tube_mg.chromium == pytest.approx(21.67, abs=0.01)
    assert large.tube_volume_ml == 30.0


def test_amounts_for_half_a_litre_entered_as_for_a_litre_are_noticed() -> None:
    """Source: EPA 410.4 rev. 2.0, 7.2 prints 5.1 g for 500 mL; as 5.1 g/L the ceiling is 499.3 mg/L."""
    wrong = Recipe(2.5, 1.5, 3.5, 5.1, 16.7, 9.9, 600.0)
    sums = derive(wrong, (20.0, 900.0))
    assert sums.oxidant_capacity == pytest.approx(499.3, abs=0.2)
    assert sums.chloride_limit == pytest.approx(1002, abs=1)
    assert any("500 mL" in warning for warning in sums.warnings)
    assert per_litre(5.1, 500) == pytest.approx(10.2)


@pytest.mark.parametrize("standard", STANDARD_RECIPES, ids=lambda standard: standard.name)
def test_every_published_range_ends_at_83_to_90_percent_of_the_capacity(standard) -> None:
    """Source: the stated tops of the published forms beside their arithmetic capacity."""
    share = standard.stated_top / derive(standard.recipe).oxidant_capacity
    assert 0.825 < share < 0.902


def test_chromium_after_500_mg_per_litre() -> None:
    """Source: arithmetic, 4/3 mol Cr(III) per mol O2: 6.945 mmol/L for 2.5 mL in 7.5 mL."""
    assert chromium_mmol_per_l(SM_HIGH.recipe, 500) == pytest.approx(6.945, abs=0.005)


def test_the_slopes_of_known_absorptivities_lie_in_the_band() -> None:
    """Source: Kiba et al. 1978 give 16.9 L/mol cm per Cr(III); handbooks 17 to 25; tubes 1.0 to 1.4 cm."""
    low, high = slope_band(SM_HIGH.recipe)
    assert (low, high) == (1400.0, 4000.0)
    mmol_per_mg = chromium_mmol_per_l(SM_HIGH.recipe, 1.0)
    for absorptivity, path_cm in ((17, 1.36), (18, 1.4), (20, 1.0), (25, 1.0), (25, 1.4)):
        assert low < 1.0 / (absorptivity * path_cm * mmol_per_mg / 1000.0) < high


def test_common_practice() -> None:
    """Source: common practice.

    Two hours at 150 C; 2.5, 1.5 and 3.5 mL in a tube; read at 600 nm rising or
    420 nm falling; blanks and samples in triplicate; good to 1000 mg/L, which
    the capacity of the recipe gives by itself.
    """
    assert (COMMON_PRACTICE_HOURS, COMMON_PRACTICE_C) == (2.0, 150.0)
    assert COMMON_PRACTICE_TUBE_ML == (2.5, 1.5, 3.5)
    assert COMMON_PRACTICE_REPLICATES == 3
    high = derive(Recipe(*COMMON_PRACTICE_TUBE_ML, 10.216, 33.3, 10.12, COMMON_PRACTICE_HIGH_NM))
    low = derive(Recipe(*COMMON_PRACTICE_TUBE_ML, 1.022, 33.3, 10.12, COMMON_PRACTICE_LOW_NM))
    assert (high.response, low.response) == ("rises", "falls")
    assert round(high.oxidant_capacity) == 1000
    assert high.tube_volume_ml == 7.5


@pytest.mark.parametrize("one", STANDARD_RECIPES, ids=lambda one: one.name)
@pytest.mark.parametrize("tube", ["16 x 100 mm", "20 x 150 mm", "25 x 150 mm"])
def test_another_tube_keeps_the_ratios_and_so_the_limits(one, tube):
    """EPA 410.4, 2.2: other volumes are allowed where the molar ratios stay."""
    mine, scaled = derive(one.recipe), derive(in_tube(one.recipe, tube))
    assert scaled.oxidant_capacity == pytest.approx(mine.oxidant_capacity, rel=1e-12)
    assert scaled.chloride_limit == pytest.approx(mine.chloride_limit, rel=1e-12)


def test_too_little_sample_reads_as_its_share():
    """Arithmetic: 2.0 mL pipetted instead of 2.5 mL reads (2.0/7.0)/(2.5/7.5) = 0.857 of the true value."""
    short = replace(SM_HIGH.recipe, sample_ml=2.0)
    share = chromium_mmol_per_l(short, 500) / chromium_mmol_per_l(SM_HIGH.recipe, 500)
    assert share == pytest.approx(0.857, abs=0.0005)


def test_a_slope_turns_an_absorbance_into_its_cod():
    """Arithmetic: 0.200 AU at 3.80e-4 AU per mg/L and no intercept is 526.3 mg/L."""
    curve = fit([Standard(float(x), (3.80e-4 * x,)) for x in (0, 100, 300, 500, 700, 900)])
    assert curve.read([0.200]).cod == pytest.approx(526.3, abs=0.05)


def test_an_exhausted_tube_shows_the_capacity_and_no_more():
    """Arithmetic: the slope 3.80e-4 times the capacity, 0.380 AU, for any sample above 1000 mg/L."""
    assert 3.80e-4 * derive(SM_HIGH.recipe).oxidant_capacity == pytest.approx(0.380, abs=0.002)
