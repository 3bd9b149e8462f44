r"""Self-monitoring beside the inspector's split: two noisy methods, one container.

Only true splits are compared. The signed relative percent difference
:math:`200 (a - b)/(a + b)` keeps its sign, because the sign is the question.
Under ten pairs nothing is regressed; the differences are listed. From ten on,
*Deming* regression (both methods have errors, ratio of variances
:math:`\lambda`) and *Passing-Bablok* (ranks, no distribution assumed) tell a
constant from a proportional difference. Ordinary least squares would be wrong:
it assumes one side without error.

Several differences of one sign call for a question, not for an accusation.

References
----------
W. E. Deming, Statistical Adjustment of Data (1943); H. Passing and W. Bablok,
J. Clin. Chem. Clin. Biochem. 21 (1983) 709; J. M. Bland and D. G. Altman, Lancet
1 (1986) 307.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri, stdtr, stdtrit

from app.errors import Fields, InputError

Vector = NDArray[np.float64]
FEWEST_FOR_LINE, RUN_OF_SIGNS, MOST_FOR_RANKS = 10, 3, 100


def signed_rpd_percent(other: float, own: float) -> float:
    """Return the signed relative percent difference of two splits.

    Parameters
    ----------
    other, own : float
        The result asked about and the inspector's, mg/L, not both zero.

    Returns
    -------
    float
        Positive where ``other`` is higher.
    """
    if not other + own > 0:
        raise InputError("Nothing lies between two zeros.", {"own": ["one of the two must be above 0"]})
    return 200.0 * (other - own) / (other + own)


@dataclass(frozen=True)
class Differences:
    """Signed differences of splits and what they amount to.

    Parameters
    ----------
    n : int
        Pairs.
    rpd_percent : tuple of float
        Of each pair, signed.
    mean_percent, median_percent : float
        Of these.
    low_percent, high_percent : float or None
        Bland-Altman limits, mean -/+ 1.96 sd; None from one pair.
    t, p : float or None
        Student's t of the logarithm of the ratios against zero, two-sided; None
        from one pair or without spread.
    ratio, ratio_low, ratio_high : float
        Geometric mean of other over own with its 95 % interval (the ratio alone
        from one pair).
    same_sign : bool
        At least three pairs in a row beyond ``limit_percent`` on one side.
    """

    n: int
    rpd_percent: tuple[float, ...]
    mean_percent: float
    median_percent: float
    low_percent: float | None
    high_percent: float | None
    t: float | None
    p: float | None
    ratio: float
    ratio_low: float | None
    ratio_high: float | None
    same_sign: bool


def _columns(pairs: Sequence[tuple[float, float]], least: int) -> tuple[Vector, Vector]:
    wrong: Fields = {}
    for i, pair in enumerate(pairs):
        for name, number in zip(("own", "other"), pair, strict=True):
            if not 0 < number < math.inf:
                wrong[f"pairs.{i}.{name}"] = ["must be a finite number above 0"]
    if not wrong and len(pairs) < least:
        wrong["pairs"] = [f"needs at least {least}"]
    if wrong:
        raise InputError("These pairs cannot be compared.", wrong)
    own, other = np.array(pairs, dtype=float).T
    return own, other


def _same_sign(rpd: Vector, limit: float) -> bool:
    run, side = 0, 0.0
    for value in rpd:
        now = math.copysign(1.0, value) if abs(value) > limit else 0.0
        run = run + 1 if now and now == side else int(bool(now))
        side = now
        if run >= RUN_OF_SIGNS:
            return True
    return False


def differences(pairs: Sequence[tuple[float, float]], limit_percent: float = 20.0) -> Differences:
    """Compare splits by their signed differences.

    Parameters
    ----------
    pairs : sequence of (float, float)
        The inspector's result and the other, above zero, shape (n,), in order of
        time.
    limit_percent : float
        The duplicate limit; a setting.

    Returns
    -------
    Differences
    """
    own, other = _columns(pairs, 1)
    rpd = 200.0 * (other - own) / (other + own)
    logs = np.log(other / own)
    n = len(rpd)
    mean, centre = float(rpd.mean()), float(logs.mean())
    low = high = t = p = ratio_low = ratio_high = None
    if n > 1:
        spread = float(ndtri(0.975)) * float(rpd.std(ddof=1))
        error = float(logs.std(ddof=1)) / math.sqrt(n)
        half = float(stdtrit(n - 1, 0.975)) * error
        low, high = mean - spread, mean + spread
        ratio_low, ratio_high = math.exp(centre - half), math.exp(centre + half)
        if error > 0:
            t = centre / error
            p = 2.0 * float(stdtr(n - 1, -abs(t)))
    return Differences(
        n,
        tuple(rpd.tolist()),
        mean,
        float(np.median(rpd)),
        low,
        high,
        t,
        p,
        math.exp(centre),
        ratio_low,
        ratio_high,
        _same_sign(rpd, limit_percent),
    )


def signed_rank(pairs: Sequence[tuple[float, float]]) -> tuple[float, float]:
    """Return Wilcoxon's W of the differences and its exact two-sided p.

    Parameters
    ----------
    pairs : sequence of (float, float)
        The inspector's result and the other, shape (n,), at most 100; equal
        pairs are left out, equal sizes share their ranks.

    Returns
    -------
    tuple of float
        The smaller sum of ranks, and p from all ``2**n`` signs.
    """
    own, other = _columns(pairs, 1)
    gaps = other - own
    gaps = gaps[gaps != 0]
    if len(gaps) > MOST_FOR_RANKS:
        raise InputError("There are too many pairs.", {"pairs": [f"at most {MOST_FOR_RANKS}"]})
    if not len(gaps):
        return 0.0, 1.0
    sizes = np.abs(gaps)
    doubled = [int((sizes < s).sum() + (sizes <= s).sum() + 1) for s in sizes]
    rising = sum(r for r, gap in zip(doubled, gaps, strict=True) if gap > 0)
    w = min(rising, sum(doubled) - rising)
    ways = [1] + [0] * sum(doubled)
    for r in doubled:
        ways = [a + (ways[i - r] if i >= r else 0) for i, a in enumerate(ways)]
    return w / 2.0, min(1.0, 2.0 * sum(ways[: w + 1]) / 2 ** len(doubled))


@dataclass(frozen=True)
class Line:
    """A line of the other results on the inspector's.

    Parameters
    ----------
    slope, intercept : float
        ``other = intercept + slope x own``.
    slope_interval, intercept_interval : tuple of float or None
        95 %; None where the method gives none.
    """

    slope: float
    intercept: float
    slope_interval: tuple[float, float] | None = None
    intercept_interval: tuple[float, float] | None = None


def deming(pairs: Sequence[tuple[float, float]], variance_ratio: float = 1.0) -> Line:
    """Fit a Deming line.

    Parameters
    ----------
    pairs : sequence of (float, float)
        The inspector's result and the other, shape (n,), n at least 10.
    variance_ratio : float
        Variance of the other's errors over that of the inspector's.

    Returns
    -------
    Line

    Raises
    ------
    InputError
        If there are fewer than ten pairs or they do not vary together.
    """
    x, y = _columns(pairs, FEWEST_FOR_LINE)
    cov = np.cov(x, y, ddof=1)
    sxx, sxy, syy = float(cov[0, 0]), float(cov[0, 1]), float(cov[1, 1])
    if sxy == 0:
        raise InputError("The two do not vary together.", {"pairs": ["have no common variation"]})
    gap = syy - variance_ratio * sxx
    slope = (gap + math.sqrt(gap**2 + 4.0 * variance_ratio * sxy**2)) / (2.0 * sxy)
    return Line(slope, float(y.mean()) - slope * float(x.mean()))


def passing_bablok(pairs: Sequence[tuple[float, float]], confidence: float = 0.95) -> Line:
    """Fit a Passing-Bablok line with its intervals.

    Parameters
    ----------
    pairs : sequence of (float, float)
        The inspector's result and the other, shape (n,), n at least 10.
    confidence : float
        Of the intervals.

    Returns
    -------
    Line

    Raises
    ------
    InputError
        If there are fewer than ten pairs or no slope can be formed.
    """
    x, y = _columns(pairs, FEWEST_FOR_LINE)
    i, j = np.triu_indices(len(x), 1)
    dx, dy = x[j] - x[i], y[j] - y[i]
    moved = ~((dx == 0) & (dy == 0))
    with np.errstate(divide="ignore"):
        slopes = dy[moved] / dx[moved]
    slopes = np.sort(slopes[slopes != -1.0])
    count, shift = len(slopes), int((slopes < -1.0).sum())
    n = len(x)
    width = float(ndtri(0.5 + confidence / 2.0)) * math.sqrt(n * (n - 1) * (2 * n + 5) / 18.0)
    first = round((count - width) / 2.0)
    low, high = first - 1 + shift, count - first + shift
    if count == 0 or not 0 <= low <= high < count:
        raise InputError("No slope can be formed.", {"pairs": ["are too much alike"]})
    middle = (count - 1) / 2.0 + shift
    slope = float((slopes[math.floor(middle)] + slopes[math.ceil(middle)]) / 2.0)
    ends = (float(slopes[low]), float(slopes[high]))
    if not all(math.isfinite(b) for b in (slope, *ends)):
        raise InputError("No slope can be formed.", {"pairs": ["do not differ on the inspector's side"]})
    return Line(
        slope,
        float(np.median(y - slope * x)),
        ends,
        (float(np.median(y - ends[1] * x)), float(np.median(y - ends[0] * x))),
    )
