"""The regression behind a forecast: constant pulls, a level and slopes that wander, noise.

In units of the noise variance the results of a point are jointly normal. Their
covariance adds the spread of level and pulls between points, a short and a long
wandering of the level and a slow wandering of the slopes (each an
Ornstein-Uhlenbeck process: correlation falls exponentially with real time), and
the noise. Several kinds of long wandering are kept side by side and weighed by
how well each predicted the past, recent results counting most.

One Cholesky factorisation in the order of time gives every one-step-ahead
prediction of the past at once: row t of the factor knows only what lies before
t. A second one, with outliers given more noise and bounds replaced by the
normal distribution with the same two moments, gives the state now. The noise
variance itself is learnt (inverse gamma, fading), so predictions are Student t.

References
----------
.. [1] Rasmussen and Williams, Gaussian Processes for Machine Learning, chapter 2 and section 4.2.
.. [2] West and Harrison, Bayesian Forecasting and Dynamic Models, sections 10.8 and 12.2
   (variance discounting; mixing models by past predictive density).
.. [3] Minka, Expectation propagation, 2001, section 3.1 (assumed-density filtering).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from scipy import special

from app.forecast.observations import (
    INPUTS,
    Observation,
    activity_of,
    calendar_of,
    inputs_of,
    settle,
    usual_before,
)
from app.forecast.programme import MEMORIES, Programme

SHORT_DAYS, SHORT_VARIANCE = 40.0, 0.2
SLOPE_DAYS, SLOPE_VARIANCE = 1500.0, 0.1
PRIOR_SHAPE = 1.0
#: What a result's say keeps with each later one: about the spread, about the kinds of wandering.
SPREAD_KEEPS, SCORE_KEEPS = 0.97, 0.98
OUTLIER_DOF = 12.0
LOWEST_SCORE = -8.0
ROUNDS, ROUNDS_WITH_BOUNDS = 2, 4
HALF_LOG_TWO_PI = 0.9189385332046727


@dataclass(frozen=True)
class Past:
    """A point's results as the regression takes them, in order of time.

    Parameters
    ----------
    days, log_cod : ndarray of shape (n,)
        Moments, and ln COD or ln bound.
    sign : ndarray of shape (n,)
        0 for a value, 1 for more than the bound, -1 for less.
    constant : ndarray of shape (n, 12)
        Inputs of the level and the pulls.
    slopes : ndarray of shape (n, 6)
        Readings less what was usual before them.
    missing : ndarray of shape (n, 6)
        Variance of each missing input, zero where it was read.
    centre, spread, count : ndarray of shape (6,)
        What is usual after the last result.
    """

    days: np.ndarray
    log_cod: np.ndarray
    sign: np.ndarray
    constant: np.ndarray
    slopes: np.ndarray
    missing: np.ndarray
    centre: np.ndarray
    spread: np.ndarray
    count: np.ndarray


@dataclass(frozen=True)
class Filtered:
    """One-step-ahead predictions of every result, and the state after the last.

    The axis of length 4 is that of :data:`app.forecast.programme.MEMORIES`.

    Parameters
    ----------
    mean, scale, shape : ndarray of shape (n, 4)
        Student t of each result before it was known: centre, scale, half the
        degrees of freedom.
    weights : ndarray of shape (n + 1, 4)
        Of the kinds of wandering before each result and after the last.
    state : ndarray of shape (4, 20)
        Level and pulls (12), short and long wandering, wandering of slopes.
    covariance : ndarray of shape (4, 20, 20)
        Of the state, in (ln mg/L)^2.
    noise, final_shape : ndarray of shape (4,)
        Noise variance and half its degrees of freedom after the last result.
    usual_noise : ndarray of shape (4,)
        Noise variance, mean over all results.
    """

    mean: np.ndarray
    scale: np.ndarray
    shape: np.ndarray
    weights: np.ndarray
    state: np.ndarray
    covariance: np.ndarray
    noise: np.ndarray
    final_shape: np.ndarray
    usual_noise: np.ndarray


def past_of(history: Sequence[Observation]) -> Past:
    """Return results, in order of time, as the regression takes them."""
    n = len(history)
    raw = np.array([inputs_of(one.field) for one in history], dtype=float).reshape(n, len(INPUTS))
    centre, spread, count = usual_before(raw)
    settled, missing, _ = settle(raw, centre[:-1], spread[:-1])
    rest = np.array([[*activity_of(one.activity), *calendar_of(one.days)] for one in history]).reshape(n, 5)
    sign = {"ok": 0.0, "over": 1.0, "below": -1.0}
    return Past(
        np.array([one.days for one in history], dtype=float),
        np.array([math.log(one.cod) for one in history], dtype=float),
        np.array([sign[one.state] for one in history], dtype=float),
        np.concatenate([np.ones((n, 1)), settled, rest], axis=1),
        settled - centre[:-1],
        np.where(missing, spread[:-1] ** 2, 0.0),
        centre[-1],
        spread[-1],
        count[-1],
    )


def missing_noise(programme: Programme, variances: np.ndarray) -> np.ndarray:
    """Return the noise that missing readings add, against the usual noise variance."""
    slopes = np.array(programme.pull_mean[: len(INPUTS)])
    added: np.ndarray = variances @ (slopes**2 / programme.noise**2)
    return added


def _kernels(past: Past, variance: np.ndarray) -> np.ndarray:
    """Return the covariance of the signal for each kind of wandering, in noise variances."""
    apart = np.abs(past.days[:, None] - past.days[None, :])
    common = (past.constant * variance) @ past.constant.T
    common += SHORT_VARIANCE * np.exp(-apart / SHORT_DAYS)
    common += SLOPE_VARIANCE * np.exp(-apart / SLOPE_DAYS) * (past.slopes @ past.slopes.T)
    fading = {days: np.exp(-apart / days) for days in {days for days, _ in MEMORIES}}
    found = np.empty((len(MEMORIES), *apart.shape))
    for kernel, (days, size) in zip(found, MEMORIES, strict=True):
        np.multiply(fading[days], size, out=kernel)
        kernel += common
    return found


def _links(past: Past, variance: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return covariances of the state now with the past (4, 20, n), and of the state itself (4, 20)."""
    ago = past.days[-1] - past.days if len(past.days) else past.days
    constant = (past.constant * variance).T
    short = SHORT_VARIANCE * np.exp(-ago / SHORT_DAYS)[None]
    slopes = SLOPE_VARIANCE * np.exp(-ago / SLOPE_DAYS) * past.slopes.T
    links, sizes = [], []
    for days, size in MEMORIES:
        links.append(np.concatenate([constant, short, size * np.exp(-ago / days)[None], slopes]))
        sizes.append([*variance, SHORT_VARIANCE, size, *[SLOPE_VARIANCE] * len(INPUTS)])
    return np.stack(links), np.array(sizes)


