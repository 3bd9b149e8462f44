"""Calibration against certified data, textbooks and reference libraries."""

from __future__ import annotations

import math

import numpy as np
import pytest

from app.chemistry.calibration import Standard, fit, fit_points, relative_standard_error
from app.chemistry.curve import Curve
from app.errors import InputError
from tests.published.data import nist_strd
from tests.published.exact_least_squares import exact_fit

pytestmark = pytest.mark.published


def split(points):
    return [p[0] for p in points], [p[1] for p in points]


def singles(points) -> list[Standard]:
    return [Standard(float(x), (float(y),)) for x, y in points]


def half_width(reading) -> float:
    return (reading.high - reading.low) / 2


def test_nist_norris() -> None:
    """Source: NIST StRD Norris, certified values (linear, lower difficulty)."""
    curve = fit_points(*split(nist_strd.NORRIS))
    assert curve.coefficients == pytest.approx((-0.262323073774029, 1.00211681802045), rel=1e-11)
    assert curve.standard_errors == pytest.approx((0.232818234301152, 0.429796848199937e-03), rel=1e-11)
    assert curve.residual_sd == pytest.approx(0.884796396144373, rel=1e-11)
    assert curve.r_squared == pytest.approx(0.999993745883712, rel=1e-13)


def test_nist_pontius() -> None:
    """Source: NIST StRD Pontius, certified values (quadratic; x up to 3 000 000)."""
    curve = fit_points(*split(nist_strd.PONTIUS), model="quadratic")
    assert curve.coefficients == pytest.approx(
        (0.673565789473684e-03, 0.732059160401003e-06, -0.316081871345029e-14), rel=1e-11, abs=0
    )
    assert curve.standard_errors == pytest.approx(
        (0.107938612033077e-03, 0.157817399981659e-09, 0.486652849992036e-16), rel=1e-11, abs=0
    )
    assert curve.residual_sd == pytest.approx(0.205177424076185e-03, rel=1e-11)
    assert curve.r_squared == pytest.approx(0.999999900178537, rel=1e-14)


def test_pontius_needs_its_parabola_though_the_line_has_four_nines() -> None:
    """Source: computed on NIST Pontius with another program; R2 of a line proves nothing."""
    line = fit_points(*split(nist_strd.PONTIUS))
    parabola = fit_points(*split(nist_strd.PONTIUS), model="quadratic")
    assert line.r_squared == pytest.approx(0.99998852, abs=1e-8)
    assert line.mandel.f == pytest.approx(4218.5, abs=0.1)
    assert line.lack_of_fit.f == pytest.approx(214.7, abs=0.1)
    assert parabola.lack_of_fit.f == pytest.approx(0.811, abs=0.001)
    assert parabola.lack_of_fit.p == pytest.approx(0.67, abs=0.01)


@pytest.mark.parametrize(
    ("name", "degree"),
    [(name, 1) for name in ("NORRIS", "PONTIUS", "NOINT1", "FILIP", "WAMPLER2")]
    + [(name, 2) for name in ("NORRIS", "PONTIUS", "NOINT1", "FILIP")],
)
def test_equals_exact_rational_arithmetic_on_hard_data(name: str, degree: int) -> None:
    """Source: fractions, an independent solution without rounding, on the NIST StRD data."""
    points = getattr(nist_strd, name)
    exact = exact_fit(points, degree)
    curve = fit_points(*split(points), model="quadratic" if degree == 2 else "linear")
    assert curve.coefficients == pytest.approx(exact.coefficients, rel=1e-8, abs=1e-10)
    assert curve.r_squared == pytest.approx(exact.r_squared, rel=1e-10)
    if exact.residual_sd:
        assert curve.standard_errors == pytest.approx(exact.standard_errors, rel=1e-8)
        assert curve.residual_sd == pytest.approx(exact.residual_sd, rel=1e-9)


def test_a_parabola_that_turns_between_its_points_is_refused() -> None:
    """Source: exact arithmetic places the turning point of NIST StRD Wampler2 inside its span."""
    points = nist_strd.WAMPLER2
    _, b1, b2 = exact_fit(points, 2).coefficients
    assert min(points)[0] < -b1 / (2 * b2) < max(points)[0]
    with pytest.raises(InputError, match="turns"):
        fit_points(*split(points), model="quadratic")


CADMIUM = [
    Standard(0.1, (0.028, 0.029, 0.029)),
    Standard(0.3, (0.084, 0.083, 0.081)),
    Standard(0.5, (0.135, 0.131, 0.133)),
    Standard(0.7, (0.180, 0.181, 0.183)),
    Standard(0.9, (0.215, 0.230, 0.216)),
]


