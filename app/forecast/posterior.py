"""What a point's past teaches about its next sample, small enough for a tablet.

The kinds of wandering of :mod:`app.forecast.wandering` are drawn together into
one normal state with their common mean and covariance: on open series that
changes the forecasts less than the third digit of their log density. What the
past predictions got wrong (:mod:`app.forecast.calibration`) is in it. With the
moment and the readings of now the state gives a Student t distribution of ln
COD; the server and the tablet do that last step alike.

Assumes that between the last result and now the slopes keep their values; the
level goes back towards its usual one.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from app.errors import InputError
from app.forecast.calibration import correction, tail_dof
from app.forecast.observations import (
    INPUTS,
    KNOWN_WELL,
    READINGS,
    SOURCE,
    Now,
    Observation,
    activity_of,
    calendar_of,
    in_order,
    inputs_of,
    settle,
)
from app.forecast.predictive import Component, Predictive
from app.forecast.programme import MEMORIES, Programme
from app.forecast.wandering import SHORT_DAYS, SHORT_VARIANCE, Filtered, Past, filtered, past_of

VERSION = 2
#: Results further back than this many add nothing that later ones do not say.
LONGEST = 200
LONG_DAYS = tuple(sorted({days for days, _ in MEMORIES}))
WANDER_DAYS = (SHORT_DAYS, *LONG_DAYS)
STATE = 1 + len(INPUTS) + 5 + len(WANDER_DAYS)
CONSTANT = 1 + len(INPUTS) + 5
DIGITS = 7
NOTHING = 1e-12


@dataclass(frozen=True)
class Posterior:
    """Everything a tablet needs to forecast at a point.

    Parameters
    ----------
    n : int
        Results behind it.
    last_days : float
        Moment of the last result, days since 1970; 0 without one.
    centre, spread, count : tuple of float
        What is usual here for each of :data:`app.forecast.observations.INPUTS`.
    missing : tuple of float
        Variance that each missing input adds, against the noise variance.
    mean : tuple of float
        The state of length 15: level at the usual readings, slopes of the
        inputs, activities, season, and the wandering by :data:`WANDER_DAYS`.
    covariance : tuple of tuple of float
        Of the state, (ln mg/L)^2.
    wander : tuple of float
        Variance each wandering of the level has when nothing is known of it.
    noise, dof : float
        Noise variance and the degrees of freedom it is known with.
    """

    n: int
    last_days: float
    centre: tuple[float, ...]
    spread: tuple[float, ...]
    count: tuple[float, ...]
    missing: tuple[float, ...]
    mean: tuple[float, ...]
    covariance: tuple[tuple[float, ...], ...]
    wander: tuple[float, ...]
    noise: float
    dof: float

    def to_json(self) -> dict[str, Any]:
        """Return the pack as plain JSON, numbers to seven digits, the covariance's upper triangle by rows."""
        upper = [value for i, row in enumerate(self.covariance) for value in row[i:]]
        return {
            "version": VERSION,
            "n": self.n,
            "last_days": self.last_days,
            "centre": _short(self.centre),
            "spread": _short(self.spread),
            "count": [int(value) for value in self.count],
            "missing": _short(self.missing),
            "regressions": [
                {
                    "mean": _short(self.mean),
                    "covariance": _short(upper),
                    "wander_days": list(WANDER_DAYS),
                    "wander": _short(self.wander),
                    "noise": _short([self.noise])[0],
                    "dof": _short([self.dof])[0],
                }
            ],
        }

    @classmethod
    def from_json(cls, told: Any) -> Posterior:
        """Return the posterior of a pack.

        Raises
        ------
        InputError
            If it is no pack of this version.
        """
        try:
            if told["version"] != VERSION:
                raise ValueError
            one = told["regressions"][0]
            upper = np.zeros((STATE, STATE))
            upper[np.triu_indices(STATE)] = one["covariance"]
            whole = upper + np.triu(upper, 1).T
            return cls(
                int(told["n"]),
                float(told["last_days"]),
                _tuple(told["centre"]),
                _tuple(told["spread"]),
                _tuple(told["count"]),
                _tuple(told["missing"]),
                _tuple(one["mean"]),
                tuple(map(tuple, whole.tolist())),
                _tuple(one["wander"]),
                float(one["noise"]),
                float(one["dof"]),
            )
        except (KeyError, IndexError, TypeError, ValueError):
            words = "is no pack of this version; it is made anew from the point's results"
            raise InputError("The point's forecast cannot be used.", {"pack": [words]}) from None


def _short(values: Sequence[float]) -> list[float]:
    return [float(f"{value:.{DIGITS}g}") if abs(value) > NOTHING else 0.0 for value in values]


def _tuple(values: Sequence[float]) -> tuple[float, ...]:
    return tuple(float(value) for value in values)


def _onto_state(centre: np.ndarray) -> np.ndarray:
    """Return the matrices (4, 15, 20) from the regression's state to the pack's, one a kind of wandering."""
    k = len(INPUTS)
    common = np.zeros((STATE, CONSTANT + 2 + k))
    common[:CONSTANT, :CONSTANT] = np.eye(CONSTANT)
    common[0, 1 : 1 + k] = centre
    common[1 : 1 + k, CONSTANT + 2 :] = np.eye(k)
    common[CONSTANT, CONSTANT] = 1.0
    found = np.repeat(common[None], len(MEMORIES), axis=0)
    for kind, (days, _) in enumerate(MEMORIES):
        found[kind, CONSTANT + 1 + LONG_DAYS.index(days), CONSTANT + 1] = 1.0
    return found


