"""Results after a frozen baseline, each with the rules that it set off.

One pass over the results in time order: the rules of the Shewhart chart, the
moving average and the cumulative sums of :mod:`app.chemistry.control_charts`.
Limits come in frozen and are never touched here, so that no result, however
bad, moves the lines that judge it. Ranges of duplicates are not symmetric
about their mean; moving average and cumulative sums are not taken of them.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from app.chemistry.control_charts import RUN_OF_ONE_SIDE, Limits, cusum, ewma, rules_fired

CUSUM_DECISION = 5.0


@dataclass(frozen=True)
class Judged:
    """One result and what it set off.

    Parameters
    ----------
    value : float
        As given.
    stops : bool
        Whether it lies beyond an action limit.
    fired : tuple of str
        The rules in words; empty where none fired.
    average, upper, lower : float or None
        Moving average, and cumulative sums upwards and downwards in standard
        deviations; None on a chart of ranges.
    """

    value: float
    stops: bool
    fired: tuple[str, ...]
    average: float | None
    upper: float | None
    lower: float | None


def judge(
    values: Sequence[float], limits: Limits, ranges: bool = False, before: Sequence[Judged] = ()
) -> tuple[Judged, ...]:
    """Judge results by frozen limits.

    Parameters
    ----------
    values : sequence of float
        After the baseline, in time order.
    limits : Limits
        Frozen; their sigma is above zero.
    ranges : bool
        Whether the chart is one of ranges.
    before : sequence of Judged
        The results after the baseline that were judged already, at least the
        last six of them; they are not judged again.

    Returns
    -------
    tuple of Judged
        One a result.
    """
    words: list[list[str]] = [[] for _ in values]
    stops = [False] * len(values)
    earlier = [one.value for one in before[1 - RUN_OF_ONE_SIDE :]]
    for fired in rules_fired([*earlier, *values], limits):
        index = fired.index - len(earlier)
        if index >= 0:
            words[index].append(fired.words)
            stops[index] = stops[index] or fired.stops
    if ranges:
        rows = zip(values, stops, words, strict=True)
        return tuple(Judged(v, stop, tuple(said), None, None, None) for v, stop, said in rows)
    last = before[-1] if before else Judged(0.0, False, (), None, None, None)
    average = ewma(values, limits.centre, limits.sigma, start=last.average)
    start = (last.upper or 0.0, last.lower or 0.0)
    sums = cusum(values, limits.centre, limits.sigma, h=CUSUM_DECISION, start=start)
    for i in average.signals:
        words[i].append("the moving average (EWMA) is beyond its limits")
    for i in sums.signals:
        words[i].append("the cumulative sum (CUSUM) is beyond its limit")
    return tuple(
        Judged(v, stops[i], tuple(words[i]), average.values[i], sums.upper[i], sums.lower[i])
        for i, v in enumerate(values)
    )
