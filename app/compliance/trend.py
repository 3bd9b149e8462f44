r"""Is a point's COD rising or falling: Mann-Kendall and Sen on real dates.

:math:`S` counts the pairs that rise less those that fall; under no trend its
variance is

.. math:: \frac{n(n-1)(2n+5) - \sum t(t-1)(2t+5)}{18},

:math:`t` the sizes of groups of equal values, and
:math:`Z = (S \mp 1)/\sqrt{\mathrm{Var}}` (continuity correction). Under ten
values the normal approximation is poor and the exact distribution is given
beside it where there are no ties. Sen's slope is the median of all pairwise
slopes, here for each day of real time, so that uneven spacing does no harm.

Serial correlation and season make p too small; the seasonal variant compares
each season only with itself. Values below a bound are first set to one tied
value under the highest bound (:func:`recode`), never to half of it.

References
----------
H. B. Mann, Econometrica 13 (1945) 245; M. G. Kendall, Rank Correlation Methods;
P. K. Sen, JASA 63 (1968) 1379; R. M. Hirsch, J. R. Slack and R. A. Smith, Water
Resources Research 18 (1982) 107.
"""

from __future__ import annotations

import math
from collections.abc import Hashable, Sequence
from dataclasses import dataclass
from datetime import datetime
from functools import cache

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr

from app.compliance.exact import exact
from app.errors import Fields, InputError

Vector = NDArray[np.float64]
FEWEST, MOST, EXACT_UNDER = 3, 5000, 10


@dataclass(frozen=True)
class Trend:
    """The outcome of a Mann-Kendall test with Sen's slope.

    Parameters
    ----------
    n, s : int
        Number of values, and Kendall's S.
    variance, z, p : float
        Of S; two-sided p by the normal approximation.
    tau : float
        ``S / (n (n - 1) / 2)`` (tau-a).
    p_exact : float or None
        Two-sided and exact, for fewer than ten values without ties.
    sen_slope_per_day : float
        mg/L for each day.
    """

    n: int
    s: int
    variance: float
    z: float
    p: float
    tau: float
    p_exact: float | None
    sen_slope_per_day: float


def _refuse(times: Sequence[datetime], values: Sequence[float]) -> None:
    wrong: Fields = {}
    seen: dict[float, int] = {}
    for i, (at, value) in enumerate(zip(times, values, strict=True)):
        if at.utcoffset() is None:
            wrong[f"values.{i}.at"] = ["needs an offset"]
        elif at.timestamp() in seen:
            wrong[f"values.{i}.at"] = [f"is the time of value {seen[at.timestamp()]}: average them first"]
        else:
            seen[at.timestamp()] = i
        if not math.isfinite(value):
            wrong[f"values.{i}.value"] = ["must be a finite number"]
    if not wrong and not FEWEST <= len(values) <= MOST:
        wrong["values"] = [f"needs {FEWEST} to {MOST} values"]
    if wrong:
        raise InputError("No trend can be told from these values.", wrong)


def _ordered(times: Sequence[datetime], values: Sequence[float]) -> tuple[Vector, Vector]:
    days = np.array([at.timestamp() for at in times]) / 86400.0
    order = np.argsort(days, kind="stable")
    return days[order], np.array(values, dtype=float)[order]


def kendall_s(values: Sequence[float] | Vector) -> int:
    """Return Kendall's S of values in order of time.

    Parameters
    ----------
    values : sequence of float
        Shape (n,).

    Returns
    -------
    int
    """
    v = np.asarray(values, dtype=float)
    return int(sum(int(np.sign(v[i + 1 :] - v[i]).sum()) for i in range(len(v) - 1)))


def kendall_variance(values: Sequence[float] | Vector) -> float:
    """Return the variance of S under no trend, with the correction for ties.

    Parameters
    ----------
    values : sequence of float
        Shape (n,).

    Returns
    -------
    float
    """
    n = len(values)
    _, counts = np.unique(np.asarray(values, dtype=float), return_counts=True)
    ties = sum(int(t) * (int(t) - 1) * (2 * int(t) + 5) for t in counts)
    return (n * (n - 1) * (2 * n + 5) - ties) / 18.0


def kendall_z(s: int, variance: float) -> tuple[float, float]:
    """Return Z with continuity correction and its two-sided p.

    Parameters
    ----------
    s : int
        Kendall's S.
    variance : float
        Of S.

    Returns
    -------
    tuple of float
        ``(0, 1)`` where S is 0 or every value is the same.
    """
    if s == 0 or variance == 0:
        return 0.0, 1.0
    z = (s - math.copysign(1, s)) / math.sqrt(variance)
    return z, float(2.0 * ndtr(-abs(z)))