@lru_cache(maxsize=32)
def _fading(n: int, keeps: float) -> np.ndarray:
    steps = np.arange(n + 1)[:, None] - 1 - np.arange(n)[None, :]
    return np.where(steps >= 0, keeps ** np.maximum(steps, 0), 0.0)


def faded(values: np.ndarray, keeps: float) -> np.ndarray:
    """Return, before each row and after the last, the sum of rows faded by how many came later.

    Parameters
    ----------
    values : ndarray of shape (n, m)
        Rows in order of time.
    keeps : float
        What a row keeps with each later one.

    Returns
    -------
    ndarray of shape (n + 1, m)
    """
    total: np.ndarray = _fading(len(values), keeps) @ values
    return total


def _log_density(error: np.ndarray, scale: np.ndarray, shape: np.ndarray) -> np.ndarray:
    top = special.gammaln(shape + 0.5) - special.gammaln(shape)
    found: np.ndarray = (
        top - 0.5 * np.log(2.0 * shape * math.pi) - (shape + 0.5) * np.log1p(error**2 / (2.0 * shape))
    ) - np.log(scale)
    return found


def _hazard(distance: np.ndarray) -> np.ndarray:
    """Return the normal density over the probability beyond, far out too."""
    found: np.ndarray = np.exp(-0.5 * distance**2 - HALF_LOG_TWO_PI - special.log_ndtr(-distance))
    return found


