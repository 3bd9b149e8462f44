"""Control charts: limits frozen from a named baseline, and the rule that fired in words.

Limits come from a baseline of at least twenty results that were chosen and
named once; later results are judged by them and never enter them, and a result
with a known failure is left out of the baseline with its reason. Individuals
carry three standard deviations of the baseline (long term) or 2.66 mean moving
ranges (short term; 3 / d2 for ranges of two). A range chart of duplicates
carries 3.267 mean ranges, warning at 2.512. EWMA and CUSUM see small shifts
that single points hide.

References
----------
Standard Methods 1020 B (rules, from memory); Montgomery, Introduction to
Statistical Quality Control; ISO 7870-2.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from app.chemistry.problems import Problems

FEWEST_BASELINE = 20
#: Mean range of two normal values in standard deviations; 3 / d2 is the usual 2.66.
D2_OF_TWO = 1.1284
RANGE_ACTION = 3.267
RANGE_WARNING = 2.512
RUN_OF_ONE_SIDE = 7

Spread = Literal["standard deviation", "moving range"]


@dataclass(frozen=True)
class Baseline:
    """Results that limits were frozen from.

    Parameters
    ----------
    name : str
        For example ``"first half of 2031"``.
    n : int
        Results used.
    mean, sd, mean_moving_range : float
        Of the results used, in their order.
    left_out : tuple of tuple
        (index, reason) of results with a known failure.
    """

    name: str
    n: int
    mean: float
    sd: float
    mean_moving_range: float
    left_out: tuple[tuple[int, str], ...]


def freeze(
    name: str,
    values: Sequence[float],
    left_out: Mapping[int, str] | None = None,
    fewest: int = FEWEST_BASELINE,
) -> Baseline:
    """Freeze a baseline.

    Parameters
    ----------
    name : str
        What it will be called on the chart.
    values : sequence of float
        In time order.
    left_out : mapping of int to str, optional
        Indices of results with a known failure, and the reason.
    fewest : int
        Results needed.

    Returns
    -------
    Baseline

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    wrong, gone = Problems(), dict(left_out or {})
    if not name.strip():
        wrong.add("name", "a baseline needs a name")
    for i, value in enumerate(values):
        wrong.number(f"values.{i}", value)
    for index, reason in gone.items():
        if not 0 <= index < len(values):
            wrong.add(f"left_out.{index}", "there is no such result")
        elif not reason.strip():
            wrong.add(f"left_out.{index}", "a result is left out only with its reason")
    used = [v for i, v in enumerate(values) if i not in gone]
    if len(used) < max(fewest, 2):
        wrong.add("values", f"{len(used)} results: a baseline needs at least {max(fewest, 2)}")
    wrong.stop("No limits can be frozen from these results.")
    mean = math.fsum(used) / len(used)
    sd = math.sqrt(math.fsum((v - mean) ** 2 for v in used) / (len(used) - 1))
    moves = [abs(b - a) for a, b in pairwise(used)]
    left = tuple(sorted(gone.items()))
    return Baseline(name, len(used), mean, sd, math.fsum(moves) / len(moves), left)


@dataclass(frozen=True)
class Limits:
    """The lines of a chart.

    Parameters
    ----------
    centre, sigma : float
        Middle, and one third of the distance to the action limits.
    lower_action, lower_warning, upper_warning, upper_action : float
        Lines.
    baseline : str
        Name of the baseline.
    """

    centre: float
    sigma: float
    lower_action: float
    lower_warning: float
    upper_warning: float
    upper_action: float
    baseline: str


def individuals_limits(baseline: Baseline, spread: Spread = "standard deviation") -> Limits:
    """Return the limits of a chart of single results.

    Parameters
    ----------
    baseline : Baseline
        Frozen.
    spread : {"standard deviation", "moving range"}
        Long-term or short-term scatter.

    Returns
    -------
    Limits
    """
    short = baseline.mean_moving_range / D2_OF_TWO
    sigma = baseline.sd if spread == "standard deviation" else short
    return _limits(baseline.mean, sigma, baseline.name)


def _limits(centre: float, sigma: float, name: str) -> Limits:
    return Limits(
        centre,
        sigma,
        centre - 3.0 * sigma,
        centre - 2.0 * sigma,
        centre + 2.0 * sigma,
        centre + 3.0 * sigma,
        name,
    )


def no_wider_than(limits: Limits, lower: float, upper: float) -> Limits:
    """Return limits whose action lines go no further than those of the method.

    Parameters
    ----------
    limits : Limits
        The laboratory's own.
    lower, upper : float
        For example 90 and 110 % recovery under EPA 410.4; own limits serve
        only where they are as tight or tighter.

    Returns
    -------
    Limits
    """
    return Limits(
        limits.centre,
        limits.sigma,
        max(limits.lower_action, lower),
        max(limits.lower_warning, lower),
        min(limits.upper_warning, upper),
        min(limits.upper_action, upper),
        limits.baseline,
    )


def range_limits(baseline: Baseline) -> Limits:
    """Return the limits of a chart of duplicate ranges.

    Parameters
    ----------
    baseline : Baseline
        Frozen from ranges (largest less smallest of two) or from relative
        percent differences.

    Returns
    -------
    Limits
        The lower lines are zero.
    """
    mean = baseline.mean
    sigma = mean * (RANGE_ACTION - 1.0) / 3.0
    return Limits(mean, sigma, 0.0, 0.0, RANGE_WARNING * mean, RANGE_ACTION * mean, baseline.name)