def test_eurachem_a5_cadmium() -> None:
    """Source: Eurachem/CITAC Guide CG 4 (QUAM), example A5, cadmium release."""
    curve = fit(CADMIUM)
    assert curve.coefficients == pytest.approx((0.0087, 0.2410), abs=5e-5)
    assert curve.standard_errors == pytest.approx((0.0029, 0.0050), abs=5e-5)
    assert curve.residual_sd == pytest.approx(0.005486, abs=5e-7)
    assert math.sqrt(curve.r_squared) == pytest.approx(0.9972, abs=1e-4)
    assert curve.n == 15
    read = curve.read([0.0712, 0.0716])
    assert read.cod == pytest.approx(0.260, abs=5e-4)
    assert read.u == pytest.approx(0.018, abs=5e-4)
    assert read.u == pytest.approx(0.017845, abs=5e-6)
    assert half_width(read) == pytest.approx(0.03855, abs=5e-6)


def test_eurachem_a5_is_a_curve_that_three_tests_object_to() -> None:
    """Source: computed on the A5 data with another program; r = 0.997 and yet."""
    curve = fit(CADMIUM)
    assert curve.lack_of_fit.f == pytest.approx(4.885, abs=0.001)
    assert curve.lack_of_fit.p == pytest.approx(0.024, abs=0.001)
    assert curve.mandel.f == pytest.approx(15.33, abs=0.01)


FLUORESCENCE = [(0, 2.1), (2, 5.0), (4, 9.0), (6, 12.6), (8, 17.3), (10, 21.0), (12, 24.7)]
FLUORESCENCE_EXTENDED = [*FLUORESCENCE, (14, 28.4), (16, 31.0), (18, 32.9), (20, 33.9)]


def test_miller_fluorescence() -> None:
    """Source: Miller and Miller, Statistics and Chemometrics, ch. 5, fluorescence of fluorescein."""
    curve = fit(singles(FLUORESCENCE))
    assert curve.coefficients == pytest.approx((1.5179, 1.9304), abs=5e-5)
    assert curve.standard_errors == pytest.approx((0.2949, 0.0409), abs=5e-5)
    # Printed 0.4329 from rounded sums (0.9368 / 5): one unit of the last printed digit.
    assert curve.residual_sd == pytest.approx(0.4329, abs=1e-4)
    assert math.sqrt(curve.r_squared) == pytest.approx(0.9989, abs=5e-5)
    assert curve.mandel.f == pytest.approx(1.56, abs=0.005)


@pytest.mark.parametrize(
    ("intensity", "readings", "found", "half"),
    [
        (2.9, 1, 0.72, 0.68),
        (13.5, 1, 6.21, 0.62),
        (23.0, 1, 11.13, 0.68),
        (2.9, 4, 0.72, 0.46),
        (13.5, 4, 6.21, 0.36),
        (23.0, 4, 11.13, 0.46),
    ],
)
def test_miller_fluorescence_read_back(intensity: float, readings: int, found: float, half: float) -> None:
    """Source: Miller and Miller, ch. 5: concentrations and their 95 % limits, one and four readings."""
    read = fit(singles(FLUORESCENCE)).read([intensity] * readings)
    assert read.cod == pytest.approx(found, abs=0.005)
    assert half_width(read) == pytest.approx(half, abs=0.005)


def test_miller_curved_fluorescence() -> None:
    """Source: Miller and Miller, ch. 5, the same with four more points; quadratic as printed there.

    The line passes with r = 0.992 and is refused by Mandel's test at 99 %
    (11.26); of the two roots of 28.4 the near one is kept, and 45 has none.
    """
    line = fit(singles(FLUORESCENCE_EXTENDED))
    assert math.sqrt(line.r_squared) == pytest.approx(0.99236, abs=5e-6)
    assert line.mandel.f == pytest.approx(16.10, abs=0.005)
    assert line.mandel.p < 0.01
    curve = fit(singles(FLUORESCENCE_EXTENDED), "quadratic")
    assert curve.coefficients == pytest.approx((0.87273, 2.328485, -0.0310606), rel=5e-6)
    assert curve.residual_sd == pytest.approx(0.9070, abs=5e-5)
    assert curve.turning_point == pytest.approx(37.48, abs=0.005)
    assert curve.read([28.4]).cod == pytest.approx(14.707, abs=5e-4)
    assert curve.read([45.0]) is None


MASSART_MEANS = [(0, 4.0), (10, 21.2), (20, 44.6), (30, 61.8), (40, 78.0), (50, 105.2)]


