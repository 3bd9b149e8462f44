"""Outlier tables and critical ranges against published values and simulation."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import special, stats

from app.chemistry.repeatability import Repeatability
from app.chemistry.replicates import (
    DIXON_R10,
    RANGE_FACTOR,
    dixon,
    grubbs,
    grubbs_critical,
    screen,
)

pytestmark = pytest.mark.published

# n: two-sided 90, 95, 99 %; one-sided 95, 99 %
GRUBBS = {
    3: (1.1531, 1.1543, 1.1547, 1.1531, 1.1546),
    4: (1.4625, 1.4813, 1.4963, 1.4625, 1.4925),
    5: (1.6714, 1.7150, 1.7637, 1.6714, 1.7489),
    6: (1.8221, 1.8871, 1.9728, 1.8221, 1.9442),
    7: (1.9381, 2.0200, 2.1391, 1.9381, 2.0973),
    8: (2.0317, 2.1266, 2.2744, 2.0317, 2.2208),
    9: (2.1096, 2.2150, 2.3868, 2.1096, 2.3231),
    10: (2.1761, 2.2900, 2.4821, 2.1761, 2.4097),
}


@pytest.mark.parametrize("n", GRUBBS)
def test_grubbs_table(n: int) -> None:
    """Source: published tables (ASTM E178 one-sided; two-sided of several textbooks)."""
    found = [grubbs_critical(n, c) for c in (0.90, 0.95, 0.99)]
    found += [grubbs_critical(n, c, two_sided=False) for c in (0.95, 0.99)]
    assert found == pytest.approx(GRUBBS[n], abs=6e-5)


@pytest.mark.parametrize("n", range(3, 11))
@pytest.mark.parametrize("confidence", [90, 95, 99])
def test_dixon_table_against_quadrature(n: int, confidence: int) -> None:
    """Source: the distribution of r10 for normal values, integrated here; published values err by 0.006.

    P(upper r10 > r) = n (n-1) (n-2) times the integral over x1 < v of
    phi(x1) phi(v) [Phi(v) - Phi(x1)]^(n-3) [1 - Phi((v - r x1) / (1 - r))];
    the two ends share the risk (where r < 1/2 both may exceed it, rarely).
    """
    risk = 1 - confidence / 100
    exact = _solve(lambda r: 2 * _upper_tail(n, r) - risk)
    assert DIXON_R10[confidence][n] == pytest.approx(exact, abs=0.006)


NODES, WEIGHTS = special.roots_legendre(100)


def _upper_tail(n: int, r: float) -> float:
    v = 8.0 * NODES[:, None]
    half = (v + 9.0) / 2.0
    x = half * NODES + (v - 9.0) / 2.0
    density = np.exp(-(x**2 + v**2) / 2) / (2 * np.pi) * (special.ndtr(v) - special.ndtr(x)) ** (n - 3)
    inner = (density * special.ndtr(-(v - r * x) / (1 - r)) * half) @ WEIGHTS
    return n * (n - 1) * (n - 2) * float(8.0 * WEIGHTS @ inner)


def _solve(function) -> float:
    low, high = 0.2, 0.9999
    for _ in range(40):
        middle = (low + high) / 2
        low, high = (middle, high) if function(middle) > 0 else (low, middle)
    return low


def test_range_factors_are_the_studentised_range() -> None:
    """Source: scipy, studentized_range at infinite degrees of freedom; ISO 5725-6 prints 2.8, 3.3, 3.6 ..."""
    for p, factor in RANGE_FACTOR.items():
        assert factor == pytest.approx(stats.studentized_range.ppf(0.95, p, 1e9), abs=6e-4)


NITRITE = [0.403, 0.410, 0.401, 0.380]
NITRITE_SEVEN = [*NITRITE, 0.400, 0.413, 0.408]


def test_miller_nitrite() -> None:
    """Source: Miller and Miller, ch. 3, nitrite in river water: kept among four, rejected among seven."""
    four, seven = dixon(NITRITE), dixon(NITRITE_SEVEN)
    assert (four.ratio, seven.ratio) == (pytest.approx(0.700, abs=5e-4), pytest.approx(0.606, abs=5e-4))
    assert four.ratio < DIXON_R10[95][4]
    assert seven.ratio > DIXON_R10[95][7]
    four, seven = grubbs(NITRITE), grubbs(NITRITE_SEVEN)
    assert (four.g, seven.g) == (pytest.approx(1.432, abs=6e-4), pytest.approx(2.034, abs=6e-4))
    assert four.g < grubbs_critical(4)
    assert seven.g > grubbs_critical(7)
    assert dixon(NITRITE_SEVEN).index == seven.index == 3


@pytest.mark.parametrize(("sigma", "value", "agrees"), [(10.0, 510.0, True), (8.0, 502.0, False)])
def test_the_critical_range_decides_between_mean_and_median(sigma: float, value: float, agrees: bool) -> None:
    """Source: ISO 5725-6: 498, 502, 530 have range 32; critical 33 at sigma 10, 26.5 at sigma 8."""
    found = screen([498.0, 502.0, 530.0], [0, 1, 2], lambda a: a, Repeatability(sigma, 0.0))
    assert (found.absorbance, found.agree) == (pytest.approx(value), agrees)
    assert found.suspect == (None if agrees else 2)
    assert found.used == (0, 1, 2)


def test_rounded_values_would_fool_the_tests_but_not_the_range() -> None:
    """Source: arithmetic: 500, 500, 504 have r10 = 1.000 and G = 1.1547, and agree to 0.8 %."""
    values = [500.0, 500.0, 504.0]
    assert dixon(values).ratio == 1.0
    assert grubbs(values).g == pytest.approx(1.1547, abs=5e-5)
    assert screen(values, [0, 1, 2], lambda a: a, Repeatability(4.0, 0.025)).agree


def test_good_triplicates_often_look_like_two_close_and_one_far() -> None:
    """Source: simulation of clean normal triplicates: median ratio 0.73, above 0.886 in one of five."""
    rng = np.random.default_rng(20310712)
    ratios = np.array([dixon(row).ratio for row in rng.normal(size=(20000, 3)).tolist()])
    assert np.median(ratios) == pytest.approx(0.73, abs=0.015)
    assert np.mean(ratios > 0.886) == pytest.approx(0.20, abs=0.015)


def test_five_tubes_in_a_hundred_good_sets_are_called_disagreeing() -> None:
    """Source: the critical range is a 95 % point: simulated good triplicates disagree in 5 % of sets."""
    rng = np.random.default_rng(20310713)
    repeatability = Repeatability(4.0, 0.025)
    sets = rng.normal(400.0, repeatability.sigma(400.0), size=(8000, 3)).tolist()
    share = sum(not screen(row, [0, 1, 2], lambda a: a, repeatability).agree for row in sets) / len(sets)
    assert share == pytest.approx(0.05, abs=0.008)
