"""Theoretical oxygen demand against published molar masses and stoichiometry.

Expected values were computed by hand from the reaction with the IUPAC atomic
weights and agree with the figures that handbooks print to three digits; they
were not taken from this program.
"""

from __future__ import annotations

import pytest

from app.chemistry.oxygen_demand import oxygen_demand

pytestmark = pytest.mark.published

# substance, formula, molar mass g/mol, mg O2 per mg (nitrogen leaves as ammonium)
SUBSTANCES = [
    ("potassium hydrogen phthalate", "C8H5KO4", 204.2223, 1.17512),
    ("glucose", "C6H12O6", 180.156, 1.06568),
    ("sucrose", "C12H22O11", 342.297, 1.12176),
    ("starch unit", "C6H10O5", 162.141, 1.18408),
    ("methanol", "CH4O", 32.042, 1.49794),
    ("ethanol", "C2H6O", 46.069, 2.08370),
    ("2-propanol", "C3H8O", 60.096, 2.39602),
    ("ethylene glycol", "C2H6O2", 62.068, 1.28883),
    ("glycerol", "C3H8O3", 92.094, 1.21607),
    ("acetone", "C3H6O", 58.080, 2.20372),
    ("formaldehyde", "CH2O", 30.026, 1.06568),
    ("formic acid", "CH2O2", 46.025, 0.34762),
    ("acetic acid", "C2H4O2", 60.052, 1.06568),
    ("sodium acetate", "C2H3NaO2", 82.0338, 0.78012),
    ("oxalic acid", "C2H2O4", 90.034, 0.17770),
    ("citric acid", "C6H8O7", 192.123, 0.74947),
    ("phenol", "C6H6O", 94.113, 2.37997),
    ("benzoic acid", "C7H6O2", 122.123, 1.96511),
    ("benzene", "C6H6", 78.114, 3.07224),
    ("toluene", "C7H8", 92.141, 3.12545),
    ("glycine", "C2H5NO2", 75.067, 0.63939),
    ("glutamic acid", "C5H9NO4", 147.130, 0.97867),
    ("pyridine", "C5H5N", 79.102, 2.22484),
    ("protein proxy", "C16H24O5N4", 352.391, 1.49824),
    ("biomass", "C5H7NO2", 113.116, 1.41439),
    ("palmitic acid", "C16H32O2", 256.430, 2.87000),
    ("triolein", "C57H104O6", 885.453, 2.89099),
    ("sodium dodecyl sulfate", "C12H25NaO4S", 288.3778, 1.99726),
]


@pytest.mark.parametrize(("name", "formula", "mass", "demand"), SUBSTANCES, ids=[s[0] for s in SUBSTANCES])
def test_theory_of_the_reaction(name: str, formula: str, mass: float, demand: float) -> None:
    """Source: stoichiometry of complete oxidation to CO2, H2O, NH4+, SO4, halide."""
    found = oxygen_demand(formula)
    assert found.molar_mass == pytest.approx(mass, abs=0.002)
    assert found.oxygen_demand == pytest.approx(demand, abs=2e-5)


def test_urea_takes_no_dichromate() -> None:
    """Source: dichromate leaves ammonia alone (Standard Methods 5220 A; from memory); not 2.13."""
    assert oxygen_demand("CH4N2O").oxygen_demand == 0.0


def test_oxalic_acid_takes_sixteen_grams_a_mole() -> None:
    """Source: a published closed-reflux study of oxalic acid found 16.0 g O2/mol, its theory."""
    found = oxygen_demand("C2H2O4")
    assert found.oxygen_demand * found.molar_mass == pytest.approx(16.0, abs=0.01)


def test_the_phthalate_standard_of_standard_methods() -> None:
    """Source: Standard Methods 5220 calls 425 mg/L "500" and prints 1.176 mg O2/mg (from memory).

    Exactly it is 499.42 mg/L; the printed figure is rounded.
    """
    demand = oxygen_demand("C8H5KO4").oxygen_demand
    assert 425 * demand == pytest.approx(499.42, abs=0.1)
    assert demand == pytest.approx(1.176, abs=0.001)


def test_the_stock_of_epa_410_4() -> None:
    """Source: EPA 410.4 rev. 2.0, 7.5: 0.425 g in 500 mL is "1 mL = 1 mg COD"; exactly 998.85 mg/L."""
    assert 850 * oxygen_demand("C8H5KO4").oxygen_demand == pytest.approx(998.85, abs=0.05)


def test_glucose_and_glutamic_acid_check_solution() -> None:
    """Source: arithmetic on 150 mg/L of each, the classic check solution: 306.65 mg/L."""
    found = 150 * oxygen_demand("C6H12O6").oxygen_demand + 150 * oxygen_demand("C5H9NO4").oxygen_demand
    assert found == pytest.approx(306.65, abs=0.02)
