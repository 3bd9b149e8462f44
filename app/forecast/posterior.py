"""What a point's past teaches about its next sample.

ln COD is regressed on field readings by Bayesian linear regression with a
normal-inverse-gamma prior: the intercept starts at the sector's level, the
slopes near zero. Old results fade exponentially with real time; two speeds of
fading are kept side by side and averaged. A result above or below a bound
enters with its expectation given the bound (a few rounds of expectation and
maximisation). The answer is a mixture of Student t distributions of ln COD.

Assumes that a reading acts on ln COD about linearly in its logarithm (pH,
temperature: in itself) within the range seen at the point; a reading far
outside it is flagged and its pull is bounded.

References
----------
.. [1] Gelman et al., Bayesian Data Analysis, 3rd ed., chapter 14.
.. [2] West and Harrison, Bayesian Forecasting and Dynamic Models, chapter 2.3 (discounting).
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any, Literal

import numpy as np
from scipy import special

from app.errors import InputError
from app.forecast.predictive import Component, Predictive
from app.forecast.sectors import Level, level_of

State = Literal["ok", "over", "below"]

READINGS = ("conductivity_us_cm", "turbidity_ntu", "ph", "temperature_c")
LOGARITHMIC = frozenset({"conductivity_us_cm", "turbidity_ntu"})
SPREADS = {"conductivity_us_cm": 0.5, "turbidity_ntu": 0.8, "ph": 0.6, "temperature_c": 4.0}
"""Spread of a reading at one point before it is known there: from experience, marked as such."""
FARTHEST = 3.0
"""A reading counts for at most this many spreads from its centre."""
MEMORY_DAYS = (150.0, 900.0)
PRIOR_DOF = 3.0
PRIOR_SCALE = 0.45
SLOPE_SD = 0.35
ROUNDS = 4


@dataclass(frozen=True)
class Observation:
    """One past result of a point.

    Parameters
    ----------
    days : float
        When it was collected, days since 1970-01-01 UTC.
    cod : float
        mg/L; for ``over`` and ``below`` the bound.
    state : {"ok", "over", "below"}
        A value, more than the bound, or less than it.
    field : mapping of str to float
        Field readings by the names of :data:`READINGS`; others are ignored.
    activity : str or None
        What the discharger was doing.
    """

    days: float
    cod: float
    state: State = "ok"
    field: Mapping[str, float] = field(default_factory=dict)
    activity: str | None = None

    def __post_init__(self) -> None:
        """Refuse a result that is no number above zero."""
        if not (math.isfinite(self.cod) and self.cod > 0):
            raise InputError("A COD must be above zero.", {"cod": ["must be above zero"]})


@dataclass(frozen=True)
class Now:
    """The moment of the next sample and what the meters show."""

    days: float
    field: Mapping[str, float] = field(default_factory=dict)
    activity: str | None = None


@dataclass(frozen=True)
class Programme:
    """What the programme's points have in common: where a sector's points start."""

    levels: Mapping[str, Level] = field(default_factory=dict)

    @classmethod
    def default(cls) -> Programme:
        """Return a programme that has learnt nothing yet."""
        return cls()

    def level(self, sector: str | None) -> Level:
        """Return where a point of a sector starts, ln COD."""
        return self.levels.get(sector or "", level_of(sector))


@dataclass(frozen=True)
class Regression:
    """One normal-inverse-gamma posterior: ln COD on the intercept and the readings."""

    weight: float
    mean: tuple[float, ...]
    covariance: tuple[tuple[float, ...], ...]
    shape: float
    rate: float


@dataclass(frozen=True)
class Posterior:
    """Everything a tablet needs to forecast at a point.

    Parameters
    ----------
    centres, spreads : mapping of str to float
        Of each reading at this point, on the scale it enters on.
    regressions : tuple of Regression
        One for each speed of fading.
    n : int
        Results behind it.
    """

    centres: Mapping[str, float]
    spreads: Mapping[str, float]
    regressions: tuple[Regression, ...]
    n: int

    def to_json(self) -> dict[str, Any]:
        """Return the pack as plain JSON: names as here, numbers in ln(mg/L)."""
        return {
            "version": 1,
            "n": self.n,
            "centres": dict(self.centres),
            "spreads": dict(self.spreads),
            "regressions": [
                {
                    "weight": one.weight,
                    "mean": list(one.mean),
                    "covariance": [list(row) for row in one.covariance],
                    "shape": one.shape,
                    "rate": one.rate,
                }
                for one in self.regressions
            ],
        }


def scaled(name: str, value: float) -> float | None:
    """Return a reading on the scale it enters on, or None where it has none."""
    if name in LOGARITHMIC:
        return math.log(value) if value > 0 else None
    return value


def _centres(history: Sequence[Observation]) -> tuple[dict[str, float], dict[str, float]]:
    centres, spreads = {}, {}
    for name in READINGS:
        seen = [scaled(name, one.field[name]) for one in history if name in one.field]
        known = [value for value in seen if value is not None]
        if known:
            centres[name] = float(np.mean(known))
            typical = SPREADS[name] ** 2
            spreads[name] = math.sqrt((3 * typical + len(known) * float(np.var(known))) / (3 + len(known)))
    return centres, spreads


def features(
    centres: Mapping[str, float], spreads: Mapping[str, float], readings: Mapping[str, float]
) -> tuple[list[float], list[str]]:
    """Return the regression's inputs for some readings, and which were far outside their past.

    Parameters
    ----------
    centres, spreads : mapping of str to float
        Of the point.
    readings : mapping of str to float
        By the names of :data:`READINGS`; what is missing enters as usual.

    Returns
    -------
    list of float
        One for the intercept, then one for each of :data:`READINGS`.
    list of str
        Names whose pull was bounded.
    """
    found, bounded = [1.0], []
    for name in READINGS:
        value = scaled(name, readings[name]) if name in readings and name in centres else None
        z = 0.0 if value is None else (value - centres[name]) / spreads[name]
        if abs(z) > FARTHEST:
            bounded.append(name)
        found.append(min(FARTHEST, max(-FARTHEST, z)))
    return found, bounded


def _imputed(bound: float, state: State, mean: float, sd: float) -> float:
    """Return the expectation of ln COD given that it lies beyond a bound, normal approximation."""
    z = (bound - mean) / sd
    if state == "over":
        return mean + sd * math.exp(-0.5 * z * z - 0.9189385332046727 - float(special.log_ndtr(-z)))
    return mean - sd * math.exp(-0.5 * z * z - 0.9189385332046727 - float(special.log_ndtr(z)))


def _regress(
    x: np.ndarray, y: np.ndarray, weights: np.ndarray, level: Level, share: float
) -> tuple[Regression, np.ndarray]:
    prior_mean = np.array([level.mean] + [0.0] * (x.shape[1] - 1))
    sds = np.array([level.sd / PRIOR_SCALE] + [SLOPE_SD] * (x.shape[1] - 1))
    prior = np.diag(1.0 / sds**2)
    precision = prior + (x * weights[:, None]).T @ x
    covariance = np.linalg.inv(precision)
    mean = covariance @ (prior @ prior_mean + x.T @ (weights * y))
    shape = 0.5 * (PRIOR_DOF + float(weights.sum()))
    drop = mean - prior_mean
    misfit = float((weights * (y - x @ mean) ** 2).sum() + drop @ prior @ drop)
    rate = 0.5 * (PRIOR_DOF * PRIOR_SCALE**2 + misfit)
    found = Regression(
        share, tuple(mean.tolist()), tuple(tuple(row) for row in covariance.tolist()), shape, rate
    )
    return found, mean


def _one_speed(
    x: np.ndarray, history: Sequence[Observation], memory: float, level: Level, share: float
) -> Regression:
    last = max((one.days for one in history), default=0.0)
    weights = np.array([math.exp(-(last - one.days) / memory) for one in history])
    bounds = np.array([math.log(one.cod) for one in history])
    y = bounds.copy()
    censored = [i for i, one in enumerate(history) if one.state != "ok"]
    found, mean = _regress(x, y, weights, level, share)
    for _ in range(ROUNDS if censored else 0):
        sd = math.sqrt(found.rate / found.shape)
        for i in censored:
            y[i] = _imputed(bounds[i], history[i].state, float(x[i] @ mean), sd)
        found, mean = _regress(x, y, weights, level, share)
    return found


def posterior(programme: Programme, sector: str | None, history: Sequence[Observation]) -> Posterior:
    """Return what a point's past teaches about its next sample.

    Parameters
    ----------
    programme : Programme
        What the programme's points have in common.
    sector : str or None
        The point's sector.
    history : sequence of Observation
        Its results, in any order; may be empty.

    Returns
    -------
    Posterior
    """
    centres, spreads = _centres(history)
    inputs = [features(centres, spreads, one.field)[0] for one in history]
    x = np.array(inputs, dtype=float).reshape(len(history), 1 + len(READINGS))
    level = programme.level(sector)
    share = 1.0 / len(MEMORY_DAYS)
    found = tuple(_one_speed(x, history, memory, level, share) for memory in MEMORY_DAYS)
    return Posterior(centres, spreads, found, len(history))


def expected(known: Posterior, now: Now) -> Predictive:
    """Return the predictive distribution of the sample of now.

    Parameters
    ----------
    known : Posterior
        Of the point.
    now : Now
        Moment and readings; a reading far outside its past has a bounded pull.

    Returns
    -------
    Predictive
    """
    inputs, _ = features(known.centres, known.spreads, now.field)
    x = np.array(inputs)
    parts = []
    for one in known.regressions:
        spread = float(x @ np.array(one.covariance) @ x)
        scale = math.sqrt(one.rate / one.shape * (1.0 + spread))
        parts.append(Component(one.weight, float(x @ np.array(one.mean)), scale, 2.0 * one.shape))
    return Predictive(tuple(parts))