@cache
def _orderings(n: int) -> tuple[int, ...]:
    """Return how many of the n! orders have 0, 1, 2 ... inversions."""
    counts = [1]
    for k in range(2, n + 1):
        longer = [0] * (len(counts) + k - 1)
        for i, c in enumerate(counts):
            for j in range(k):
                longer[i + j] += c
        counts = longer
    return tuple(counts)


def exact_p(s: int, n: int) -> float:
    """Return the exact chance of an S at least as large in size and of its sign.

    Parameters
    ----------
    s : int
        Kendall's S of values without ties.
    n : int
        Number of values.

    Returns
    -------
    float
        One-sided p.
    """
    orders = _orderings(n)
    falling = (n * (n - 1) // 2 - abs(s)) // 2
    return sum(orders[: falling + 1]) / math.factorial(n)


def _slopes(days: Vector, values: Vector) -> Vector:
    i, j = np.triu_indices(len(values), 1)
    slopes: Vector = (values[j] - values[i]) / (days[j] - days[i])
    return slopes


def mann_kendall(times: Sequence[datetime], values: Sequence[float]) -> Trend:
    """Test for a trend and give its slope.

    Parameters
    ----------
    times : sequence of datetime.datetime
        Aware and all different, in any order, shape (n,).
    values : sequence of float
        Shape (n,), 3 to 5000 values.

    Returns
    -------
    Trend

    Raises
    ------
    InputError
        If a time has no offset or stands twice, a value is not finite, or there
        are too few or too many.
    """
    _refuse(times, values)
    days, ordered = _ordered(times, values)
    s, variance = kendall_s(ordered), kendall_variance(ordered)
    z, p = kendall_z(s, variance)
    n = len(ordered)
    untied = len(np.unique(ordered)) == n
    return Trend(
        n,
        s,
        variance,
        z,
        p,
        s / (n * (n - 1) / 2.0),
        min(1.0, 2.0 * exact_p(s, n)) if untied and n < EXACT_UNDER else None,
        float(np.median(_slopes(days, ordered))),
    )


@dataclass(frozen=True)
class SeasonalTrend:
    """The outcome of a seasonal Mann-Kendall test.

    Parameters
    ----------
    n, seasons, s : int
        Values, seasons with at least two of them, and the sum of S.
    variance, z, p : float
        Of the sum; two-sided p.
    slope_per_day : float or None
        Median of the slopes within seasons (Hirsch-Slack).
    """

    n: int
    seasons: int
    s: int
    variance: float
    z: float
    p: float
    slope_per_day: float | None


def seasonal_kendall(
    times: Sequence[datetime], values: Sequence[float], seasons: Sequence[Hashable]
) -> SeasonalTrend:
    """Test for a trend, comparing each season only with itself.

    Parameters
    ----------
    times : sequence of datetime.datetime
        Aware and all different, shape (n,).
    values : sequence of float
        Shape (n,).
    seasons : sequence of hashable
        The season of each value, e.g. its month, shape (n,).

    Returns
    -------
    SeasonalTrend

    Raises
    ------
    InputError
        As :func:`mann_kendall`.
    """
    _refuse(times, values)
    days, ordered = _ordered(times, values)
    order = np.argsort([at.timestamp() for at in times], kind="stable")
    labels = [seasons[int(k)] for k in order]
    s, variance, used = 0, 0.0, 0
    slopes: list[Vector] = []
    for season in dict.fromkeys(labels):
        pick = np.array([label == season for label in labels])
        if pick.sum() < 2:
            continue
        used += 1
        s += kendall_s(ordered[pick])
        variance += kendall_variance(ordered[pick])
        slopes.append(_slopes(days[pick], ordered[pick]))
    z, p = kendall_z(s, variance)
    slope = float(np.median(np.concatenate(slopes))) if slopes else None
    return SeasonalTrend(len(ordered), used, s, variance, z, p, slope)


def recode(values: Sequence[float], below: Sequence[bool]) -> list[float]:
    """Set every value under the highest bound to one tied value just under it.

    Parameters
    ----------
    values : sequence of float
        Values, or bounds where ``below``, shape (n,).
    below : sequence of bool
        Which of them are bounds, shape (n,).

    Returns
    -------
    list of float
        As given where nothing lies below a bound.
    """
    bounds = [v for v, b in zip(values, below, strict=True) if b]
    if not bounds:
        return list(values)
    highest = max(bounds)
    tied = math.nextafter(highest, -math.inf)
    return [tied if b or exact(v) < exact(highest) else v for v, b in zip(values, below, strict=True)]