class _Rounds:
    """The rounds of factorising, each with better noise for outliers and better stand-ins for bounds."""

    def __init__(self, past: Past, programme: Programme, sector: str | None) -> None:
        start, spread = programme.start(sector)
        self.past, self.start, self.base = past, start, programme.noise**2
        variance = (spread / programme.noise) ** 2
        kernels = _kernels(past, variance)
        self.links, self.sizes = _links(past, variance)
        self.own = (1.0 + missing_noise(programme, past.missing))[:, None]
        self.usual = (past.constant @ start)[:, None]
        n, kinds = len(past.days), len(MEMORIES)
        self.target = np.repeat(past.log_cod[:, None], kinds, axis=1) - self.usual
        self.noise = np.repeat(self.own, kinds, axis=1)
        self.free = (past.sign == 0)[:, None]
        self.mean, self.signal = np.zeros((n, kinds)), np.zeros((n, kinds))
        self.shape = np.repeat(PRIOR_SHAPE + 0.5 * faded(self.free * 1.0, SPREAD_KEEPS), kinds, axis=1)
        self.spread = np.full((n + 1, kinds), self.base)
        self.variance = np.diagonal(kernels, axis1=1, axis2=2)
        self.whole = self._with_rows(kernels)

    def _with_rows(self, kernels: np.ndarray) -> np.ndarray:
        """Return kernels with a row for the results and rows for the state below, their diagonal far off."""
        kinds, n, _ = kernels.shape
        size = n + 1 + self.links.shape[1]
        whole = np.zeros((kinds, size, size))
        whole[:, :n, :n] = kernels
        whole[:, n + 1 :, :n] = self.links
        whole[:, range(n, size), range(n, size)] = 1e12
        return whole

    def factorise(self, with_state: bool) -> np.ndarray:
        """Predict each result from those before it; return the factor's rows below the results."""
        n = len(self.target)
        size = n + 1 + (self.links.shape[1] if with_state else 0)
        self.whole[:, range(n), range(n)] = self.variance + self.noise.T
        self.whole[:, n, :n] = self.target.T
        factor = np.linalg.cholesky(self.whole[:, :size, :size])
        root = np.diagonal(factor, axis1=1, axis2=2)[:, :n].T
        rows: np.ndarray = factor[:, n:, :n]
        self.mean = self.target - rows[:, 0].T * root
        self.signal = np.maximum(root**2 - self.noise, 1e-9)
        return rows

    def judge(self) -> None:
        """Learn the noise variance, give outliers more noise and put stand-ins for the bounds."""
        total = self.signal + self.own
        error = np.where(self.free, self.past.log_cod[:, None] - self.usual - self.mean, 0.0)
        squares = error**2 / total
        trust = np.ones_like(squares)
        for _ in range(2):
            told = faded(0.5 * squares * trust * self.free, SPREAD_KEEPS)
            self.spread = (PRIOR_SHAPE * self.base + told) / self.shape
            trust = np.minimum(1.0, (OUTLIER_DOF + 1) / (OUTLIER_DOF + squares / self.spread[:-1]))
        self.noise = self.own / trust
        if not self.free.all():
            self._stand_in(total)

    def _stand_in(self, total: np.ndarray) -> None:
        """Replace each bound by the normal distribution that moves the state by the same two moments."""
        sign = self.past.sign[:, None]
        scale = np.sqrt(self.spread[:-1] * total)
        distance = sign * (self.past.log_cod[:, None] - self.usual - self.mean) / scale
        hazard = _hazard(distance)
        told = np.clip(hazard * (hazard - distance), 1e-6, 1.0 - 1e-6)
        value = self.mean + sign * scale * hazard / told
        self.target = np.where(self.free, self.target, value)
        self.noise = np.where(self.free, self.noise, total / told - self.signal)

    def scores(self) -> np.ndarray:
        """Return the log density of each result (of a bound: the log probability beyond), floored."""
        scale = np.sqrt(self.spread[:-1] * (self.signal + self.own))
        error = (self.past.log_cod[:, None] - self.usual - self.mean) / scale
        density = _log_density(error, scale, self.shape[:-1])
        if not self.free.all():
            beyond = special.stdtr(2.0 * self.shape[:-1], -self.past.sign[:, None] * error)
            density = np.where(self.free, density, np.log(np.maximum(beyond, 1e-12)))
        floored: np.ndarray = np.maximum(density, LOWEST_SCORE)
        return floored


def filtered(past: Past, programme: Programme, sector: str | None) -> Filtered:
    """Return the one-step-ahead predictions of a point's results and the state after them.

    Parameters
    ----------
    past : Past
        Results in order of time; may be empty.
    programme : Programme
        Where level and pulls start.
    sector : str or None
        The point's sector.

    Returns
    -------
    Filtered
    """
    work = _Rounds(past, programme, sector)
    for _ in range((ROUNDS if work.free.all() else ROUNDS_WITH_BOUNDS) - 1):
        work.factorise(False)
        work.judge()
    rows = work.factorise(True)
    work.judge()
    shift = rows[:, 1:]
    state = np.einsum("kij,kj->ki", shift, rows[:, 0])
    state[:, : len(work.start)] += work.start
    within = np.einsum("ki,ij->kij", work.sizes, np.eye(work.sizes.shape[1])) - shift @ shift.transpose(
        0, 2, 1
    )
    logs = np.log(programme.memory_weights) + faded(work.scores(), SCORE_KEEPS)
    weights = np.exp(logs - logs.max(axis=1, keepdims=True))
    spread = work.spread
    return Filtered(
        work.mean + work.usual,
        np.sqrt(spread[:-1] * (work.signal + work.own)),
        work.shape[:-1],
        weights / weights.sum(axis=1, keepdims=True),
        state,
        within * spread[-1][:, None, None],
        spread[-1],
        work.shape[-1],
        spread.mean(axis=0),
    )