@pytest.mark.parametrize(
    ("signal", "readings", "found", "u", "half"),
    [
        (15, 1, 6.09381, 1.767278, 4.906751),
        (90, 1, 43.93983, 1.767747, 4.908053),
        (90, 5, 43.93983, 1.141204, 3.168489),
    ],
)
def test_massart_seven_digits(signal: float, readings: int, found: float, u: float, half: float) -> None:
    """Source: Massart et al., Handbook of Chemometrics and Qualimetrics A (1997), ch. 8, example 1."""
    read = fit(singles(MASSART_MEANS)).read([float(signal)] * readings)
    assert read.cod == pytest.approx(found, rel=1e-6)
    assert read.u == pytest.approx(u, rel=1e-6)
    assert half_width(read) == pytest.approx(half, rel=1e-6)


@pytest.mark.parametrize(
    ("signal", "weight", "found", "u", "half"),
    [(15, 1.67, 5.865367, 0.8926109, 2.478285), (90, 0.145, 44.06025, 2.829162, 7.855012)],
)
def test_massart_weighted_seven_digits(
    signal: float, weight: float, found: float, u: float, half: float
) -> None:
    """Source: Massart et al. 1997, ch. 8, example 3: level means weighted by 1/s2 as printed."""
    means = [(0, 4.0), (10, 21.2), (20, 44.6), (30, 61.8), (40, 78.0), (50, 105.2)]
    curve = fit_points(*split(means), weight=[1.984, 1.417, 1.262, 0.372, 0.199, 0.109])
    read = curve.read([float(signal)], weight=weight)
    assert read.cod == pytest.approx(found, rel=1e-6)
    assert read.u == pytest.approx(u, rel=1e-6)
    assert half_width(read) == pytest.approx(half, rel=1e-6)


def test_miller_weighted_table() -> None:
    """Source: Miller and Miller, ch. 5, weighted regression example (data from memory, recomputed)."""
    points = [(0, 0.009), (2, 0.158), (4, 0.301), (6, 0.472), (8, 0.577), (10, 0.739)]
    spread = np.array([0.001, 0.004, 0.010, 0.013, 0.017, 0.022])
    weight = 1 / spread**2 / np.mean(1 / spread**2)
    assert weight == pytest.approx([5.535, 0.346, 0.055, 0.033, 0.019, 0.011], abs=0.001)
    plain, weighted = fit_points(*split(points)), fit_points(*split(points), weight=weight)
    assert plain.coefficients == pytest.approx((0.0133, 0.0725), abs=5e-5)
    assert weighted.coefficients == pytest.approx((0.0091, 0.0738), abs=5e-5)
    assert [plain.cod(0.100), weighted.cod(0.100)] == pytest.approx([1.20, 1.23], abs=0.005)
    assert [plain.cod(0.600), weighted.cod(0.600)] == pytest.approx([8.09, 8.01], abs=0.005)


def test_relative_standard_error_of_the_nelac_note() -> None:
    """Source: The NELAC Institute, Calculating relative standard error (2017): 12.83 % for a line."""
    true, found = [0.05, 0.5, 2.5, 5, 10], [0.0582, 0.4396, 2.304, 4.876, 10.34]
    assert relative_standard_error(true, found, 2) == pytest.approx(12.83, abs=0.005)
    assert relative_standard_error(true, found, 3) == pytest.approx(15.72, abs=0.005)
    assert relative_standard_error([0, *true], [0.004, *found], 2) == pytest.approx(12.83, abs=0.005)


def test_din_32645_reading() -> None:
    """Source: DIN 32645 example data; half-width 0.07434 at 99 % from a commercial evaluation (chemCal)."""
    read = fit(singles(DIN_32645)).read([3500.0], confidence=0.99)
    assert half_width(read) == pytest.approx(0.07434, abs=5e-6)


DIN_32645 = [
    (0.05, 3060), (0.10, 3522), (0.15, 3707), (0.20, 4280), (0.25, 5058),
    (0.30, 5510), (0.35, 5703), (0.40, 6205), (0.45, 7156), (0.50, 7178),
]  # fmt: skip

COD_LINE = [
    (0, 0.0005),
    (50, 0.0192),
    (100, 0.0379),
    (300, 0.1138),
    (500, 0.1904),
    (700, 0.2655),
    (900, 0.3421),
]


