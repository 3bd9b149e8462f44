"""A calibration curve: absorbance on COD, and the way back.

The curve is a straight line or a parabola in orthogonal polynomials of the
standards. With t = (COD - centre) / scale the polynomials are

    1,   t,   t^2 - alpha t - beta,

orthogonal under the weights, so their coefficients are uncorrelated, the
variance of the fitted curve is a sum of three terms, and nothing is lost to
large concentrations (the square of 3 000 000 never meets the number 1).

A reading is turned back through the curve. On the parabola the root on the
standards' side of the turning point is taken; a reading beyond the turning
point has no COD, and the answer is None, never a clipped or a far root.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Literal

from scipy.special import stdtrit

Model = Literal["linear", "quadratic"]
Weights = Literal["equal", "inverse", "inverse_square", "given"]


@lru_cache(maxsize=1024)
def t_quantile(dof: float, confidence: float) -> float:
    """Return the two-sided quantile of Student's t.

    Parameters
    ----------
    dof : float
        Degrees of freedom, above zero.
    confidence : float
        For example 0.95 for the 97.5 % point.

    Returns
    -------
    float
    """
    return float(stdtrit(dof, 0.5 + confidence / 2.0))


@dataclass(frozen=True)
class Basis:
    """The orthogonal polynomials of one set of standards and weights.

    Parameters
    ----------
    centre, scale : float
        Of the COD axis: t = (COD - centre) / scale.
    alpha, beta : float
        Of the second polynomial, t^2 - alpha t - beta.
    sums : tuple of float
        Weighted sums of squares of the three polynomials, of which a line
        uses two. The first is the sum of weights.
    """

    centre: float
    scale: float
    alpha: float
    beta: float
    sums: tuple[float, float, float]


@dataclass(frozen=True)
class FTest:
    """A variance ratio and the chance of one as large when nothing is wrong.

    Parameters
    ----------
    f, p : float
        Ratio and probability.
    """

    f: float
    p: float


@dataclass(frozen=True)
class BackCalculated:
    """One standard turned back through its own curve.

    Parameters
    ----------
    cod, absorbance : float
        The standard and the mean of its readings.
    back_calculated : float or None
        COD of that mean; None beyond the turning point.
    recovery_percent : float or None
        Of the standard's COD; None for the zero standard.
    """

    cod: float
    absorbance: float
    back_calculated: float | None
    recovery_percent: float | None


@dataclass(frozen=True)
class Reading:
    """An unknown read on the curve.

    Parameters
    ----------
    cod, u : float
        Estimate and standard uncertainty in mg/L.
    dof : int
        Degrees of freedom of the curve.
    low, high : float
        Confidence interval.
    inside_range : bool
        Whether the estimate lies between the lowest and highest standard.
    """

    cod: float
    u: float
    dof: int
    low: float
    high: float
    inside_range: bool


@dataclass(frozen=True)
class BandPoint:
    """The curve at one COD, for a picture.

    Parameters
    ----------
    cod, absorbance : float
        On the curve.
    low, high : float
        Confidence band of the curve.
    reading_low, reading_high : float
        Band in which a single reading is expected.
    """

    cod: float
    absorbance: float
    low: float
    high: float
    reading_low: float
    reading_high: float


@dataclass(frozen=True)
class Curve:
    """A fitted calibration with its evidence.

    Parameters
    ----------
    model : str
        ``linear`` or ``quadratic``.
    weights : str
        ``equal``, ``inverse``, ``inverse_square``, or ``given``.
    n, dof : int
        Readings, and readings less coefficients.
    coefficients, standard_errors : tuple of float
        b0, b1 (and b2) of absorbance on COD.
    residual_sd, r_squared : float
        Weighted where the fit is weighted.
    lack_of_fit, mandel : FTest or None
        None where replicates are missing or the fit is perfect.
    relative_standard_error_percent : float or None
        Over the readings of all non-zero standards.
    standards : tuple of BackCalculated
        In the order given.
    low, high, lowest_nonzero : float
        Calibrated span, and the lowest standard above zero, in mg/L.
    basis : Basis
        What the sums are made with.
    polynomial : tuple of float
        a0, a1, a2 of absorbance in t.
    """

    model: Model
    weights: Weights
    n: int
    dof: int
    coefficients: tuple[float, ...]
    standard_errors: tuple[float, ...]
    residual_sd: float
    r_squared: float
    lack_of_fit: FTest | None
    mandel: FTest | None
    relative_standard_error_percent: float | None
    standards: tuple[BackCalculated, ...]
    low: float
    high: float
    lowest_nonzero: float
    basis: Basis
    polynomial: tuple[float, float, float]

    @property
    def response(self) -> Literal["rises", "falls"]:
        """Whether absorbance rises or falls with COD between the standards."""
        return "rises" if self.polynomial[1] > 0 else "falls"

    @property
    def fieller_g(self) -> float:
        """Fieller's g at 95 %: the squared relative half-width of the slope.

        Above 0.05 the first-order interval of a reading is too narrow; at 1
        the slope cannot be told from zero and no curve is made at all.
        """
        return slope_g(self.residual_sd, self.dof, self._mean_slope, self.basis.sums[1])

    @property
    def _mean_slope(self) -> float:
        return self.polynomial[1] + self.polynomial[2] * self.basis.alpha

    def absorbance(self, cod: float) -> float:
        """Return the absorbance that the curve gives for a COD in mg/L."""
        t = (cod - self.basis.centre) / self.basis.scale
        a0, a1, a2 = self.polynomial
        return a0 + t * (a1 + t * a2)

    def slope(self, cod: float) -> float:
        """Return the change of absorbance per mg/L at a COD."""
        t = (cod - self.basis.centre) / self.basis.scale
        return (self.polynomial[1] + 2.0 * t * self.polynomial[2]) / self.basis.scale

    def cod(self, absorbance: float) -> float | None:
        """Turn an absorbance back into a COD.

        Parameters
        ----------
        absorbance : float
            Blank-corrected as the standards are.

        Returns
        -------
        float or None
            mg/L; None beyond the turning point of a parabola.
        """
        a0, a1, a2 = self.polynomial
        rise = absorbance - a0
        if a2 == 0.0:
            return self.basis.centre + self.basis.scale * rise / a1
        discriminant = a1 * a1 + 4.0 * a2 * rise
        if discriminant <= 0.0:
            return None
        t = 2.0 * rise / (a1 + math.copysign(math.sqrt(discriminant), a1))
        return self.basis.centre + self.basis.scale * t

    @property
    def turning_point(self) -> float | None:
        """COD at which a parabola turns; None for a straight line."""
        _, a1, a2 = self.polynomial
        if a2 == 0.0:
            return None
        return self.basis.centre - self.basis.scale * a1 / (2.0 * a2)

    def turns_above(self) -> bool:
        """Tell whether the turning point lies above the standards."""
        point = self.turning_point
        return point is not None and point > self.high

    def line_variance(self, cod: float) -> float:
        """Return the variance of the fitted absorbance at a COD, in AU squared."""
        basis = self.basis
        t = (cod - basis.centre) / basis.scale
        total = 1.0 / basis.sums[0] + t * t / basis.sums[1]
        if len(self.coefficients) == 3:
            second = t * t - basis.alpha * t - basis.beta
            total += second * second / basis.sums[2]
        return self.residual_sd * self.residual_sd * total

    def line_u(self, cod: float) -> float:
        """Return the standard uncertainty that the curve alone gives a COD, in mg/L.

        First order: the standard deviation of the fitted absorbance over the
        slope, both at this COD.
        """
        return math.sqrt(self.line_variance(cod)) / abs(self.slope(cod))

    def weight(self, cod: float) -> float:
        """Return the weight of one reading at a COD; below the lowest non-zero standard, the weight there."""
        if self.weights in ("equal", "given"):
            return 1.0
        x = max(cod, self.lowest_nonzero)
        return 1.0 / x if self.weights == "inverse" else 1.0 / (x * x)

    def read(
        self, absorbance: Sequence[float], confidence: float = 0.95, weight: float | None = None
    ) -> Reading | None:
        """Read the mean of some absorbances on the curve.

        Parameters
        ----------
        absorbance : sequence of float
            p readings of one unknown, in AU.
        confidence : float
            Of the interval.
        weight : float, optional
            Weight of one reading; by default that of the fit at this COD.

        Returns
        -------
        Reading or None
            None beyond the turning point. For the equal-weight line
            u = (s / b1) sqrt(1/p + 1/n + (x - mean x)^2 / Sxx).

        References
        ----------
        Eurachem/CITAC Guide CG 4, Appendix E.4; Miller and Miller, chapter 5.
        """
        x = self.cod(math.fsum(absorbance) / len(absorbance))
        if x is None:
            return None
        each = self.weight(x) if weight is None else weight
        variance = self.residual_sd**2 / (len(absorbance) * each) + self.line_variance(x)
        u = math.sqrt(variance) / abs(self.slope(x))
        half = t_quantile(self.dof, confidence) * u
        return Reading(x, u, self.dof, x - half, x + half, self.low <= x <= self.high)

    def band(self, confidence: float = 0.95, points: int = 61) -> tuple[BandPoint, ...]:
        """Return the curve and its bands over the calibrated span, for a picture.

        Parameters
        ----------
        confidence : float
            Of both bands.
        points : int
            At least two.

        Returns
        -------
        tuple of BandPoint
        """
        t = t_quantile(self.dof, confidence)
        found = []
        for i in range(points):
            cod = self.low + (self.high - self.low) * i / (points - 1)
            y, variance = self.absorbance(cod), self.line_variance(cod)
            line = t * math.sqrt(variance)
            single = t * math.sqrt(variance + self.residual_sd**2 / self.weight(cod))
            found.append(BandPoint(cod, y, y - line, y + line, y - single, y + single))
        return tuple(found)


def slope_g(residual_sd: float, dof: int, mean_slope: float, sum_of_squares: float) -> float:
    """Return Fieller's g at 95 % for a slope in scaled units.

    Parameters
    ----------
    residual_sd : float
        Of the fit.
    dof : int
        Of the residual standard deviation.
    mean_slope, sum_of_squares : float
        Coefficient and weighted sum of squares of the first polynomial.

    Returns
    -------
    float
        Infinite for a slope of zero.
    """
    if mean_slope == 0.0:
        return math.inf
    ratio = t_quantile(dof, 0.95) * residual_sd / mean_slope
    return ratio * ratio / sum_of_squares
