"""What is the matter with a curve, in words, and what to do about it.

A correlation coefficient near one is no evidence. These look at what can go
wrong: scatter that grows along the range (ISO 8466-1: F test of the variances
at both ends, 99 %), points that carry the curve alone (leverage), a bend that a
line does not follow (lack of fit, Mandel), a slope so uncertain that intervals
are too narrow (Fieller's g), standards that do not find themselves again, and a
slope that stoichiometry does not allow.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from scipy.special import fdtrc, fdtri

from app.chemistry.calibration import Standard
from app.chemistry.curve import Curve, FTest
from app.chemistry.recipe import Recipe, slope_band

Severity = Literal["note", "warning", "stop"]

#: Risk of the tests that change a model, after ISO 8466-1.
SIGNIFICANT = 0.01
#: Above it the interval of a reading is no longer that of first order.
LARGE_G = 0.05
#: Standards that a parabola needs before it is offered.
LEVELS_FOR_PARABOLA = 6
#: Back-calculated standards of Standard Methods 4020 B, in percent.
RECOVERY_PERCENT = (90.0, 110.0)
#: Usual limit of the relative standard error, in percent.
LARGE_RSE = 20.0
#: Leverage beyond this many times its mean marks a point that carries the curve.
LARGE_LEVERAGE = 3.0


@dataclass(frozen=True)
class VarianceTest:
    """Whether readings scatter alike at both ends of the range.

    Parameters
    ----------
    low, high : float
        COD of the two levels compared, mg/L.
    f : float
        Larger variance over the smaller.
    critical : float
        F at 99 % for their degrees of freedom.
    p : float
        Chance of a ratio as large in the direction seen.
    alike : bool
        Whether the ratio stays at or under the critical value.
    """

    low: float
    high: float
    f: float
    critical: float
    p: float
    alike: bool


def _variance(values: Sequence[float]) -> float:
    mean = math.fsum(values) / len(values)
    return math.fsum((v - mean) ** 2 for v in values) / (len(values) - 1)


def variance_homogeneity(standards: Sequence[Standard]) -> VarianceTest | None:
    """Compare the scatter at the lowest and highest replicated level.

    Parameters
    ----------
    standards : sequence of Standard
        Readings of one COD are taken together.

    Returns
    -------
    VarianceTest or None
        None where fewer than two levels have two readings, or one of both
        does not scatter at all.

    References
    ----------
    ISO 8466-1: ten readings at both ends, F test at 99 %.
    """
    levels: dict[float, list[float]] = {}
    for standard in standards:
        levels.setdefault(standard.cod, []).extend(standard.absorbance)
    replicated = sorted(cod for cod, values in levels.items() if len(values) > 1)
    if len(replicated) < 2:
        return None
    low, high = replicated[0], replicated[-1]
    ends = [(_variance(levels[cod]), len(levels[cod]) - 1) for cod in (high, low)]
    (above, above_dof), (below, below_dof) = ends if ends[0][0] >= ends[1][0] else ends[::-1]
    if below == 0.0:
        return None
    f = above / below
    critical = float(fdtri(above_dof, below_dof, 1.0 - SIGNIFICANT))
    return VarianceTest(low, high, f, critical, float(fdtrc(above_dof, below_dof, f)), f <= critical)


@dataclass(frozen=True)
class Residual:
    """One reading of a standard beside the curve.

    Parameters
    ----------
    cod, absorbance : float
        The reading.
    residual : float
        Absorbance less that of the curve, in AU.
    residual_mg_l : float
        The same in mg/L, by the slope there.
    standardised : float
        In standard deviations, leverage counted; 0 for a perfect fit.
    leverage : float
        Share of its own absorbance that the curve takes from this reading.
    """

    cod: float
    absorbance: float
    residual: float
    residual_mg_l: float
    standardised: float
    leverage: float


def residuals(curve: Curve, standards: Sequence[Standard]) -> tuple[Residual, ...]:
    """Return every reading's residual and leverage, for the picture under the curve.

    Parameters
    ----------
    curve : Curve
        Fitted to these standards.
    standards : sequence of Standard
        In the order given.

    Returns
    -------
    tuple of Residual
    """
    return tuple(_residual(curve, s.cod, a) for s in standards for a in s.absorbance)


def _residual(curve: Curve, cod: float, absorbance: float) -> Residual:
    basis, weight = curve.basis, curve.weight(cod)
    t = (cod - basis.centre) / basis.scale
    polynomials = (1.0, t, t * t - basis.alpha * t - basis.beta)
    terms = [p * p / s for p, s in zip(polynomials, basis.sums, strict=True)]
    leverage = weight * sum(terms[: len(curve.coefficients)])
    rest = absorbance - curve.absorbance(cod)
    spread = curve.residual_sd * math.sqrt(max(1.0 - leverage, 0.0) / weight)
    return Residual(
        cod,
        absorbance,
        rest,
        rest / curve.slope(cod),
        rest / spread if spread > 0 else 0.0,
        leverage,
    )


@dataclass(frozen=True)
class Finding:
    """One thing about a curve, in words.

    Parameters
    ----------
    severity : {"note", "warning", "stop"}
        How serious.
    about : str
        A short key: ``slope``, ``scatter``, ``bend``, ``leverage``,
        ``interval``, ``recovery``, ``range``.
    words : str
        What is seen and what to do.
    """

    severity: Severity
    about: str
    words: str


def slope_findings(curve: Curve, recipe: Recipe) -> list[Finding]:
    """Judge a slope by the colour that is read and by stoichiometry.

    Parameters
    ----------
    curve : Curve
        Fitted.
    recipe : Recipe
        Its chemistry.

    Returns
    -------
    list of Finding
    """
    expected = recipe.response
    if expected is not None and curve.response != expected:
        words = (
            f"At {recipe.wavelength_nm:g} nm absorbance {expected} with COD, but these standards say that "
            f"it {curve.response}: look for exchanged standards, a wrong wavelength or a reversed zero."
        )
        return [Finding("stop", "slope", words)]
    if expected != "rises":
        return []
    least, most = slope_band(recipe)
    per_au = 1.0 / abs(curve.slope((curve.low + curve.high) / 2.0))
    if least <= per_au <= most:
        return []
    words = (
        f"The slope is {per_au:.0f} mg/L per AU; stoichiometry and this tube allow {least:.0f} to "
        f"{most:.0f}: look at wavelength, tube and standards."
    )
    return [Finding("warning", "slope", words)]


def _scatter(curve: Curve, standards: Sequence[Standard]) -> list[Finding]:
    test = variance_homogeneity(standards)
    if test is None or test.alike:
        return []
    words = (
        f"Readings scatter differently at {test.low:g} and {test.high:g} mg/L (F {test.f:.3g}, at most "
        f"{test.critical:.3g}): "
    )
    remedy = (
        "shorten the range, or weight by 1/x." if curve.weights == "equal" else "the weights allow for it."
    )
    return [Finding("warning" if curve.weights == "equal" else "note", "scatter", words + remedy)]


def _told(test: FTest) -> str:
    f = f"{test.f:.3g}" if test.f < 1000 else "over 1000"
    return f"F {f}, p {'under 0.001' if test.p < 0.001 else f'{test.p:.3f}'}"


def _bend(curve: Curve) -> list[Finding]:
    found = []
    mandel = "Mandel" if curve.mandel is None else f"Mandel's test, {_told(curve.mandel)}"
    bent = curve.mandel is not None and curve.mandel.p < SIGNIFICANT
    levels = len({row.cod for row in curve.standards})
    if curve.model == "linear" and bent:
        if levels >= LEVELS_FOR_PARABOLA:
            words = (
                f"The standards follow a bend ({mandel}): they have earned a quadratic, or shorten the range."
            )
        else:
            words = f"The standards seem to follow a bend ({mandel}): shorten the range, or add standards."
        found.append(Finding("warning", "bend", words))
    if curve.model == "quadratic" and not bent:
        words = f"The parabola explains no more than a line would ({mandel}): a straight line suffices."
        found.append(Finding("note", "bend", words))
    if (
        curve.lack_of_fit is not None
        and curve.lack_of_fit.p < SIGNIFICANT
        and not (curve.model == "linear" and bent)
    ):
        words = (
            f"The standards lie further off the curve than their replicates explain (lack of fit, "
            f"{_told(curve.lack_of_fit)}): look at single standards."
        )
        found.append(Finding("warning", "bend", words))
    return found


def _recoveries(curve: Curve) -> list[Finding]:
    low, high = RECOVERY_PERCENT
    seen = [(row.cod, row.recovery_percent) for row in curve.standards if row.cod > 0]
    off = [
        f"{cod:g} mg/L ({'no number' if share is None else f'{share:.0f} %'})"
        for cod, share in seen
        if share is None or not low <= share <= high
    ]
    found = []
    if off:
        weigh = ", or weight by 1/x" if curve.weights == "equal" else ""
        words = (
            f"Standards at {', '.join(off)} do not find themselves within {low:g} to {high:g} %: look at "
            f"them, shorten the range{weigh}."
        )
        found.append(Finding("warning", "recovery", words))
    rse = curve.relative_standard_error_percent
    if rse is not None and rse > LARGE_RSE:
        words = f"The relative standard error is {rse:.3g} %, more than {LARGE_RSE:g} %: shorten the range."
        found.append(Finding("warning", "recovery", words))
    return found


def beyond_standards(curve: Curve, working_range: tuple[float, float]) -> str:
    """Return the words about a working range that no standard covers.

    Parameters
    ----------
    curve : Curve
        Fitted.
    working_range : tuple of float
        mg/L in the tube.

    Returns
    -------
    str
        Empty when the standards cover it.
    """
    low, high = working_range
    if curve.low <= low and high <= curve.high:
        return ""
    return (
        f"The working range ({low:g} to {high:g} mg/L) reaches beyond the standards "
        f"({curve.low:g} to {curve.high:g} mg/L): outside them the curve is a guess."
    )


def findings(
    curve: Curve,
    standards: Sequence[Standard],
    recipe: Recipe | None = None,
    working_range: tuple[float, float] | None = None,
) -> tuple[Finding, ...]:
    """Say everything that is the matter with a curve, most serious first.

    Parameters
    ----------
    curve : Curve
        Fitted to these standards.
    standards : sequence of Standard
        Its standards.
    recipe : Recipe, optional
        For the direction and size of the slope.
    working_range : tuple of float, optional
        mg/L in the tube, which the standards should cover.

    Returns
    -------
    tuple of Finding
        Empty for a curve without reproach.
    """
    found = slope_findings(curve, recipe) if recipe is not None else []
    found += _scatter(curve, standards) + _bend(curve) + _recoveries(curve)
    if curve.fieller_g > LARGE_G:
        words = (
            f"The slope is known so poorly (Fieller's g {curve.fieller_g:.2g}) that intervals of readings "
            "are too narrow: more standards, or a wider range."
        )
        found.append(Finding("warning", "interval", words))
    rows = residuals(curve, standards)
    limit = LARGE_LEVERAGE * len(curve.coefficients) / curve.n
    heavy = {row.cod: row.leverage for row in rows if row.leverage > limit}
    if heavy:
        names = ", ".join(f"{cod:g} mg/L (leverage {heavy[cod]:.2f})" for cod in sorted(heavy))
        words = f"The standard at {names} carries the curve alone: read it again, or add one beside it."
        found.append(Finding("note", "leverage", words))
    if working_range is not None and (words := beyond_standards(curve, working_range)):
        found.append(Finding("warning", "range", words))
    order = {"stop": 0, "warning": 1, "note": 2}
    return tuple(sorted(found, key=lambda one: order[one.severity]))
