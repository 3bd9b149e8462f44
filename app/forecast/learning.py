"""What a programme's points have in common, learnt from their results.

A few rounds of expectation and maximisation: each point's level and pulls are
estimated from where the programme starts them, then the programme's means and
spreads are moved to those of the points, their own uncertainty included. The
handbook's and the starting values count like two or three points, so that a
small programme stays near them.

References
----------
.. [1] Dempster, Laird and Rubin, J. R. Statist. Soc. B 39 (1977) 1-38, section 4.5.
.. [2] Gelman et al., Bayesian Data Analysis, 3rd ed., section 5.4 (partial pooling).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from app.forecast.observations import Observation, in_order
from app.forecast.posterior import LONGEST
from app.forecast.programme import MEMORIES, PULLS, Programme, key_of
from app.forecast.sectors import Level
from app.forecast.wandering import Past, filtered, past_of

ROUNDS = 4
#: How many points the starting values count for: pulls, levels, spreads, noise.
PULLS_COUNT, LEVEL_COUNT, SPREAD_COUNT, NOISE_COUNT = 2.0, 0.5, 1.0, 3.0
#: From so many results on a point's noise counts in full.
FULL_NOISE = 10.0


@dataclass(frozen=True)
class Point:
    """A point's sector and results."""

    sector: str | None
    history: Sequence[Observation]


@dataclass(frozen=True)
class _Told:
    """What one point says.

    Mean and variance of level and pulls, how far each is its own result's and
    not the programme's (0 to 1), kinds of wandering, noise, results.
    """

    mean: np.ndarray
    variance: np.ndarray
    own: np.ndarray
    weights: np.ndarray
    log_noise: float
    n: int


def _told(past: Past, programme: Programme, sector: str | None) -> _Told:
    known = filtered(past, programme, sector)
    weights, k = known.weights[-1], 1 + len(PULLS)
    means = known.state[:, :k]
    mean = weights @ means
    # The state's variances are in units of this point's noise: taken back to the programme's.
    within = (
        np.diagonal(known.covariance, axis1=1, axis2=2)[:, :k] / known.noise[:, None] * programme.noise**2
    )
    variance = weights @ (within + (means - mean) ** 2)
    before = programme.start(sector)[1] ** 2
    own = np.clip(1.0 - weights @ within / before, 0.0, 1.0)
    noise = 0.5 * math.log(float(weights @ known.usual_noise))
    return _Told(mean, variance, own, weights, noise, len(past.days))


def _centre(told: Sequence[_Told], start: np.ndarray, counts: float) -> np.ndarray:
    means, own = np.array([one.mean for one in told]), np.array([one.own for one in told])
    found: np.ndarray = ((own * means).sum(axis=0) + counts * start) / (own.sum(axis=0) + counts)
    return found


def _spread(told: Sequence[_Told], centre: np.ndarray, start: np.ndarray) -> np.ndarray:
    own = np.array([one.own for one in told])
    squares = np.array([one.variance + (one.mean - centre) ** 2 for one in told])
    total = (own * squares).sum(axis=0) + SPREAD_COUNT * start**2
    found: np.ndarray = np.sqrt(total / (own.sum(axis=0) + SPREAD_COUNT))
    return found


def _level(told: Sequence[_Told], sector: str) -> Level:
    mean, sd = Programme.default().start(sector)
    centre = _centre(told, mean, LEVEL_COUNT)
    return Level(float(centre[0]), float(_spread(told, centre, sd)[0]))


def _moved(told: Sequence[_Told], sectors: Sequence[str]) -> Programme:
    """Return the programme that these points' levels and pulls make likeliest, starting values counted in."""
    start = Programme.default()
    mean, sd = start.start(None)
    centre = _centre(told, mean, PULLS_COUNT)
    spread = _spread(told, centre, sd)
    share = np.array([min(1.0, one.n / FULL_NOISE) for one in told])
    logs = np.array([one.log_noise for one in told])
    noise = (share @ logs + NOISE_COUNT * math.log(start.noise)) / (share.sum() + NOISE_COUNT)
    weights = np.sum([one.weights for one in told], axis=0) + 1.0
    levels = {
        name: _level([one for one, own in zip(told, sectors, strict=True) if own == name], name)
        for name in sorted(set(sectors))
    }
    return Programme(
        levels,
        tuple(centre[1:].tolist()),
        tuple(spread[1:].tolist()),
        math.exp(noise),
        tuple((weights / (len(told) + len(MEMORIES))).tolist()),
        len(told),
    )


def learn(points: Sequence[Point]) -> Programme:
    """Return what points have in common.

    Parameters
    ----------
    points : sequence of Point
        Points with their results; those without results say nothing.

    Returns
    -------
    Programme
        The starting one when no point has a result.
    """
    speaking = [one for one in points if one.history]
    if not speaking:
        return Programme.default()
    pasts = [past_of(in_order(one.history)[-LONGEST:]) for one in speaking]
    sectors = [key_of(one.sector) for one in speaking]
    programme = Programme.default()
    for _ in range(ROUNDS):
        told = [_told(past, programme, own) for past, own in zip(pasts, sectors, strict=True)]
        programme = _moved(told, sectors)
    return programme
