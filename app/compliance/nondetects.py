r"""Values known only to lie below a bound: averages, medians and percentiles with them.

Three ways, each with its place (Helsel): *Kaplan-Meier* where fewer than half
are below, *regression on order statistics* (ROS) up to four fifths, and beyond
that only the share above a number. Putting half of a bound in its place is a
rule some permits print; it is offered as that and never chosen by itself.

ROS after Helsel and Cohn: plotting positions from the chances of exceeding each
bound, counted from the highest down,

.. math:: p_j = p_{j+1} + \frac{A_j}{A_j + B_j}(1 - p_{j+1}),

a straight line of the logarithm of the measured values on normal quantiles, and
only the values below a bound replaced from that line.

Kaplan-Meier for values below a bound works on the flipped values. Where the
smallest value is itself a bound, the mean needs a convention for what lies
below it, which is stated with the answer.

References
----------
D. R. Helsel and T. A. Cohn, Water Resources Research 24 (1988) 1997; D. R.
Helsel, Statistics for Censored Environmental Data; Helsel and others, USGS
Techniques and Methods 4-A3.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from app.compliance.days import SHARES, NonDetect
from app.compliance.exact import plain
from app.errors import Fields, InputError

Vector = NDArray[np.float64]
Remainder = Literal["smallest detect", "lowest bound", "zero"]


@dataclass(frozen=True)
class Average:
    """An average by a permit's rule.

    Parameters
    ----------
    value : float
        The average, or the bound when ``below``.
    below : bool
        The average is only known to lie below ``value``.
    rule : str
        The rule used.
    """

    value: float
    below: bool
    rule: str

    def __str__(self) -> str:
        """Write it with its sign."""
        return f"< {plain(self.value)}" if self.below else plain(self.value)


def _refuse(values: Sequence[float], below: Sequence[bool], least: int, positive: bool = True) -> None:
    wrong: Fields = {}
    for i, value in enumerate(values):
        if not math.isfinite(value) or value < 0 or (positive and value == 0):
            wrong[f"values.{i}"] = ["must be a finite number above 0" if positive else "must be 0 or more"]
    if len(below) != len(values):
        wrong["below"] = ["needs one for each value"]
    elif not wrong and sum(not b for b in below) < least:
        wrong["values"] = [f"needs at least {least} measured values"]
    if wrong:
        raise InputError("Nothing can be told from these values.", wrong)


def average(values: Sequence[float], below: Sequence[bool], rule: NonDetect | Literal["median"]) -> Average:
    """Average values by the permit's non-detect rule.

    Parameters
    ----------
    values : sequence of float
        Values, or bounds where ``below``, shape (n,), n at least 1.
    below : sequence of bool
        Shape (n,).
    rule : {"zero", "half", "limit", "median"}
        What a value below its bound counts as; "median": as soon as one lies
        below, the median with such values ordered first, of an even number the
        lower of the two in the middle.

    Returns
    -------
    Average
        All below: below the highest bound, never 0 and never half.
    """
    _refuse(values, below, 0, positive=False)
    if not values:
        raise InputError("There is nothing to average.", {"values": ["needs at least one"]})
    if all(below):
        return Average(max(values), True, rule)
    if rule == "median" and any(below):
        order = sorted(range(len(values)), key=lambda i: (not below[i], values[i]))
        middle = order[(len(order) - 1) // 2]
        return Average(values[middle], below[middle], rule)
    share = 1.0 if rule == "median" else float(SHARES[rule])
    counted = [v * share if b else v for v, b in zip(values, below, strict=True)]
    return Average(math.fsum(counted) / len(counted), False, rule)


@dataclass(frozen=True)
class Ros:
    """Regression on order statistics.

    Parameters
    ----------
    imputed : tuple of float
        Values put in the place of those below a bound, ascending.
    intercept, slope : float
        Of the logarithm on normal quantiles.
    mean, sd, median : float
        Of measured and imputed values together; sd with n - 1.
    bounds, exceeding : tuple of float
        The bounds, ascending, and the chance of exceeding each.
    """

    imputed: tuple[float, ...]
    intercept: float
    slope: float
    mean: float
    sd: float
    median: float
    bounds: tuple[float, ...]
    exceeding: tuple[float, ...]


def _exceedance(detects: Vector, censored: Vector, bounds: Vector) -> Vector:
    """Return the chance of exceeding each bound, and 0 above the last."""
    chances = np.zeros(len(bounds) + 1)
    edges = np.append(bounds, np.inf)
    for j in range(len(bounds) - 1, -1, -1):
        above = int(((detects >= bounds[j]) & (detects < edges[j + 1])).sum())
        under = int((detects < bounds[j]).sum() + (censored <= bounds[j]).sum())
        chances[j] = chances[j + 1] + above / (above + under) * (1.0 - chances[j + 1])
    return chances


def _positions(detects: Vector, censored: Vector) -> tuple[Vector, Vector, Vector, Vector]:
    bounds = np.unique(censored)
    chances = _exceedance(detects, censored, bounds)
    edges = np.concatenate([[-np.inf], bounds, [np.inf]])
    exceeding = np.concatenate([[1.0], chances])
    for_detects = np.empty(len(detects))
    for j in range(len(edges) - 1):
        pick = np.flatnonzero((detects >= edges[j]) & (detects < edges[j + 1]))
        ranks = np.arange(1, len(pick) + 1)
        for_detects[pick] = (1 - exceeding[j]) + (exceeding[j] - exceeding[j + 1]) * ranks / (len(pick) + 1)
    for_censored = np.empty(len(censored))
    for j, bound in enumerate(bounds):
        pick = np.flatnonzero(censored == bound)
        for_censored[pick] = (1 - chances[j]) * np.arange(1, len(pick) + 1) / (len(pick) + 1)
    return for_detects, for_censored, bounds, chances[:-1]


def ros(values: Sequence[float], below: Sequence[bool]) -> Ros:
    """Fill in values below their bounds from a lognormal line through the measured ones.

    Parameters
    ----------
    values : sequence of float
        Values, or bounds where ``below``, above zero, shape (n,).
    below : sequence of bool
        Shape (n,).

    Returns
    -------
    Ros

    Raises
    ------
    InputError
        If fewer than two different measured values are given or a number is not
        above zero.
    """
    _refuse(values, below, 2)
    numbers, flags = np.array(values, dtype=float), np.array(below, dtype=bool)
    detects, censored = np.sort(numbers[~flags]), np.sort(numbers[flags])
    if detects[0] == detects[-1]:
        raise InputError(
            "All measured values are the same.", {"values": ["need two different measured values"]}
        )
    for_detects, for_censored, bounds, chances = _positions(detects, censored)
    slope, intercept = np.polyfit(ndtri(for_detects), np.log(detects), 1)
    imputed = np.sort(np.exp(intercept + slope * ndtri(for_censored)))
    whole = np.concatenate([detects, imputed])
    return Ros(
        tuple(imputed.tolist()),
        float(intercept),
        float(slope),
        float(whole.mean()),
        float(whole.std(ddof=1)),
        float(np.median(whole)),
        tuple(bounds.tolist()),
        tuple(chances.tolist()),
    )


@dataclass(frozen=True)
class KaplanMeier:
    """The distribution of values of which some lie below a bound.

    Parameters
    ----------
    values, at_or_below : tuple of float
        Measured values, ascending, and the share at or below each.
    mean, sd : float
        With the remainder placed by ``remainder``.
    remainder : str
        The convention.
    unplaced : float
        Share of the distribution below the smallest measured value.
    """

    values: tuple[float, ...]
    at_or_below: tuple[float, ...]
    mean: float
    sd: float
    remainder: Remainder
    unplaced: float

    def percentile(self, share: float) -> float | None:
        """Return the smallest measured value with at least a share at or below it.

        Parameters
        ----------
        share : float
            Between 0 and 1.

        Returns
        -------
        float or None
            None where the percentile lies below the smallest measured value.
        """
        if share <= self.unplaced:
            return None
        for value, level in zip(self.values, self.at_or_below, strict=True):
            if level >= share - 1e-12:
                return value
        return self.values[-1]


def kaplan_meier(
    values: Sequence[float], below: Sequence[bool], remainder: Remainder = "smallest detect"
) -> KaplanMeier:
    """Estimate a distribution of which some values lie below a bound.

    Parameters
    ----------
    values : sequence of float
        Values, or bounds where ``below``, zero or more, shape (n,).
    below : sequence of bool
        Shape (n,).
    remainder : {"smallest detect", "lowest bound", "zero"}
        Where the share below the smallest measured value is placed for the mean.

    Returns
    -------
    KaplanMeier

    Raises
    ------
    InputError
        If nothing was measured or a number is negative or not finite.
    """
    _refuse(values, below, 1, positive=False)
    numbers, flags = np.array(values, dtype=float), np.array(below, dtype=bool)
    detects = np.unique(numbers[~flags])
    level, levels = 1.0, np.empty(len(detects))
    for k in range(len(detects) - 1, -1, -1):
        levels[k] = level
        deaths = int((numbers[~flags] == detects[k]).sum())
        at_risk = int((numbers[~flags] <= detects[k]).sum() + (numbers[flags] <= detects[k]).sum())
        level *= 1.0 - deaths / at_risk
    weights = np.diff(np.concatenate([[level], levels]))
    places = {
        "smallest detect": float(detects[0]),
        "lowest bound": float(numbers[flags].min()) if flags.any() else 0.0,
        "zero": 0.0,
    }
    points, shares = np.append(detects, places[remainder]), np.append(weights, level)
    mean = float(shares @ points)
    sd = math.sqrt(float(shares @ (points - mean) ** 2))
    return KaplanMeier(tuple(detects.tolist()), tuple(levels.tolist()), mean, sd, remainder, float(level))


def advised(values: Sequence[float], below: Sequence[bool]) -> Literal["kaplan-meier", "ros", "share above"]:
    """Return which way suits the share of values below a bound.

    Parameters
    ----------
    values : sequence of float
        Shape (n,), n at least 1.
    below : sequence of bool
        Shape (n,).

    Returns
    -------
    {"kaplan-meier", "ros", "share above"}
        Under a half, up to four fifths, beyond (Helsel; from memory).
    """
    share = sum(below) / len(values)
    return "kaplan-meier" if share < 0.5 else "ros" if share <= 0.8 else "share above"
