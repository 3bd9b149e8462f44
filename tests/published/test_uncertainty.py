"""Budgets and rounding against the GUM, Nordtest, ASTM E29 and reference libraries."""

from __future__ import annotations

import math
from decimal import Decimal

import numpy as np
import pytest
from scipy import stats

from app.chemistry.calculate import calculate
from app.chemistry.curve import t_quantile
from app.chemistry.repeatability import Repeatability
from app.chemistry.rounding import bound_text, plain, reported_cod, reported_u, significant
from app.chemistry.uncertainty import (
    NORMAL_95,
    Component,
    bias_from_controls,
    combine,
    coverage_factor,
    whole_dof,
)
from app.journal.kinds.settings import DEFAULTS
from tests.chemistry.bench_run import STANDARDS, run, tubes

pytestmark = pytest.mark.published

GUM_G_4_1 = (Component("one", 0.25, 9), Component("two", 0.57, 4), Component("three", 0.82, 14))


def test_gum_g_4_1() -> None:
    """Source: JCGM 100:2008, G.4.1: 0.25 (n 10), 0.57 (n 5), 0.82 (n 15): u 1.03, 19.0, U 2.2 (k 2.09).

    Exactly it is 18.9987; our rule (three decimals, then truncate) takes 18
    for the factor, 2.10 instead of 2.09.
    """
    budget = combine(GUM_G_4_1)
    assert budget.u == pytest.approx(1.03, abs=0.005)
    assert budget.dof == pytest.approx(19.0, abs=0.05)
    assert budget.dof == pytest.approx(18.9987, abs=5e-5)
    assert budget.coverage_factor == pytest.approx(stats.t.ppf(0.975, 18), rel=1e-12)
    assert budget.coverage_factor == pytest.approx(2.09, abs=0.011)
    assert coverage_factor(18.99996) == pytest.approx(2.09, abs=0.005)
    assert budget.expanded_u == pytest.approx(2.2, abs=0.05)


def test_gum_h_1_end_gauge() -> None:
    """Source: JCGM 100:2008, H.1, Table H.1: 25, 9.7, 2.9, 16.6 nm: u_c 32 nm, 16 degrees of freedom.

    The GUM truncates 16.7; k(99 %) 2.92 there, at 95 % 2.12.
    """
    parts = (
        Component("standard", 25.0, 18),
        Component("difference", 9.7, 25.6),
        Component("expansion coefficients", 2.9, 50),
        Component("temperatures", 16.6, 2),
    )
    budget = combine(parts)
    assert budget.u == pytest.approx(32.0, abs=0.5)
    assert math.floor(budget.dof) == 16
    assert t_quantile(16, 0.99) == pytest.approx(2.92, abs=0.005)
    assert budget.coverage_factor == pytest.approx(2.12, abs=0.005)


def test_the_gum_example_truncates_to_the_safe_side() -> None:
    """Source: JCGM 100:2008, G.4.1, prints 19.0; exactly 18.9987, so 18; only rounding noise becomes 19."""
    assert [whole_dof(dof) for dof in (18.9987, 18.99996, 19.0, 0.4, 16.7)] == [18, 19, 19, 1, 16]


def test_eurachem_a1_standard() -> None:
    """Source: Eurachem/CITAC CG 4, example A1: 100.28 mg, 99.99 %, 100 mL: 1002.7 mg/L, u 0.9 mg/L.

    Standard uncertainties there: 0.05 mg, 0.000058, 0.07 mL (the flask's is checked with the glassware).
    """
    cod = 100.28 * 0.9999 / 0.100
    parts = (
        Component("mass", cod * 0.05 / 100.28),
        Component("purity", cod * 0.000058 / 0.9999),
        Component("volume", cod * 0.07 / 100),
    )
    budget = combine(parts)
    assert cod == pytest.approx(1002.7, abs=0.05)
    assert budget.u == pytest.approx(0.86, abs=0.005)
    assert plain(significant(budget.u, 1)) == "0.9"
    assert max(zip(budget.shares(), parts, strict=True))[1].name == "volume", "as its chart shows"


def test_nordtest_top_down() -> None:
    """Source: Nordtest TR 537 arithmetic: 3.5, 2.5 and 0.8 % give 4.375 %, expanded (k 2) 8.75 %."""
    budget = combine((Component("within lab", 3.5), Component("bias", 2.5), Component("reference", 0.8)))
    assert budget.u == pytest.approx(4.375, abs=0.0006)
    assert 2 * budget.u == pytest.approx(8.75, abs=0.001)


def test_a_budget_computed_by_hand() -> None:
    """Source: worked by hand: 0.128, 0.088, 0.039, 0.231 % and bias 2.5 % (11 dof): 2.516 %, 11.3, k 2.20."""
    parts = (
        Component("line", 0.128, 5),
        Component("dilution", 0.088),
        Component("standards", 0.039),
        Component("tubes", 0.231),
        Component("bias", 2.5, 11),
    )
    budget = combine(parts)
    assert budget.u == pytest.approx(2.516, abs=0.0006)
    assert budget.dof == pytest.approx(11.3, abs=0.05)
    assert budget.coverage_factor == pytest.approx(2.20, abs=0.005)
    assert budget.shares()[-1] == pytest.approx(0.988, abs=0.001)
    assert sum(budget.shares()) == pytest.approx(1.0)
    assert reported_cod(5279.0) == 5280
    assert reported_u(5279.0 * budget.expanded_u / 100) == 290


