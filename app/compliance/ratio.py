r"""BOD from COD, for one point, while its correlation holds.

Ordinary least squares of BOD on COD of the same samples,
:math:`y = b_0 + b_1 x`. What is given for a new COD is the **prediction**
interval of a single new BOD,

.. math::

   \hat y \pm t_{0.975,\,n-2}\; s \sqrt{1 + \frac1n + \frac{(x - \bar x)^2}{S_{xx}}},

not the narrower interval of the line. It is meant only inside the range of the
pairs, for one point and one kind of production; raw and treated wastewater are
never pooled, and no "typical" ratio is ever used as evidence. 40 CFR 133.104(b)
lets a treatment works substitute COD for BOD where a long-term correlation is
shown; for a discharger the control authority decides, in writing.

New pairs watch the correlation: how far each lies from the line in half-widths
of its own interval. Two in a row outside suspend it (a setting).
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from scipy.special import stdtrit

from app.errors import Fields, InputError

FEWEST, NARROWEST = 3, 0.001


@dataclass(frozen=True)
class Estimate:
    """BOD expected at one COD.

    Parameters
    ----------
    cod, bod, low, high : float
        mg/L; ``low`` and ``high`` bound the 95 % prediction interval.
    inside_range : bool
        Whether the COD lies in the range of the pairs.
    """

    cod: float
    bod: float
    low: float
    high: float
    inside_range: bool


@dataclass(frozen=True)
class Correlation:
    """A fitted line of BOD on COD.

    Parameters
    ----------
    n : int
        Pairs.
    slope, intercept, residual_sd : float
        Of the line; residual standard deviation with n - 2.
    r_squared : float or None
        None where every BOD is the same.
    cod_mean, cod_sxx, cod_low, cod_high : float
        Of the pairs.
    """

    n: int
    slope: float
    intercept: float
    residual_sd: float
    r_squared: float | None
    cod_mean: float
    cod_sxx: float
    cod_low: float
    cod_high: float

    def half_width(self, cod: float, confidence: float = 0.95) -> float:
        """Return the half-width of the prediction interval at a COD."""
        t = float(stdtrit(self.n - 2, 0.5 + confidence / 2.0))
        return (
            t * self.residual_sd * math.sqrt(1.0 + 1.0 / self.n + (cod - self.cod_mean) ** 2 / self.cod_sxx)
        )

    def at(self, cod: float) -> Estimate:
        """Return the BOD expected at a COD, with its 95 % prediction interval."""
        bod, half = self.intercept + self.slope * cod, self.half_width(cod)
        return Estimate(cod, bod, bod - half, bod + half, self.cod_low <= cod <= self.cod_high)


def _refuse(pairs: Sequence[tuple[float, float]]) -> None:
    wrong: Fields = {}
    for i, pair in enumerate(pairs):
        for name, number in zip(("cod", "bod"), pair, strict=True):
            if not 0 <= number < math.inf:
                wrong[f"pairs.{i}.{name}"] = ["must be a finite number, 0 or more"]
    if not wrong and len(pairs) < FEWEST:
        wrong["pairs"] = [f"needs at least {FEWEST}"]
    elif not wrong and max(c for c, _ in pairs) - min(c for c, _ in pairs) < NARROWEST:
        wrong["pairs"] = [f"need COD that differ by {NARROWEST} mg/L or more"]
    if wrong:
        raise InputError("No line can be drawn through these pairs.", wrong)


def correlate(pairs: Sequence[tuple[float, float]]) -> Correlation:
    """Fit BOD on COD.

    Parameters
    ----------
    pairs : sequence of (float, float)
        COD and BOD of the same sample, mg/L, shape (n,), n at least 3.

    Returns
    -------
    Correlation

    Raises
    ------
    InputError
        If there are too few pairs, all at one COD, or a number is negative or
        not finite.
    """
    _refuse(pairs)
    x, y = np.array(pairs, dtype=float).T
    dx, dy = x - x.mean(), y - y.mean()
    sxx, syy = float(dx @ dx), float(dy @ dy)
    slope = float(dx @ dy) / sxx
    residual = dy - slope * dx
    sse = float(residual @ residual)
    return Correlation(
        n=len(pairs),
        slope=slope,
        intercept=float(y.mean()) - slope * float(x.mean()),
        residual_sd=math.sqrt(sse / (len(pairs) - 2)),
        r_squared=1.0 - sse / syy if syy > 0 else None,
        cod_mean=float(x.mean()),
        cod_sxx=sxx,
        cod_low=float(x.min()),
        cod_high=float(x.max()),
    )


def drift(correlation: Correlation, pairs: Iterable[tuple[float, float]]) -> list[float]:
    """Return how far new pairs lie from the line, in half-widths of their interval.

    Parameters
    ----------
    correlation : Correlation
        The line in use.
    pairs : iterable of (float, float)
        New COD and BOD, in order of time.

    Returns
    -------
    list of float
        Signed; beyond 1 in size is outside. A perfect line gives infinities.
    """
    found = []
    for cod, bod in pairs:
        gap, half = bod - correlation.at(cod).bod, correlation.half_width(cod)
        found.append(gap / half if half > 0 else (0.0 if gap == 0 else math.copysign(math.inf, gap)))
    return found


def suspended(drifts: Sequence[float]) -> bool:
    """Tell whether two new pairs in a row lay outside the prediction interval.

    Parameters
    ----------
    drifts : sequence of float
        From :func:`drift`, in order of time.

    Returns
    -------
    bool
    """
    return any(abs(a) > 1 and abs(b) > 1 for a, b in pairwise(drifts))
