"""Interferences against stoichiometry and published conductivities."""

from __future__ import annotations

import pytest

from app.chemistry.interferences import (
    CHLORIDE,
    CORRECTABLE,
    chloride_at_most,
    chloride_bound,
    corrected_beside,
    sulfamic_acid_mg,
)

pytestmark = pytest.mark.published


@pytest.mark.parametrize(
    ("species", "demand"), [("nitrite", 1.1422), ("ferrous", 0.1432), ("sulfide", 1.996)]
)
def test_oxygen_demand_of_inorganic_species(species: str, demand: float) -> None:
    """Source: electrons times 7.9995 over the mass; Standard Methods 5220 C prints 1.1 for nitrite N."""
    assert CORRECTABLE[species].mg_o2_per_mg == pytest.approx(demand, abs=0.0003)


def test_chloride_by_itself() -> None:
    """Source: EPA 410.4 rev. 2.0, 4.1 (quantitative); 6 Cl- + Cr2O7(2-): 0.2257; 1000 mg/L: 225.7."""
    assert CHLORIDE.mg_o2_per_mg == pytest.approx(0.2257, abs=0.0001)
    assert chloride_at_most(1000) == pytest.approx(225.7, abs=0.1)
    assert chloride_at_most(2000) == pytest.approx(451, abs=1)


def test_worked_corrections() -> None:
    """Source: arithmetic: 5 mg/L NO2-N 5.71, 100 mg/L Fe(II) 14.3, 10 mg/L sulfide 19.96."""
    found = corrected_beside(500, {"nitrite": 5, "ferrous": 100, "sulfide": 10})
    assert [c.oxygen_demand for c in found.corrections] == pytest.approx([5.71, 14.3, 19.96], abs=0.03)
    assert found.uncorrected == 500
    assert found.corrected == pytest.approx(500 - 5.71 - 14.32 - 19.96, abs=0.03)


def test_sulfamic_acid_for_one_tube() -> None:
    """Source: a national COD method: 10 mg per mg nitrite nitrogen; 5 mg/L in 2.5 mL: 0.125 mg."""
    assert sulfamic_acid_mg(5, 2.5) == pytest.approx(0.125)


@pytest.mark.parametrize(("conductivity_ms_cm", "chloride"), [(3.22, 1000), (6.23, 2000)])
def test_conductivity_of_sodium_chloride(conductivity_ms_cm: float, chloride: float) -> None:
    """Source: molar conductivities of NaCl at 25 C: 28.2 mmol/L 3.22 mS/cm, 56.4 mmol/L 6.23 mS/cm."""
    bound = chloride_bound(1000 * conductivity_ms_cm)
    assert chloride <= bound <= 1.06 * chloride


@pytest.mark.parametrize(("conductivity_ms_cm", "chloride"), [(3.0, 1000), (6.0, 2000)])
def test_screen_by_conductivity(conductivity_ms_cm: float, chloride: float) -> None:
    """Source: practice that follows from the above: under 3 mS/cm hardly over 1000, under 6 over 2000."""
    assert chloride_bound(1000 * conductivity_ms_cm) <= chloride * 1.005
