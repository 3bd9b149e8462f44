"""Fit absorbance on COD: a line or a parabola, weighted or not.

Absorbance is regressed on COD, never the reverse, and the origin is not
forced. Every reading counts as a point, standards are not averaged first.
Weights are 1, 1/x or 1/x^2 with x the standard's COD; the zero standard takes
the weight of the lowest non-zero one. With few levels, one level, a slope that
cannot be told from zero or a parabola that turns between its standards there
is no curve, and the refusal says why.

The tests beside a curve: lack of fit (pure error of replicates), Mandel's test
of the parabola against the line, and the relative standard error of the
back-calculated standards (NELAC Institute, 2017). A correlation coefficient
near one proves nothing: the cadmium data of Eurachem A5 have r = 0.997 and
fail three of these.

References
----------
Miller and Miller, Statistics and Chemometrics for Analytical Chemistry, ch. 5;
ISO 8466-1; Eurachem/CITAC Guide CG 4 (QUAM), E.4 and A5.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.special import fdtrc

from app.chemistry.curve import BackCalculated, Basis, Curve, FTest, Model, Weights, slope_g
from app.chemistry.problems import Problems
from app.errors import Fields, InputError

Floats = NDArray[np.float64]

FEWEST_LEVELS = 5
#: The smallest concentration that is not zero.
SMALLEST = 1e-6
#: A sum of squares under this share of the total is rounding, not scatter.
ROUNDING = 1e-24
EPSILON = math.ulp(1.0)
TOO_FAR_APART = "The numbers of these standards lie too far apart to make a curve."
PARAMETERS: dict[str, int] = {"linear": 2, "quadratic": 3}


@dataclass(frozen=True)
class Standard:
    """One calibration standard and its readings.

    Parameters
    ----------
    cod : float
        mg O2/L.
    absorbance : tuple of float
        Blank-corrected readings in AU, at least one.
    """

    cod: float
    absorbance: tuple[float, ...]


def standard_problems(standards: Sequence[Standard], prefix: str = "") -> Fields:
    """Return what is wrong with a set of standards, by field.

    Parameters
    ----------
    standards : sequence of Standard
        In the order given.
    prefix : str
        Put before ``standards``, e.g. ``calibration.``.

    Returns
    -------
    dict of str to list of str
    """
    wrong = Problems(prefix)
    for i, standard in enumerate(standards):
        wrong.number(f"standards.{i}.cod", standard.cod, least=0)
        if 0 < standard.cod < SMALLEST:
            wrong.add(f"standards.{i}.cod", f"is neither zero nor at least {SMALLEST:g}")
        wrong.readings(f"standards.{i}.absorbance", standard.absorbance)
    levels = len({standard.cod for standard in standards})
    if levels < FEWEST_LEVELS:
        words = "all standards are at one level" if levels == 1 else f"{levels} different standard levels"
        wrong.add("standards", f"{words}: a curve needs at least {FEWEST_LEVELS} levels")
    return wrong.fields


def fit(
    standards: Sequence[Standard], model: Model = "linear", weights: Weights = "equal", prefix: str = ""
) -> Curve:
    """Fit a calibration curve to standards.

    Parameters
    ----------
    standards : sequence of Standard
        At least five different levels.
    model : {"linear", "quadratic"}
        Line or parabola.
    weights : {"equal", "inverse", "inverse_square"}
        1, 1/x or 1/x^2.
    prefix : str
        Put before ``standards`` in the paths of an error.

    Returns
    -------
    Curve

    Raises
    ------
    InputError
        With every wrong field; or naming ``standards`` when the curve is
        hopeless.
    """
    wrong = standard_problems(standards, prefix)
    if wrong:
        raise InputError("No curve can be made from these standards.", wrong)
    cod = np.array([s.cod for s in standards for _ in s.absorbance], dtype=float)
    absorbance = np.array([a for s in standards for a in s.absorbance], dtype=float)
    lowest = min(s.cod for s in standards if s.cod > 0)
    try:
        curve = fit_points(cod, absorbance, model, _weights(cod, weights, lowest))
    except InputError as error:
        raise InputError(error.message, {f"{prefix}standards": [error.message]}) from None
    return replace(curve, weights=weights, standards=_back_calculated(curve, standards))


def _weights(cod: Floats, weights: Weights, lowest: float) -> Floats:
    if weights == "equal":
        return np.ones_like(cod)
    with np.errstate(all="ignore"):
        inverse = 1.0 / np.where(cod > 0, cod, lowest)
        return inverse if weights == "inverse" else inverse * inverse


def _back_calculated(curve: Curve, standards: Sequence[Standard]) -> tuple[BackCalculated, ...]:
    rows = []
    for standard in standards:
        mean = math.fsum(standard.absorbance) / len(standard.absorbance)
        found = curve.cod(mean)
        recovery = None if found is None or standard.cod == 0 else 100.0 * (found / standard.cod)
        rows.append(BackCalculated(standard.cod, mean, found, recovery))
    return tuple(rows)


@dataclass(frozen=True)
class _Sums:
    """Both fits at once: the coefficients of the orthogonal polynomials and what they leave."""

    basis: Basis
    factors: tuple[float, float, float]
    total: float
    line_sse: float
    parabola_sse: float


def _sums(x: Floats, y: Floats, w: Floats) -> _Sums:
    # NumPy scalars throughout: where a sum is zero the quotient is not finite and is refused by name.
    weight = w.sum()
    centre = w @ x / weight
    t = x - centre
    scale = np.abs(t).max()
    t /= scale
    wt = w * t
    first = wt @ t
    square = t * t
    alpha, beta = wt @ square / first, first / weight
    second = square - alpha * t - beta
    wsecond = w * second
    third = wsecond @ second
    c0 = w @ y / weight
    rest = y - c0
    total = (w * rest) @ rest
    c1 = wt @ rest / first
    rest = rest - c1 * t
    line = (w * rest) @ rest
    c2 = wsecond @ rest / third
    rest = rest - c2 * second
    parabola = (w * rest) @ rest
    floor = ROUNDING * ((w * y) @ y)
    return _Sums(
        Basis(
            float(centre),
            float(scale),
            float(alpha),
            float(beta),
            (float(weight), float(first), float(third)),
        ),
        (float(c0), float(c1), float(c2)),
        float(total),
        0.0 if line <= floor else float(line),
        0.0 if parabola <= floor else float(parabola),
    )


def fit_points(cod: Any, absorbance: Any, model: Model = "linear", weight: Any = None) -> Curve:
    """Fit a curve to points with weights of one's own.

    Parameters
    ----------
    cod, absorbance : array_like, shape (n,)
        One entry a reading; at least three different COD for a line, four for
        a parabola.
    model : {"linear", "quadratic"}
        Line or parabola.
    weight : array_like, shape (n,), optional
        Above zero; equal when absent.

    Returns
    -------
    Curve
        Without rows of back-calculated standards.

    Raises
    ------
    InputError
        When the slope cannot be told from zero, when the parabola turns
        between its points, or when the numbers lie too far apart.
    """
    x, y = np.asarray(cod, dtype=float), np.asarray(absorbance, dtype=float)
    w = np.ones_like(x) if weight is None else np.asarray(weight, dtype=float)
    with np.errstate(all="ignore"):
        sums = _sums(x, y, w)
        parameters = PARAMETERS[model]
        dof = len(x) - parameters
        sse = sums.line_sse if model == "linear" else sums.parabola_sse
        residual_sd = math.sqrt(sse / dof) if math.isfinite(sse) else math.nan
        _refuse_hopeless(sums, residual_sd, dof, parameters)
        coefficients, errors = _raw(sums, parameters, residual_sd)
        polynomial = _polynomial(sums, parameters)
        found = _back_calculate_all(sums.basis, polynomial, y)
        curve = Curve(
            model=model,
            weights="equal" if weight is None else "given",
            n=len(x),
            dof=dof,
            coefficients=coefficients,
            standard_errors=errors,
            residual_sd=residual_sd,
            r_squared=1.0 - sse / sums.total,
            lack_of_fit=_lack_of_fit(x, y, w, sse, parameters),
            mandel=_mandel(sums, len(x)),
            relative_standard_error_percent=relative_standard_error(x, found, parameters),
            standards=(),
            low=float(x.min()),
            high=float(x.max()),
            lowest_nonzero=float(x[x > 0].min()) if (x > 0).any() else 0.0,
            basis=sums.basis,
            polynomial=polynomial,
        )
    _refuse_turning(curve)
    return curve


def _polynomial(sums: _Sums, parameters: int) -> tuple[float, float, float]:
    c0, c1, c2 = sums.factors
    if parameters == 2:
        return c0, c1, 0.0
    return c0 - c2 * sums.basis.beta, c1 - c2 * sums.basis.alpha, c2


def _raw(sums: _Sums, parameters: int, residual_sd: float) -> tuple[tuple[float, ...], tuple[float, ...]]:
    """Return coefficients in COD and their standard errors."""
    basis, (c0, c1, c2) = sums.basis, sums.factors
    m, h = basis.centre / basis.scale, basis.scale
    rows: list[tuple[float, ...]] = [(1.0, -m), (0.0, 1.0 / h)]
    if parameters == 3:
        second = (m * m + basis.alpha * m - basis.beta, -(2.0 * m + basis.alpha) / h, 1.0 / h / h)
        rows = [(*rows[0], second[0]), (*rows[1], second[1]), (0.0, 0.0, second[2])]
    factors = (c0, c1, c2)[:parameters]
    values, errors = [], []
    for row in rows:
        values.append(math.fsum(r * c for r, c in zip(row, factors, strict=True)))
        spread = math.fsum(r * r / s for r, s in zip(row, basis.sums[:parameters], strict=True))
        errors.append(residual_sd * math.sqrt(spread))
    if not all(map(math.isfinite, (*values, *errors))):
        raise InputError(TOO_FAR_APART)
    return tuple(values), tuple(errors)


def _refuse_hopeless(sums: _Sums, residual_sd: float, dof: int, parameters: int) -> None:
    numbers = (*sums.factors, *sums.basis.sums[:parameters], sums.basis.alpha, sums.basis.beta, residual_sd)
    # The mean of equal readings is off by a rounding: a scatter of that size is none.
    flat = sums.total <= sums.basis.sums[0] * (4.0 * EPSILON * sums.factors[0]) ** 2
    if not all(map(math.isfinite, numbers)) or min(sums.basis.sums[:parameters]) <= 0 or flat:
        if flat:
            raise InputError(
                "All standards have the same absorbance: the slope is zero and nothing can be read."
            )
        raise InputError(TOO_FAR_APART)
    if slope_g(residual_sd, dof, sums.factors[1], sums.basis.sums[1]) >= 1.0:
        raise InputError(
            "The slope of these standards cannot be told from zero (Fieller's g is 1 or more): "
            "look at the points, then read or digest the standards again."
        )


def _refuse_turning(curve: Curve) -> None:
    point = curve.turning_point
    if point is not None and curve.low <= point <= curve.high:
        raise InputError(
            f"The parabola turns at {point:.4g} mg/L, between its standards, so one absorbance would "
            "mean two results: fit a straight line, or digest the standards again."
        )


def _lack_of_fit(x: Floats, y: Floats, w: Floats, sse: float, parameters: int) -> FTest | None:
    levels, where = np.unique(x, return_inverse=True)
    spare, free = len(levels) - parameters, len(x) - len(levels)
    if free < 1 or spare < 1:
        return None
    means = np.bincount(where, w * y) / np.bincount(where, w)
    rest = y - means[where]
    pure = float((w * rest) @ rest)
    if pure <= ROUNDING * float((w * y) @ y):
        return None
    f = max(sse - pure, 0.0) / spare / (pure / free)
    return FTest(f, float(fdtrc(spare, free, f)))


def _mandel(sums: _Sums, n: int) -> FTest | None:
    if n < 4 or sums.parabola_sse == 0.0:
        return None
    f = max(sums.line_sse - sums.parabola_sse, 0.0) / (sums.parabola_sse / (n - 3))
    return FTest(f, float(fdtrc(1, n - 3, f)))


def _back_calculate_all(basis: Basis, polynomial: tuple[float, float, float], y: Floats) -> Floats:
    """Turn many absorbances back at once; NaN beyond the turning point."""
    a0, a1, a2 = polynomial
    rise = y - a0
    if a2 == 0.0:
        t = rise / a1
    else:
        t = 2.0 * rise / (a1 + math.copysign(1.0, a1) * np.sqrt(a1 * a1 + 4.0 * a2 * rise))
    return basis.centre + basis.scale * t


def relative_standard_error(true: Any, found: Any, parameters: int) -> float | None:
    """Return the relative standard error of back-calculated standards.

    Parameters
    ----------
    true, found : array_like, shape (n,)
        COD of the standards and what their readings give; zero standards are
        left out.
    parameters : int
        Coefficients of the curve: 2 or 3, whatever the weights.

    Returns
    -------
    float or None
        100 sqrt(sum(((found - true) / true)^2) / (n - parameters)) in percent;
        None without degrees of freedom or with a standard that cannot be
        turned back.

    References
    ----------
    The NELAC Institute, Calculating relative standard error (2017).
    """
    x, back = np.asarray(true, dtype=float), np.asarray(found, dtype=float)
    keep = x > 0
    free = int(keep.sum()) - parameters
    if free < 1:
        return None
    with np.errstate(all="ignore"):
        ratios = (back[keep] - x[keep]) / x[keep]
        value = 100.0 * math.sqrt(float(ratios @ ratios) / free)
    return value if math.isfinite(value) else None
