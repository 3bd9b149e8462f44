"""Glassware against published tolerances and worked examples."""

from __future__ import annotations

import pytest

from app.chemistry.glassware import (
    FLASKS_ML,
    PIPETTES_ML,
    PISTON_PIPETTES,
    Step,
    chain_factor,
    chain_relative_u,
    flask_u_ml,
)

pytestmark = pytest.mark.published


def test_class_a_pipettes_of_astm_e969() -> None:
    """Source: ASTM E969-02 Table 1 (0.5 to 5 mL), a textbook's table (10 to 100 mL)."""
    printed = {0.5: 0.006, 1: 0.006, 2: 0.006, 5: 0.01, 10: 0.02, 20: 0.03, 25: 0.03, 50: 0.05, 100: 0.08}
    assert {size: PIPETTES_ML[size].astm_ml for size in printed} == printed


def test_class_a_flasks_of_iso_1042() -> None:
    """Source: the German verification ordinance, Annex 12, which prints the limits of ISO 1042."""
    printed = {25: 0.04, 50: 0.06, 100: 0.10, 200: 0.15, 250: 0.15, 500: 0.25, 1000: 0.40, 2000: 0.60}
    assert {size: FLASKS_ML[size].iso_ml for size in printed} == printed


@pytest.mark.parametrize(
    ("steps", "percent"),
    [
        ([(50, 100)], 0.052),
        ([(25, 100)], 0.059),
        ([(10, 100)], 0.088),
        ([(5, 100)], 0.088),
        ([(2, 100)], 0.127),
        ([(1, 100)], 0.247),
        ([(10, 250)], 0.084),
        ([(5, 500)], 0.083),
        ([(10, 1000)], 0.083),
        ([(1, 1000)], 0.245),
        ([(10, 100), (10, 100)], 0.124),
        ([(10, 100), (10, 100), (10, 100)], 0.152),
    ],
)
def test_relative_uncertainty_of_dilutions(steps, percent: float) -> None:
    """Source: tolerances of ASTM E969 and E288 over the square root of 6, added in quadrature by hand."""
    chain = [Step(*step) for step in steps]
    assert 100 * chain_relative_u(chain) == pytest.approx(percent, abs=0.0006)
    assert 100 * chain_relative_u(chain, shape="rectangular") == pytest.approx(1.41421 * percent, abs=0.001)


def test_two_steps_of_ten_beat_one_of_a_hundred() -> None:
    """Source: the table above; the factor is the same, the uncertainty half."""
    serial, single = [Step(10, 100), Step(10, 100)], [Step(1, 100)]
    assert chain_factor(serial) == chain_factor(single) == 100
    assert chain_relative_u(serial) < 0.6 * chain_relative_u(single)


@pytest.mark.parametrize(("volume_ul", "percent"), [(1000, 0.55), (500, 1.10), (200, 2.75), (100, 5.5)])
def test_a_piston_pipette_is_worse_at_a_low_setting(volume_ul: float, percent: float) -> None:
    """Source: ISO 8655-2, 1000 uL: 8 uL systematic and 3 uL random at every setting."""
    pipette = next(p for p in PISTON_PIPETTES if p.nominal_ul == 1000)
    assert 100 * pipette.relative_u(volume_ul) == pytest.approx(percent, abs=0.01)


def test_eurachem_a1_flask() -> None:
    """Source: Eurachem/CITAC Guide CG 4, example A1: 100 mL flask, 0.1 mL, 0.02 mL, 4 K: 0.07 mL."""
    assert flask_u_ml(100, 0.1) == pytest.approx(0.041, abs=0.0005)
    assert flask_u_ml(100, 0.0, temperature_k=4) == pytest.approx(0.048, abs=0.0006)
    assert flask_u_ml(100, 0.1, 0.02, 4) == pytest.approx(0.066, abs=0.0006)
