"""Loads: exact factors, and the published toy data of a ratio estimator.

The inputs of the toy data are those of the vignette of the open library
funtimes (function beales); the estimates were computed from Beale's formula
apart from this program. The COD month is invented.
"""

from __future__ import annotations

import pytest

from app.compliance.loads import (
    estimate,
    expected_relative_error,
    load_of,
    mass_kg,
    mass_lb,
    relative_u_of_load,
)
from app.compliance.units import KG_PER_DAY_PER_MG_L_MGD, POUND_FACTOR_EXACT, POUND_FACTOR_PRINTED

pytestmark = pytest.mark.published

FLOW = [60, 50, 90, 100, 80, 90, 100, 90, 80, 70]
LOADS = {1: 33, 2: 22, 3: 44, 4: 48, 6: 44, 7: 49, 10: 36}
MONTH = (
    "420 450 480 510 430 160 190 520 440 470 500 420 150 180 510 430 460 490 520 140 170 500 420 450 480 510 "
    "130 160 490 520"
)


@pytest.mark.parametrize(
    ("cod", "mgd", "printed", "exact", "kg"),
    [
        (300, 1.0, 2502.000, 2503.6213, 1135.6235),
        (1200, 0.05, 500.400, 500.7243, 227.1247),
        (850, 0.125, 886.125, 886.6992, 402.2000),
        (4500, 0.0036, 135.108, 135.1956, 61.3237),
    ],
)
def test_pounds_and_kilograms_a_day(cod, mgd, printed, exact, kg) -> None:
    """1 lb = 0.45359237 kg, 1 gal = 3.785411784 L exactly; ordinances print 8.34."""
    assert mass_lb(cod, mgd, POUND_FACTOR_PRINTED) == pytest.approx(printed, abs=5e-4)
    assert mass_lb(cod, mgd) == pytest.approx(exact, abs=5e-5)
    assert cod * mgd * KG_PER_DAY_PER_MG_L_MGD == pytest.approx(kg, abs=5e-5)
    assert mass_kg(cod, mgd * 3785.411784) == pytest.approx(kg, abs=5e-5)
    assert pytest.approx(8.345404452, abs=5e-10) == POUND_FACTOR_EXACT


def test_a_bound_stays_a_bound_in_its_load() -> None:
    """Below 10 mg/L at 0.125 MGD is below 10.43 lb/d with the printed factor (arithmetic)."""
    assert mass_lb(10, 0.125, POUND_FACTOR_PRINTED) == pytest.approx(10.43, abs=5.1e-3)


def test_beale_on_the_toy_data() -> None:
    """Funtimes vignette: n 7 of N 10, Q 810; ratio 399.2143, Beale 399.1756."""
    found = estimate(FLOW, LOADS)
    assert (found.sampled, found.days, found.flow_m3) == (7, 10, 810)
    assert found.ratio_kg == pytest.approx(399.2143, abs=5e-5)
    assert found.beale_kg == pytest.approx(399.1756, abs=5e-5)


def test_beale_with_a_missing_flow() -> None:
    """Funtimes vignette, first flow missing and filled by the mean of the others: 394.2857 and 394.3501."""
    found = estimate([None, *FLOW[1:]], LOADS)
    assert found.filled == 1
    assert found.flow_m3 == pytest.approx(833.3333, abs=5e-5)
    assert found.ratio_kg == pytest.approx(394.2857, abs=5e-5)
    assert found.beale_kg == pytest.approx(394.3501, abs=5e-5)


def test_a_month_with_four_samples() -> None:
    """All samples on production days: the mean load is 21 % too high, the ratio is not."""
    flows = [float(q) for q in MONTH.split()]
    found = load_of(flows, [(3, 910), (10, 1180), (17, 840), (25, 1320)])
    assert found.mean_load_kg == pytest.approx(15_085.5)
    assert found.mean_concentration_kg == pytest.approx(12_431.25)
    assert found.flow_weighted_mean == pytest.approx(1064.2328, abs=5e-5)
    assert found.ratio_kg == pytest.approx(12_451.52, abs=5e-3)
    assert found.beale_kg == pytest.approx(12_457.27, abs=5e-3)
    assert found.relative_standard_error == pytest.approx(0.09877, abs=5e-6)
    low, high = found.interval_kg
    assert (high - low) / 2 / found.ratio_kg == pytest.approx(0.314, abs=5e-4)
    assert found.weak


def test_uncertainty_of_a_day_and_of_a_thinly_sampled_month() -> None:
    """Quadrature, and the standard error of a mean with finite population correction (survey sampling)."""
    assert relative_u_of_load(0.05, 0.05) == pytest.approx(0.0707, abs=5e-5)
    assert relative_u_of_load(0.04, 0.10) == pytest.approx(0.1077, abs=5e-5)
    few, many = expected_relative_error(0.5, 4, 30), expected_relative_error(0.5, 12, 30)
    assert (few[0], many[0]) == pytest.approx((0.233, 0.112), abs=5e-4)
    assert few[1] == pytest.approx(0.74, abs=5e-3)
    assert many[1] == pytest.approx(0.246, abs=5e-4)
