"""What is said about a curve, and when nothing is."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.calibration import Standard, fit
from app.chemistry.diagnostics import findings, residuals, variance_homogeneity
from tests.chemistry.bench_run import CURVED, HIGH, SLOPE, STANDARDS
from tests.published.test_calibration import CADMIUM


def about(standards, model="linear", weights="equal", recipe=None) -> list[tuple[str, str]]:
    found = findings(fit(standards, model, weights), standards, recipe)
    return [(one.severity, one.about) for one in found]


def test_a_good_curve_is_without_reproach() -> None:
    assert about(STANDARDS, recipe=HIGH) == []


def test_cadmium_of_eurachem_scatters_more_at_the_top() -> None:
    """Source: computed apart on Eurachem A5: F(2,2) = 211, more than the 99.0 of 99 %."""
    test = variance_homogeneity(CADMIUM)
    assert (test.low, test.high) == (0.1, 0.9)
    assert test.f == pytest.approx(211, abs=0.5)
    assert test.critical == pytest.approx(99.0, abs=0.05)
    assert not test.alike
    assert ("warning", "scatter") in about(CADMIUM)
    assert ("note", "scatter") in about(CADMIUM, weights="inverse")


def test_ten_readings_at_both_ends_are_compared_with_5_351() -> None:
    """Source: F(0.99; 9, 9) = 5.351, ISO 8466-1 with ten readings at both ends."""
    ends = [Standard(x, tuple(0.001 * x + 0.001 * i for i in range(10))) for x in (50.0, 900.0)]
    test = variance_homogeneity(ends)
    assert test.critical == pytest.approx(5.351, abs=0.0006)
    assert test.f == pytest.approx(1.0)
    assert test.alike


def test_scatter_cannot_be_compared_without_replicates() -> None:
    assert variance_homogeneity(STANDARDS) is None
    assert variance_homogeneity([Standard(1.0, (1.0, 1.1)), Standard(2.0, (2.0,))]) is None
    assert variance_homogeneity([Standard(1.0, (1.0, 1.0)), Standard(2.0, (2.0, 2.1))]) is None


def test_a_bend_earns_a_quadratic_only_with_enough_levels() -> None:
    words = [f.words for f in findings(fit(CURVED), CURVED) if f.about == "bend"]
    assert len(words) == 1
    assert "earned a quadratic" in words[0]
    few = CURVED[::2] + CURVED[-2:-1]
    assert "Mandel's test, F " in words[0]
    assert "p under 0.001" in words[0]
    assert "add standards" in next(f.words for f in findings(fit(few), few) if f.about == "bend")


def test_a_parabola_without_a_bend_is_called_superfluous() -> None:
    assert ("note", "bend") in about(STANDARDS, "quadratic")
    assert about(CURVED, "quadratic") == []


def test_a_standard_off_the_curve_is_seen_by_its_replicates() -> None:
    off = [Standard(s.cod, (s.absorbance[0], s.absorbance[0] + 0.0002)) for s in STANDARDS]
    off[3] = Standard(off[3].cod, tuple(a + 0.004 for a in off[3].absorbance))
    assert ("warning", "bend") in about(off)


def test_the_wrong_sign_stops_and_comes_first() -> None:
    falling = [replace(s, absorbance=tuple(-a for a in s.absorbance)) for s in STANDARDS]
    assert about(falling, recipe=HIGH)[0] == ("stop", "slope")
    assert about(falling) == []


@pytest.mark.parametrize(("times", "told"), [(1.0, False), (0.6, True), (2.0, True)])
def test_a_slope_that_stoichiometry_does_not_allow(times: float, told: bool) -> None:
    scaled = [replace(s, absorbance=tuple(times * a for a in s.absorbance)) for s in STANDARDS]
    assert (("warning", "slope") in about(scaled, recipe=HIGH)) == told


def test_standards_that_do_not_find_themselves() -> None:
    low = [*STANDARDS, Standard(5.0, (5 * SLOPE + 0.002,))]
    assert ("warning", "recovery") in about(low)


def test_a_poor_slope_makes_intervals_too_narrow() -> None:
    values = (0.05, 0.12, 0.1, 0.28, 0.2, 0.36)
    poor = [Standard(100.0 * i, (v,)) for i, v in enumerate(values)]
    assert 0.05 < fit(poor).fieller_g < 1
    assert ("warning", "interval") in about(poor)


def test_a_lone_far_standard_carries_the_curve() -> None:
    lone = [Standard(float(x), (SLOPE * x + (-1) ** x * 1e-4,)) for x in range(10)] + [
        Standard(900.0, (0.342,))
    ]
    heavy = [f.words for f in findings(fit(lone), lone) if f.about == "leverage"]
    assert len(heavy) == 1
    assert "900" in heavy[0]


@given(
    st.sampled_from(["linear", "quadratic"]),
    st.sampled_from(["equal", "inverse", "inverse_square"]),
    st.lists(st.floats(-0.002, 0.002), min_size=7, max_size=7),
)
def test_leverages_add_up_to_the_number_of_coefficients(model, weights, errors) -> None:
    points = [Standard(s.cod, (SLOPE * s.cod + e,)) for s, e in zip(CURVED, errors, strict=True)]
    curve = fit(points, model, weights)
    rows = residuals(curve, points)
    assert sum(r.leverage for r in rows) == pytest.approx(len(curve.coefficients), rel=1e-9)
    assert np.dot([curve.weight(r.cod) for r in rows], [r.residual for r in rows]) == pytest.approx(
        0, abs=1e-12
    )


def test_leverage_equals_statsmodels() -> None:
    """Source: statsmodels, diagonal of the hat matrix and internally studentised residuals."""
    api = pytest.importorskip("statsmodels.api")
    x, y = np.array([s.cod for s in CURVED]), np.array([s.absorbance[0] for s in CURVED])
    influence = api.OLS(y, np.vander(x / 900, 3, increasing=True)).fit().get_influence()
    rows = residuals(fit(CURVED, "quadratic"), CURVED)
    assert [r.leverage for r in rows] == pytest.approx(influence.hat_matrix_diag, rel=1e-9)
    assert [r.standardised for r in rows] == pytest.approx(influence.resid_studentized_internal, rel=1e-6)


@pytest.mark.parametrize(("reach", "told"), [((20, 900), False), ((20, 901), True), ((0, 900), False)])
def test_a_working_range_beyond_the_standards_is_told(reach, told) -> None:
    found = findings(fit(STANDARDS), STANDARDS, HIGH, reach)
    assert [one.about for one in found] == (["range"] if told else [])


@pytest.mark.parametrize("weights", ["equal", "inverse"])
def test_a_standard_that_does_not_find_itself_is_named_with_what_it_found(weights) -> None:
    off = [
        Standard(50.0, (0.0200,)),
        *(Standard(x, (SLOPE * x,)) for x in (100.0, 250.0, 500.0, 750.0, 900.0)),
    ]
    off[1] = Standard(100.0, (SLOPE * 125.0,))
    words = [one.words for one in findings(fit(off, "linear", weights), off) if one.about == "recovery"]
    share = next(r.recovery_percent for r in fit(off, "linear", weights).standards if r.cod == 100.0)
    assert f"100 mg/L ({share:.0f} %)" in words[0]
    assert ("weight by 1/x" in words[0]) is (weights == "equal")