def _together(past: Past, known: Filtered) -> tuple[np.ndarray, np.ndarray, list[float]]:
    """Return mean, covariance and wandering variances of the kinds of wandering taken as one."""
    onto, weights = _onto_state(past.centre), known.weights[-1]
    means = np.einsum("kij,kj->ki", onto, known.state)
    mean = weights @ means
    apart = means - mean
    covariance = np.einsum("k,kij->ij", weights, onto @ known.covariance @ onto.transpose(0, 2, 1))
    covariance += np.einsum("k,ki,kj->ij", weights, apart, apart)
    wander = [SHORT_VARIANCE * float(weights @ known.noise)]
    for days in LONG_DAYS:
        shares = [known.noise[k] * size if at == days else 0.0 for k, (at, size) in enumerate(MEMORIES)]
        wander.append(float(weights @ np.array(shares)))
    return mean, covariance, wander


def posterior(programme: Programme, sector: str | None, history: Sequence[Observation]) -> Posterior:
    """Return what a point's past teaches about its next sample.

    Parameters
    ----------
    programme : Programme
        What the programme's points have in common.
    sector : str or None
        The point's sector.
    history : sequence of Observation
        Its results, in any order; may be empty. The last 200 count.

    Returns
    -------
    Posterior
    """
    results = in_order(history)[-LONGEST:]
    past = past_of(results)
    known = filtered(past, programme, sector)
    mean, covariance, wander = _together(past, known)
    right = correction(past, known)
    mean[0] += right.shift[-1]
    widened = float(right.width[-1]) ** 2
    pulls = np.array(programme.pull_mean[: len(INPUTS)])
    return Posterior(
        len(history),
        float(past.days[-1]) if results else 0.0,
        tuple(past.centre.tolist()),
        tuple(past.spread.tolist()),
        tuple(past.count.tolist()),
        tuple(((pulls * past.spread / programme.noise) ** 2).tolist()),
        tuple(mean.tolist()),
        tuple(map(tuple, (widened * covariance).tolist())),
        tuple(widened * value for value in wander),
        widened * float(known.weights[-1] @ known.noise),
        float(tail_dof(2.0 * known.weights[-1] @ known.final_shape)),
    )


def inputs_now(known: Posterior, now: Now) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Return what now means for the state.

    Parameters
    ----------
    known : Posterior
        Of the point.
    now : Now
        Moment and readings.

    Returns
    -------
    inputs : ndarray of shape (15,)
        The state's inputs.
    keeps : ndarray of shape (3,)
        What each wandering keeps since the last result.
    missing, bounded : ndarray of bool, shape (6,)
        Inputs not read, and inputs drawn back to their bound.
    """
    centre, spread = np.array(known.centre), np.array(known.spread)
    settled, missing, bounded = settle(np.array(inputs_of(now.field)), centre, spread)
    gap = max(now.days - known.last_days, 0.0) if known.n else math.inf
    keeps = np.exp(-gap / np.array(WANDER_DAYS))
    rest = [*activity_of(now.activity), *calendar_of(now.days)]
    return np.array([1.0, *(settled - centre), *rest, *keeps]), keeps, missing, bounded


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
    inputs, keeps, missing, _ = inputs_now(known, now)
    mean, scale = moments(known, inputs[None], keeps, missing[None])
    return Predictive((Component(1.0, float(mean[0]), float(scale[0]), known.dof),))


def moments(
    known: Posterior, inputs: np.ndarray, keeps: np.ndarray, missing: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Return centre and scale of ln COD for several sets of inputs.

    Parameters
    ----------
    known : Posterior
        Of the point.
    inputs : ndarray of shape (m, 15)
        Inputs of the state.
    keeps : ndarray of shape (3,)
        What each wandering keeps since the last result.
    missing : ndarray of bool, shape (m, 6)
        Inputs not read.

    Returns
    -------
    tuple of ndarray of shape (m,)
    """
    variance = np.einsum("mi,ij,mj->m", inputs, np.array(known.covariance), inputs)
    variance += float(np.array(known.wander) @ (1.0 - keeps**2))
    variance += known.noise * (1.0 + missing @ np.array(known.missing))
    return inputs @ np.array(known.mean), np.sqrt(variance)


def bounded_readings(known: Posterior, now: Now) -> tuple[str, ...]:
    """Return the readings of now that lie far outside this point's past, so that their pull is bounded.

    Parameters
    ----------
    known : Posterior
        Of the point.
    now : Now
        Moment and readings.

    Returns
    -------
    tuple of str
        Names of :data:`app.forecast.observations.READINGS`; none is named
        before five readings of it are known.
    """
    bounded = inputs_now(known, now)[3]
    named = {READINGS[SOURCE[i]] for i in range(len(INPUTS)) if bounded[i] and known.count[i] >= KNOWN_WELL}
    return tuple(name for name in READINGS if name in named)
