"""How far tubes of one sample scatter: sigma(x) = sqrt(a^2 + (k x)^2).

At low COD the scatter is constant (a, in mg/L in the tube), above it grows
with COD (k). A laboratory starts with a = 4 mg/L and k = 2.5 % (practice) and
takes its own values once it has 20 sets of tubes. Absolute standard deviations
of different levels are never pooled: the model is fitted to the variances of
all sets, each weighted by its degrees of freedom and the precision a variance
of that size has (iterated weighted least squares on s^2, the two squares kept
from going negative).

Its degrees of freedom say how well the fitted sigma(x) is known: 2 sigma^4 over
the variance of the fitted sigma^2, the smallest over the levels seen.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from app.chemistry.problems import Problems

ENOUGH_SETS = 20


@dataclass(frozen=True)
class Repeatability:
    """Standard deviation of one tube as a function of COD in the tube.

    Parameters
    ----------
    a : float
        mg/L.
    k : float
        Relative.
    dof : float or None
        Degrees of freedom; None is infinite.
    """

    a: float
    k: float
    dof: float | None = None

    def sigma(self, cod: float) -> float:
        """Return the standard deviation of one tube at a COD in the tube, in mg/L."""
        return math.hypot(self.a, self.k * cod)


#: Until a laboratory has its own (practice).
STARTING_REPEATABILITY = Repeatability(4.0, 0.025, None)


@dataclass(frozen=True)
class TubeSet:
    """Accepted tubes of one sample.

    Parameters
    ----------
    cod : tuple of float
        Each tube in mg/L in the tube; at least two.
    """

    cod: tuple[float, ...]


@dataclass(frozen=True)
class LabRepeatability:
    """The repeatability in force and where it comes from.

    Parameters
    ----------
    repeatability : Repeatability
        To be used.
    sets : int
        Sets of tubes seen.
    own : bool
        Whether it is the laboratory's own, or the starting value.
    pooled_dof : int
        Tubes less sets, for the eye.
    """

    repeatability: Repeatability
    sets: int
    own: bool
    pooled_dof: int


def pool(
    history: Sequence[TubeSet], start: Repeatability = STARTING_REPEATABILITY, enough: int = ENOUGH_SETS
) -> LabRepeatability:
    """Return the laboratory's own repeatability once its history suffices.

    Parameters
    ----------
    history : sequence of TubeSet
        Sets whose tubes agreed and sets whose tubes did not, all of them:
        leaving out the bad ones makes a laboratory look better than it is.
    start : Repeatability
        In force until then.
    enough : int
        Number of sets.

    Returns
    -------
    LabRepeatability

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    wrong = Problems()
    for i, one in enumerate(history):
        if len(one.cod) < 2:
            wrong.add(f"history.{i}.cod", "needs at least two tubes")
        for j, value in enumerate(one.cod):
            wrong.number(f"history.{i}.cod.{j}", value)
    wrong.stop("The repeatability cannot be pooled from this history.")
    pooled = sum(len(one.cod) - 1 for one in history)
    if len(history) < enough:
        return LabRepeatability(start, len(history), False, pooled)
    return LabRepeatability(_estimate([_moments(one) for one in history]), len(history), True, pooled)


@dataclass(frozen=True)
class _Moments:
    square: float
    variance: float
    dof: int


def _moments(one: TubeSet) -> _Moments:
    n = len(one.cod)
    mean = math.fsum(one.cod) / n
    return _Moments(mean * mean, math.fsum((v - mean) ** 2 for v in one.cod) / (n - 1), n - 1)


def _estimate(sets: Sequence[_Moments]) -> Repeatability:
    freedom = sum(s.dof for s in sets)
    mean = math.fsum(s.dof * s.variance for s in sets) / freedom
    if mean == 0.0:
        return Repeatability(0.0, 0.0, float(freedom))
    a2, k2 = mean, 0.0
    for _ in range(200):
        new = _weighted(sets, a2, k2, mean)
        moved = abs(new[0] - a2) + abs(new[1] - k2) * max(s.square for s in sets)
        a2, k2 = new
        if moved < 1e-12 * mean:
            break
    return Repeatability(math.sqrt(a2), math.sqrt(k2), _dof(sets, a2, k2))


def _weights(sets: Sequence[_Moments], a2: float, k2: float, mean: float) -> list[float]:
    floor = 1e-6 * mean
    return [s.dof / max(a2 + k2 * s.square, floor) ** 2 for s in sets]


def _weighted(sets: Sequence[_Moments], a2: float, k2: float, mean: float) -> tuple[float, float]:
    """Fit variance = a2 + k2 x^2 once, neither below zero."""
    w = _weights(sets, a2, k2, mean)
    s0 = math.fsum(w)
    s1 = math.fsum(v * s.square for v, s in zip(w, sets, strict=True))
    s2 = math.fsum(v * s.square**2 for v, s in zip(w, sets, strict=True))
    r0 = math.fsum(v * s.variance for v, s in zip(w, sets, strict=True))
    r1 = math.fsum(v * s.variance * s.square for v, s in zip(w, sets, strict=True))
    determinant = s0 * s2 - s1 * s1
    if determinant > 1e-9 * s0 * s2:
        level, growth = (r0 * s2 - r1 * s1) / determinant, (r1 * s0 - r0 * s1) / determinant
        if level >= 0 and growth >= 0:
            return level, growth
        if level < 0 < s2:
            return 0.0, r1 / s2
    return r0 / s0, 0.0


def _dof(sets: Sequence[_Moments], a2: float, k2: float) -> float:
    """Return 2 sigma^4 / var(sigma^2), the smallest over the levels seen."""
    freedom = float(sum(s.dof for s in sets))
    if a2 == 0.0 or k2 == 0.0:
        return freedom
    w = _weights(sets, a2, k2, 0.0)
    s0 = math.fsum(w) / 2.0
    s1 = math.fsum(v * s.square for v, s in zip(w, sets, strict=True)) / 2.0
    s2 = math.fsum(v * s.square**2 for v, s in zip(w, sets, strict=True)) / 2.0
    determinant = s0 * s2 - s1 * s1
    found = []
    for s in sets:
        variance = (s2 - 2.0 * s.square * s1 + s.square**2 * s0) / determinant
        found.append(2.0 * (a2 + k2 * s.square) ** 2 / variance)
    return min(found)
