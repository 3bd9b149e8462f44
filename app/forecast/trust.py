"""Whether to trust the plan: every result of a point forecast from the results before it.

The same figures are made for rules of thumb (the last value, the median of the
last five, always the same dilution) and for an oracle that knows the answer:
the ladder's own limit. A laboratory can judge on its own history.

References
----------
.. [1] Dawid, J. R. Statist. Soc. A 147 (1984) 278-292 (prequential judgement).
.. [2] Gneiting, Balabdaoui and Raftery, J. R. Statist. Soc. B 69 (2007) 243-268
   (probability integral transform).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from app.errors import InputError
from app.forecast.calibration import Correction, correction, tail_dof
from app.forecast.learning import Point
from app.forecast.observations import Observation, in_order
from app.forecast.planning import Range
from app.forecast.predictive import Component, Predictive
from app.forecast.programme import Programme
from app.forecast.wandering import Filtered, filtered, past_of

#: Long histories are taken in pieces, each with at least half a piece of past.
PIECE = 400
MEDIAN_OF = 5


@dataclass(frozen=True)
class Shares:
    """How often a rule was right, over and below; shares of ``n``.

    ``unknown`` counts bounds that do not tell whether the dilution was right.
    """

    n: int
    right: float | None
    over: float | None
    below: float | None
    unknown: int


@dataclass(frozen=True)
class Trust:
    """What a back-test found.

    Parameters
    ----------
    forecast, last_value, median_of_five, same_dilution, oracle : Shares
        Of the forecast, the rules of thumb and the oracle, on the same results.
    measured : int
        Results with a value, for the next three.
    inside_50, inside_90 : float or None
        Share of values inside the central interval.
    log_density : float or None
        Mean log density of ln COD.
    """

    forecast: Shares
    last_value: Shares
    median_of_five: Shares
    same_dilution: Shares
    oracle: Shares
    measured: int
    inside_50: float | None
    inside_90: float | None
    log_density: float | None


def one_step_ahead(
    programme: Programme, sector: str | None, history: Sequence[Observation]
) -> list[Predictive]:
    """Return what was expected of each result from those before it.

    Parameters
    ----------
    programme : Programme
        What the programme's points have in common.
    sector : str or None
        The point's sector.
    history : sequence of Observation
        In order of time.

    Returns
    -------
    list of Predictive
        Mixtures of the kinds of wandering.
    """
    found: list[Predictive] = []
    while len(found) < len(history):
        begin = max(0, len(found) - PIECE // 2)
        past = past_of(history[begin : begin + PIECE])
        known = filtered(past, programme, sector)
        right = correction(past, known)
        found += [_mixture(known, right, t) for t in range(len(found) - begin, len(known.mean))]
    return found


def _mixture(known: Filtered, right: Correction, t: int) -> Predictive:
    centres = known.mean[t] + right.shift[t]
    scales = known.scale[t] * right.width[t]
    told = zip(known.weights[t], centres, scales, tail_dof(2.0 * known.shape[t]), strict=True)
    return Predictive(tuple(Component(*map(float, one)) for one in told))


@dataclass(frozen=True)
class _Window:
    low: float
    high: float

    def verdict(self, one: Observation) -> str:
        """Return where a result would have fallen; ``unknown`` where its bound does not tell."""
        if one.state == "ok":
            return "over" if one.cod > self.high else "below" if one.cod < self.low else "right"
        if one.state == "over":
            return "over" if one.cod >= self.high else "unknown"
        return "below" if one.cod <= self.low else "unknown"


Rule = Callable[[int], _Window]


def _windows(ranges: Sequence[Range], dilutions: Sequence[float]) -> list[_Window]:
    return [_Window(one.low * factor, one.high * factor) for one in ranges for factor in dilutions]


def _around(windows: Sequence[_Window], cod: float) -> _Window:
    """Return the window whose middle, on the log scale, is nearest a value."""
    return min(windows, key=lambda w: abs(math.log(max(w.low, 1e-9) * w.high) / 2.0 - math.log(cod)))


def _best(windows: Sequence[_Window], expected: Predictive) -> _Window:
    below = expected.below([w.low for w in windows])
    under = expected.below([w.high for w in windows])
    return min(
        zip(windows, under - below, under, strict=True), key=lambda one: (-round(float(one[1]), 9), -one[2])
    )[0]


def _shares(verdicts: Sequence[str]) -> Shares:
    known = [one for one in verdicts if one != "unknown"]
    n = len(known)
    right, over, below = (known.count(word) / n if n else None for word in ("right", "over", "below"))
    return Shares(n, right, over, below, len(verdicts) - n)


def _same(points: Sequence[Sequence[Observation]], windows: Sequence[_Window], first: int) -> list[str]:
    """Return the verdicts of the one window that would have been right most often, over all points."""
    tried = [[w.verdict(one) for history in points for one in history[first:]] for w in windows]
    return max(tried, key=lambda verdicts: verdicts.count("right"))


def _oracle(windows: Sequence[_Window], one: Observation) -> str:
    verdicts = [w.verdict(one) for w in windows]
    found = [word for word in ("right", "unknown") if word in verdicts]
    return found[0] if found else max(verdicts, key=verdicts.count)


def backtest(
    programme: Programme,
    points: Sequence[Point],
    ranges: Sequence[Range],
    dilutions: Sequence[float],
    first: int = MEDIAN_OF,
) -> Trust:
    """Return how the forecast and the rules of thumb would have done on past results.

    Parameters
    ----------
    programme : Programme
        Where points start; each result is forecast from this and the past of its point only.
    points : sequence of Point
        Points with their results.
    ranges : sequence of Range
        Working ranges.
    dilutions : sequence of float
        Factors allowed.
    first : int
        Results of each point that are only learnt from, 1 or more (a rule of thumb needs one).

    Returns
    -------
    Trust
        With None for every share where no result is left to judge by.

    Raises
    ------
    InputError
        If there is no range or no dilution, or ``first`` is under 1.
    """
    return backtest_each(programme, points, ranges, dilutions, first)[0]


def backtest_each(
    programme: Programme,
    points: Sequence[Point],
    ranges: Sequence[Range],
    dilutions: Sequence[float],
    first: int = MEDIAN_OF,
) -> tuple[Trust, list[Trust]]:
    """Return what :func:`backtest` finds for all points together, and for each of them.

    The parameters are those of :func:`backtest`; for a point, "always the same
    dilution" is the one that would have been best there.

    Returns
    -------
    tuple of Trust and list of Trust

    Raises
    ------
    InputError
        If there is no range or no dilution, or ``first`` is under 1.
    """
    if not ranges or not dilutions or first < 1:
        words = "a back-test needs a range, dilutions and one result to start from"
        raise InputError("The back-test cannot be made.", {"dilutions": [words]})
    windows = _windows(ranges, dilutions)
    judged = []
    for point in points:
        history = in_order(point.history)
        judged.append(_judged(history, one_step_ahead(programme, point.sector, history), windows, first))
    return _trust(judged, windows, first), [_trust([one], windows, first) for one in judged]


@dataclass(frozen=True)
class _Judged:
    """Verdicts by rule (forecast, last value, median of five, oracle), and what the values showed."""

    history: Sequence[Observation]
    verdicts: list[list[str]]
    at: list[float]
    density: list[float]


def _judged(
    history: Sequence[Observation], ahead: Sequence[Predictive], windows: Sequence[_Window], first: int
) -> _Judged:
    found = _Judged(history, [[], [], [], []], [], [])
    for t in range(first, len(history)):
        one, expected = history[t], ahead[t]
        median = float(np.median([past.cod for past in history[max(0, t - MEDIAN_OF) : t]]))
        rules = (_best(windows, expected), _around(windows, history[t - 1].cod), _around(windows, median))
        verdicts = [*(window.verdict(one) for window in rules), _oracle(windows, one)]
        for kept, verdict in zip(found.verdicts, verdicts, strict=True):
            kept.append(verdict)
        if one.state == "ok":
            found.at.append(expected.cdf(one.cod))
            found.density.append(math.log(max(expected.density(math.log(one.cod)), 1e-300)))
    return found


def _trust(judged: Sequence[_Judged], windows: Sequence[_Window], first: int) -> Trust:
    rules = [[verdict for one in judged for verdict in one.verdicts[rule]] for rule in range(4)]
    at = np.array([value for one in judged for value in one.at])
    density = [value for one in judged for value in one.density]
    return Trust(
        _shares(rules[0]),
        _shares(rules[1]),
        _shares(rules[2]),
        _shares(_same([one.history for one in judged], windows, first)),
        _shares(rules[3]),
        len(at),
        float(np.mean(np.abs(at - 0.5) <= 0.25)) if len(at) else None,
        float(np.mean(np.abs(at - 0.5) <= 0.45)) if len(at) else None,
        float(np.mean(density)) if density else None,
    )
