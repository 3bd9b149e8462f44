"""What a back-test says, in counts and words: whether a point can be predicted from its past.

A point is called not predictable where the forecast was right at the first
digestion no more often than one dilution used always (the best one there,
known only afterwards) and that was not often. Fewer results than
:data:`LEAST` allow no judgement. The range is called too narrow where so few
values inside the nine-in-ten range would come by chance once in a hundred
times (binomial), too wide likewise. The bounds are common practice.
"""

from __future__ import annotations

from dataclasses import dataclass

from scipy import stats

from app.forecast.trust import Shares, Trust

LEAST = 8
OFTEN = 0.85
CHANCE = 0.01


@dataclass(frozen=True)
class Count:
    """How often a rule was right, over and below, of so many; ``unknown`` bounds do not tell."""

    n: int
    right: int
    over: int
    below: int
    unknown: int


@dataclass(frozen=True)
class Judgement:
    """A back-test in counts and words.

    Parameters
    ----------
    predictable : bool or None
        None where the results are too few.
    words : tuple of str
        The judgement and its reasons.
    forecast, last_value, median_of_five, same_dilution, oracle : Count
        Of the forecast, the rules of thumb and the oracle.
    measured, inside_50, inside_90 : int
        Results with a value, and those of them inside each range.
    """

    predictable: bool | None
    words: tuple[str, ...]
    forecast: Count
    last_value: Count
    median_of_five: Count
    same_dilution: Count
    oracle: Count
    measured: int
    inside_50: int
    inside_90: int


def _count(shares: Shares) -> Count:
    right, over, below = (
        round((part or 0.0) * shares.n) for part in (shares.right, shares.over, shares.below)
    )
    return Count(shares.n, right, over, below, shares.unknown)


def _predictable(found: Trust) -> bool | None:
    right, same = found.forecast.right, found.same_dilution.right
    if found.forecast.n < LEAST or right is None or same is None:
        return None
    return right > same or right >= OFTEN


def _coverage(measured: int, inside: int) -> str:
    said = f"The nine-in-ten range held {inside} of {measured} values"
    if measured < LEAST:
        return f"{said}."
    if stats.binom.cdf(inside, measured, 0.9) < CHANCE:
        return f"{said}: it was too narrow here, expect more surprises than it says."
    if stats.binom.sf(inside - 1, measured, 0.9) < CHANCE:
        return f"{said}: it is wider than it need be."
    return f"{said}, as it should."


def _verdict(predictable: bool | None, forecast: Count, same: Count) -> str:
    if predictable is None:
        results = f"{forecast.n} result{'' if forecast.n == 1 else 's'}"
        return f"Too few results to judge: {results} could be forecast from what came before."
    if predictable:
        return (
            f"Right at the first digestion {forecast.right} times of {forecast.n}: the plan can be trusted."
        )
    return (
        f"Not predictable from its past: the plan was right {forecast.right} times of {forecast.n}, one and "
        f"the same dilution {same.right} times. Digest two dilutions side by side, or measure at the point."
    )


def judge(found: Trust) -> Judgement:
    """Return a back-test in counts and words.

    Parameters
    ----------
    found : Trust
        Of one point, or of all together.

    Returns
    -------
    Judgement
    """
    forecast, same = _count(found.forecast), _count(found.same_dilution)
    predictable = _predictable(found)
    inside = [round((share or 0.0) * found.measured) for share in (found.inside_50, found.inside_90)]
    words = [_verdict(predictable, forecast, same)]
    if predictable is not None and found.measured:
        words.append(_coverage(found.measured, inside[1]))
    return Judgement(
        predictable,
        tuple(words),
        forecast,
        _count(found.last_value),
        _count(found.median_of_five),
        same,
        _count(found.oracle),
        found.measured,
        *inside,
    )
