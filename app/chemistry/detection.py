"""Detection limits: the federal procedure, and DIN 32645 from a calibration.

40 CFR 136 Appendix B, revision 2. At least seven spikes at 2 to 10 times the
estimate and at least seven method blanks go through the whole procedure in at
least three batches on three dates. From the spikes t(0.99, n - 1) s; from the
blanks nothing when no blank gives a number, the highest when some do, and
max(mean, 0) + t s when all do. The limit is the larger. A blank without a
number is None here, never 0 and never half of anything. An interval of 95 % for
a limit from seven spikes runs from 0.64 to 2.2 times it: two figures at most.
The plan of a study and its duties are in :mod:`app.chemistry.detection_study`.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from scipy.special import chdtri

from app.chemistry.curve import Curve, t_quantile
from app.chemistry.problems import Problems

FEWEST_SPIKES = 7
FEWEST_BLANKS = 7
CONFIDENCE_ONE_SIDED = 0.99


def t_99(n: int) -> float:
    """Return the one-sided 99 % point of Student's t for n results (n - 1 degrees of freedom)."""
    return t_quantile(n - 1, 2.0 * CONFIDENCE_ONE_SIDED - 1.0)


@dataclass(frozen=True)
class DetectionLimit:
    """A method detection limit.

    Parameters
    ----------
    mdl_spikes : float
        From the spikes, mg/L.
    mdl_blanks : float or None
        From the blanks; None when no blank gave a number.
    mdl : float
        The larger.
    low, high : float
        95 % interval of ``mdl_spikes``.
    """

    mdl_spikes: float
    mdl_blanks: float | None
    mdl: float
    low: float
    high: float


def _sd(values: Sequence[float]) -> float:
    mean = math.fsum(values) / len(values)
    return math.sqrt(math.fsum((v - mean) ** 2 for v in values) / (len(values) - 1))


def detection_limit(spikes: Sequence[float], blanks: Sequence[float | None]) -> DetectionLimit:
    """Calculate the method detection limit.

    Parameters
    ----------
    spikes : sequence of float
        At least seven results in mg/L, all above zero, of one spike level.
    blanks : sequence of float or None
        At least seven results of method blanks; None where a blank gave no
        number.

    Returns
    -------
    DetectionLimit

    Raises
    ------
    InputError
        Naming the wrong fields.

    References
    ----------
    40 CFR part 136, Appendix B, revision 2 (2017), sections 2 and 4.
    """
    wrong = Problems()
    for i, value in enumerate(spikes):
        wrong.number(f"spikes.{i}", value, above=0)
    if len(spikes) < FEWEST_SPIKES:
        wrong.add("spikes", f"{len(spikes)} spikes: the procedure asks for at least {FEWEST_SPIKES}")
    for i, blank in enumerate(blanks):
        if blank is not None:
            wrong.number(f"blanks.{i}", blank)
    if len(blanks) < FEWEST_BLANKS:
        wrong.add("blanks", f"{len(blanks)} blanks: the procedure asks for at least {FEWEST_BLANKS}")
    wrong.stop("No detection limit can be calculated from these results.")
    of_spikes, of_blanks = t_99(len(spikes)) * _sd(spikes), _from_blanks(blanks)
    dof = len(spikes) - 1
    return DetectionLimit(
        of_spikes,
        of_blanks,
        of_spikes if of_blanks is None else max(of_spikes, of_blanks),
        of_spikes * math.sqrt(dof / float(chdtri(dof, 0.025))),
        of_spikes * math.sqrt(dof / float(chdtri(dof, 0.975))),
    )


def _from_blanks(blanks: Sequence[float | None]) -> float | None:
    numbers = [b for b in blanks if b is not None]
    if not numbers:
        return None
    if len(numbers) < len(blanks):
        return max(numbers)
    return max(math.fsum(numbers) / len(numbers), 0.0) + t_99(len(numbers)) * _sd(numbers)