def test_a_cod_curve_as_computed_by_hand() -> None:
    """Source: constructed curve, sums done apart from this program."""
    curve = fit(singles(COD_LINE))
    assert curve.coefficients == pytest.approx((1.909e-4, 3.7963e-4), rel=2e-4)
    assert curve.residual_sd == pytest.approx(3.576e-4, abs=5e-8)
    assert math.sqrt(curve.r_squared) == pytest.approx(0.999997, abs=5e-7)
    assert curve.relative_standard_error_percent == pytest.approx(0.389, abs=0.0005)
    read = curve.read([0.2002, 0.2021, 0.1995])
    assert read.cod == pytest.approx(527.90, abs=0.005)
    assert read.u == pytest.approx(0.675, abs=0.0005)


WEIGHTED = [
    Standard(0.0, (-0.0023, 0.0007, 0.0008)),
    Standard(50.0, (0.021, 0.0174, 0.0193)),
    Standard(100.0, (0.0385, 0.0392)),
    Standard(250.0, (0.0962, 0.0963, 0.0939)),
    Standard(500.0, (0.189,)),
    Standard(750.0, (0.2816, 0.280, 0.2796)),
    Standard(900.0, (0.3352, 0.3346, 0.3374)),
]


@pytest.mark.parametrize("weights", ["equal", "inverse", "inverse_square"])
@pytest.mark.parametrize("model", ["linear", "quadratic"])
def test_equals_statsmodels(model: str, weights: str) -> None:
    """Source: statsmodels, WLS: coefficients, errors, R2, F test of the parabola, variance of the mean."""
    regression = pytest.importorskip("statsmodels.regression.linear_model")
    x = np.array([s.cod for s in WEIGHTED for _ in s.absorbance])
    y = np.array([a for s in WEIGHTED for a in s.absorbance])
    power = {"equal": 0, "inverse": 1, "inverse_square": 2}[weights]
    w = np.where(x > 0, x, 50.0) ** -power
    design = np.vander(x, 3 if model == "quadratic" else 2, increasing=True)
    theirs = regression.WLS(y, design, weights=w).fit()
    ours = fit(WEIGHTED, model, weights)
    assert ours.coefficients == pytest.approx(theirs.params, rel=1e-7)
    assert ours.standard_errors == pytest.approx(theirs.bse, rel=1e-7)
    assert ours.residual_sd == pytest.approx(math.sqrt(theirs.scale), rel=1e-9)
    assert ours.r_squared == pytest.approx(theirs.rsquared, rel=1e-12)
    line = regression.WLS(y, np.vander(x, 2, increasing=True), weights=w).fit()
    parabola = regression.WLS(y, np.vander(x, 3, increasing=True), weights=w).fit()
    f, p, _ = parabola.compare_f_test(line)
    assert (ours.mandel.f, ours.mandel.p) == pytest.approx((f, p), rel=1e-6)
    levels = np.unique(x, return_inverse=True)[1]
    full = regression.WLS(y, np.eye(levels.max() + 1)[levels], weights=w).fit()
    f, p, _ = full.compare_f_test(theirs)
    assert (ours.lack_of_fit.f, ours.lack_of_fit.p) == pytest.approx((f, p), rel=1e-6)
    at = np.vander([333.0], design.shape[1], increasing=True)
    assert ours.line_variance(333.0) == pytest.approx(theirs.get_prediction(at).se_mean[0] ** 2, rel=1e-7)


@pytest.mark.parametrize("model", ["linear", "quadratic"])
def test_uncertainty_of_a_reading_equals_first_order_propagation(model: str) -> None:
    """Source: the uncertainties library; correlated coefficients and reading, propagated through the root."""
    uncertainties = pytest.importorskip("uncertainties")
    umath = pytest.importorskip("uncertainties.umath")
    curve = fit(WEIGHTED, model)
    covariance = _covariance(curve)
    b = uncertainties.correlated_values(curve.coefficients, covariance)
    y = uncertainties.ufloat(0.1873, curve.residual_sd / math.sqrt(3))
    if model == "linear":
        x = (y - b[0]) / b[1]
    else:
        x = (-b[1] + umath.sqrt(b[1] ** 2 - 4 * b[2] * (b[0] - y))) / (2 * b[2])
    read = curve.read([0.1870, 0.1873, 0.1876])
    assert read.cod == pytest.approx(x.n, rel=1e-9)
    assert read.u == pytest.approx(x.s, rel=1e-6)


def _covariance(curve: Curve) -> np.ndarray:
    x = np.array([s.cod for s in WEIGHTED for _ in s.absorbance])
    design = np.vander(x, len(curve.coefficients), increasing=True)
    return np.linalg.inv(design.T @ design) * curve.residual_sd**2