def test_quadrature_equals_the_uncertainties_library() -> None:
    """Source: the uncertainties library, a product of independent factors to first order."""
    uncertainties = pytest.importorskip("uncertainties")
    cod = uncertainties.ufloat(527.9, 3.1) * uncertainties.ufloat(10, 0.04) * uncertainties.ufloat(1, 0.02)
    parts = (Component("tube", 31.0), Component("dilution", 5279 * 0.004), Component("bias", 5279 * 0.02))
    assert combine(parts).u == pytest.approx(cod.s, rel=1e-12)


def test_a_runs_budget_is_the_propagation_of_its_whole_equation() -> None:
    """Source: the uncertainties library on COD = F x f_standard x f_bias x ((A - b0)/b1 + tube).

    b0 and b1 are correlated as numpy's least squares of the standards says; A is what was read.
    """
    uncertainties = pytest.importorskip("uncertainties")
    found = calculate(run(tubes("S", 431.0, 437.0, 428.0, dilution_factor=10.0, dilution_relative_u=0.004)))
    (sample,) = found.samples
    x = np.array([s.cod for s in STANDARDS])
    y = np.array([s.absorbance[0] for s in STANDARDS])
    (b1, b0), covariance = np.polyfit(x, y, 1, cov=True)
    slope, intercept = uncertainties.correlated_values((b1, b0), covariance)
    scatter = math.hypot(4.0, 0.025 * sample.in_tube) / math.sqrt(3)
    in_tube = (sample.absorbance - intercept) / slope + uncertainties.ufloat(0, scatter)
    factors = [uncertainties.ufloat(1, u) for u in (0.004, 0.005, 0.02)]
    cod = 10.0 * in_tube * math.prod(factors[1:], start=factors[0])
    assert sample.cod == pytest.approx(cod.n, rel=1e-9)
    assert sample.budget.u == pytest.approx(cod.s, rel=1e-6)
    shares = dict(zip((p.name for p in sample.budget.components), sample.budget.shares(), strict=True))
    by_bias = (cod.error_components()[factors[2]] / cod.s) ** 2
    assert shares["bias"] == pytest.approx(by_bias, rel=1e-6)


def test_the_starting_repeatability_lies_where_one_laboratory_of_the_method_lies() -> None:
    """Source: EPA 410.4 rev. 2.0, 13: S = 0.050 T + 4.391 between laboratories; one lab 50 to 75 % of it.

    Its mean line X = 0.966 T - 1.773 gives 94.83 at 100 mg/L. Our start (4 mg/L and 2.5 %) is common
    practice; over the method's levels it is not far below what one laboratory showed, nor above.
    """
    scatter = Repeatability(DEFAULTS["repeatability"]["a"], DEFAULTS["repeatability"]["k"], None)
    assert pytest.approx(94.83, abs=0.01) == 0.966 * 100 - 1.773
    assert pytest.approx(9.39, abs=0.01) == 0.050 * 100 + 4.391
    shares = [scatter.sigma(t) / (0.050 * t + 4.391) for t in (18, 50, 100, 229)]
    assert all(0.4 <= share <= 0.8 for share in shares)


@pytest.mark.parametrize("dof", [1, 2, 3, 5, 11, 30, 200, 999_999])
def test_coverage_factors_are_students_t(dof: int) -> None:
    """Source: scipy's t distribution, 97.5 % point; the normal 1.959964 where nothing is finite."""
    assert coverage_factor(float(dof)) == pytest.approx(stats.t.ppf(0.975, dof), rel=1e-9)
    assert coverage_factor(None) == NORMAL_95 == pytest.approx(1.959964, abs=5e-7)


@pytest.mark.parametrize(
    ("value", "digits", "expected"),
    [
        (0.5, 1, 0.5),
        (0.25, 1, 0.2),
        (0.35, 1, 0.4),
        (124.5, 3, 124),
        (125.5, 3, 126),
        (1.25, 2, 1.2),
        (1.35, 2, 1.4),
        (2.675, 3, 2.68),
    ],
)
def test_half_goes_to_even_on_the_decimal_that_is_seen(value: float, digits: int, expected: float) -> None:
    """Source: ASTM E29, rounding method: ties to even; binary round() makes 2.67 of 2.675."""
    assert significant(value, digits) == Decimal(str(expected))


@pytest.mark.parametrize(
    ("cod", "text"),
    [
        (12849.97, "12800"),
        (184.5, "184"),
        (185.5, "186"),
        (54.75, "54.8"),
        (9.96, "10"),
        (8.65, "8.6"),
        (0.0, "0.0"),
    ],
)
def test_results_carry_three_figures_and_two_below_ten(cod: float, text: str) -> None:
    """Source: an EPA contract sheet for method 410.4 (1999): two figures below 10 mg/L, three above."""
    assert plain(reported_cod(cod)) == text


def test_a_bound_is_that_of_the_sample() -> None:
    """Source: arithmetic: reporting limit 20, dilution 50, net 12 in the tube is "< 1000", not "< 20"."""
    assert bound_text("<", 20, 50) == "< 1000"


def test_bias_of_control_samples() -> None:
    """Source: Nordtest TR 537: root mean square of the deviations and the reference's own uncertainty."""
    bias = bias_from_controls([98.0, 103.0, 101.0, 96.0], 0.008)
    assert bias.relative_u == pytest.approx(math.sqrt((4 + 9 + 1 + 16) / 4 / 1e4 + 0.008**2), rel=1e-12)
    assert (bias.dof, bias.enough) == (3, False)