@dataclass(frozen=True)
class Fired:
    """A rule that a result set off.

    Parameters
    ----------
    index : int
        Of the result that completed the pattern.
    stops : bool
        Whether the work stops (a result beyond an action limit) or a cause
        is looked for.
    words : str
        The rule in words.
    """

    index: int
    stops: bool
    words: str


def rules_fired(values: Sequence[float], limits: Limits) -> tuple[Fired, ...]:
    """Return the rules that later results set off, in time order.

    Parameters
    ----------
    values : sequence of float
        Results after the baseline.
    limits : Limits
        Frozen.

    Returns
    -------
    tuple of Fired
    """
    fired = []
    for i, value in enumerate(values):
        if not limits.lower_action <= value <= limits.upper_action:
            fired.append(Fired(i, True, f"beyond the action limit of '{limits.baseline}'"))
        fired += [
            Fired(i, False, words)
            for words in _patterns(values[max(0, i + 1 - RUN_OF_ONE_SIDE) : i + 1], limits)
        ]
    return tuple(fired)


def _patterns(values: Sequence[float], limits: Limits) -> list[str]:
    """Return the patterns that the last of some results completes."""
    words = []
    for side, name in ((1.0, "above"), (-1.0, "below")):
        z = [side * (v - limits.centre) for v in values]
        line = (limits.upper_warning - limits.centre) if side > 0 else (limits.centre - limits.lower_warning)
        if z[-1] > line and sum(one > line for one in z[-3:]) >= 2:
            words.append(f"two of three beyond the warning limit, all {name} the centre")
        if z[-1] > limits.sigma and len(z) >= 5 and sum(one > limits.sigma for one in z[-5:]) >= 4:
            words.append(f"four of five more than one standard deviation {name} the centre")
        run = z[-RUN_OF_ONE_SIDE:]
        if len(run) == RUN_OF_ONE_SIDE and all(one > 0 for one in run):
            words.append(f"{RUN_OF_ONE_SIDE} in a row {name} the centre")
    last = values[-RUN_OF_ONE_SIDE:]
    steps = [b - a for a, b in pairwise(last)]
    if len(last) == RUN_OF_ONE_SIDE and (all(s > 0 for s in steps) or all(s < 0 for s in steps)):
        words.append(f"{RUN_OF_ONE_SIDE} in a row {'rising' if steps[0] > 0 else 'falling'}")
    return words


@dataclass(frozen=True)
class Ewma:
    """An exponentially weighted moving average and its limits.

    Parameters
    ----------
    values : tuple of float
        One a result.
    lower, upper : float
        Steady limits.
    signals : tuple of int
        Indices beyond them.
    """

    values: tuple[float, ...]
    lower: float
    upper: float
    signals: tuple[int, ...]


def ewma(
    values: Sequence[float],
    centre: float,
    sigma: float,
    weight: float = 0.2,
    width: float = 2.962,
    start: float | None = None,
) -> Ewma:
    """Return the EWMA of some results.

    Parameters
    ----------
    values : sequence of float
        In time order.
    centre, sigma : float
        Of the frozen baseline.
    weight, width : float
        lambda and L; 0.2 and 2.962 signal falsely once in 500 results and
        find a shift of one sigma in about ten.
    start : float, optional
        The average after the result before the first; the centre where none.

    Returns
    -------
    Ewma
    """
    found, z = [], centre if start is None else start
    for value in values:
        z = weight * value + (1.0 - weight) * z
        found.append(z)
    half = width * sigma * math.sqrt(weight / (2.0 - weight))
    signals = tuple(i for i, one in enumerate(found) if abs(one - centre) > half)
    return Ewma(tuple(found), centre - half, centre + half, signals)


@dataclass(frozen=True)
class Cusum:
    """Two-sided cumulative sums in standard deviations.

    Parameters
    ----------
    upper, lower : tuple of float
        Sums of what goes beyond k upwards and downwards.
    signals : tuple of int
        Indices where either exceeds h.
    """

    upper: tuple[float, ...]
    lower: tuple[float, ...]
    signals: tuple[int, ...]


def cusum(
    values: Sequence[float],
    centre: float,
    sigma: float,
    k: float = 0.5,
    h: float = 5.0,
    start: tuple[float, float] = (0.0, 0.0),
) -> Cusum:
    """Return the cumulative sums of some results.

    Parameters
    ----------
    values : sequence of float
        In time order.
    centre, sigma : float
        Of the frozen baseline; sigma above zero.
    k, h : float
        Slack and decision interval in sigma; 0.5 and 5 signal falsely once
        in 465 results and find a shift of one sigma in about ten.
    start : tuple of float
        The sums upwards and downwards after the result before the first.

    Returns
    -------
    Cusum

    Raises
    ------
    InputError
        Naming ``sigma`` when it is not above zero.
    """
    wrong = Problems()
    wrong.number("sigma", sigma, above=0)
    wrong.stop("A cumulative sum needs a scatter.")
    upper, lower, (high, low) = [], [], start
    for value in values:
        z = (value - centre) / sigma
        high, low = max(0.0, high + z - k), max(0.0, low - z - k)
        upper.append(high)
        lower.append(low)
    signals = tuple(i for i, (a, b) in enumerate(zip(upper, lower, strict=True)) if a > h or b > h)
    return Cusum(tuple(upper), tuple(lower), signals)