@dataclass(frozen=True)
class Workings:
    """How a detection limit came about, for the reader who does the sum again.

    Parameters
    ----------
    spikes, blanks : int
        Numbers of results.
    spikes_mean, spikes_sd : float
        mg/L.
    spikes_dof : int
        One less than their number.
    spikes_t : float
        One-sided 99 % point.
    blanks_rule : {"none", "highest", "mean"}
        No blank gave a number; some did, the highest counts; all did.
    blanks_with_number : int
        Of them.
    blanks_mean, blanks_sd : float or None
        mg/L, where all gave a number.
    blanks_dof : int or None
        One less than their number, there.
    blanks_t : float or None
        One-sided 99 % point, there.
    """

    spikes: int
    blanks: int
    spikes_mean: float
    spikes_sd: float
    spikes_dof: int
    spikes_t: float
    blanks_rule: Literal["none", "highest", "mean"]
    blanks_with_number: int
    blanks_mean: float | None
    blanks_sd: float | None
    blanks_dof: int | None
    blanks_t: float | None


def workings(spikes: Sequence[float], blanks: Sequence[float | None]) -> Workings:
    """Return which rules a detection limit was found by, with their t and degrees of freedom.

    Parameters
    ----------
    spikes : sequence of float
        As :func:`detection_limit` took them.
    blanks : sequence of float or None
        As :func:`detection_limit` took them.

    Returns
    -------
    Workings
    """
    numbers, n = [b for b in blanks if b is not None], len(spikes)
    whole = bool(numbers) and len(numbers) == len(blanks)
    return Workings(
        n,
        len(blanks),
        math.fsum(spikes) / n,
        _sd(spikes),
        n - 1,
        t_99(n),
        "mean" if whole else "highest" if numbers else "none",
        len(numbers),
        math.fsum(numbers) / len(numbers) if whole else None,
        _sd(numbers) if whole else None,
        len(numbers) - 1 if whole else None,
        t_99(len(numbers)) if whole else None,
    )


def minimum_level(mdl: float) -> float:
    """Return EPA's minimum level: 3.18 times the limit, to the nearest 1, 2 or 5 times a power of ten.

    Parameters
    ----------
    mdl : float
        Above zero.

    Returns
    -------
    float

    References
    ----------
    EPA 1631E; EPA 1621, 9.2.2; 68 FR 11770.
    """
    wrong = Problems()
    wrong.number("mdl", mdl, above=0)
    wrong.stop("No minimum level follows from this.")
    exact = 3.18 * mdl
    decade = 10.0 ** math.floor(math.log10(exact))
    return min((step * decade for step in (1.0, 2.0, 5.0, 10.0)), key=lambda level: abs(level - exact))


@dataclass(frozen=True)
class CalibrationLimits:
    """Limits that a calibration in the low range gives.

    Parameters
    ----------
    decision, detection, quantification : float
        In the unit of the standards.
    """

    decision: float
    detection: float
    quantification: float


def calibration_limits(
    curve: Curve, readings: int = 1, alpha: float = 0.01, factor: float = 3.0
) -> CalibrationLimits:
    """Return decision, detection and quantification limits from a straight calibration.

    Parameters
    ----------
    curve : Curve
        Linear, equal weights, standards close to the limits sought.
    readings : int
        Readings of an unknown.
    alpha : float
        Risk, one-sided for decision and detection, two-sided for
        quantification.
    factor : float
        The quantification limit has a relative half-width of 1 / factor.

    Returns
    -------
    CalibrationLimits

    Raises
    ------
    InputError
        For a curve that is no equal-weight line, or one too scattered to
        quantify anything.

    References
    ----------
    DIN 32645:2008, indirect (calibration) method.
    """
    wrong = Problems()
    if curve.model != "linear" or curve.weights != "equal":
        wrong.add("curve", "must be a straight line with equal weights")
    wrong.number("readings", readings, least=1)
    wrong.number("alpha", alpha, above=0, most=0.5)
    wrong.number("factor", factor, above=1)
    wrong.stop("These limits cannot be taken from this curve.")

    def half_width(x: float, confidence: float) -> float:
        variance = curve.residual_sd**2 / readings + curve.line_variance(x)
        return t_quantile(curve.dof, confidence) * math.sqrt(variance) / abs(curve.slope(x))

    decision = half_width(0.0, 1.0 - 2.0 * alpha)
    level = factor * half_width(decision, 1.0 - alpha)
    for _ in range(200):
        new = factor * half_width(level, 1.0 - alpha)
        if abs(new - level) <= 1e-12 * level:
            break
        level = new
        if level > 1e6 * curve.high:
            wrong.add("curve", "scatters too much: no level is quantified at this factor")
            wrong.stop("These limits cannot be taken from this curve.")
    return CalibrationLimits(decision, 2.0 * decision, level)
