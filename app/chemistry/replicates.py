"""Do the tubes of one sample agree, and what is their value if they do not.

Explain first: a tube leaves the mean only because a person saw a cause.
Statistics only screen (ISO 5725-6). With sigma(x), the laboratory's own
repeatability, p tubes agree when their range in mg/L is at most f(p) sigma,
f the 95 % point of the studentised range. Four or more tubes that disagree may
lose one, once, to Dixon's two-sided r10 at 95 %, if the rest then agree. Three
tubes cannot convict one of them: two close and one far is what good triplicates
look like (a fifth of them have a ratio above 0.886), the test finds an error of
ten sigma in one case of six, and the mean of the closest pair is twice as
uncertain as the mean of three while it looks three times better. So the median
is shown, provisional, and the suspect tube is named.

References
----------
ISO 5725-6, 5.2; Rorabacher, Anal. Chem. 63 (1991) 139 (Dixon's r10, two-sided);
Grubbs, Technometrics 11 (1969) 1 (critical values here from Student's t).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from scipy.special import stdtrit

from app.chemistry.repeatability import Repeatability

#: 95 % points of the studentised range of p values, infinite degrees of freedom.
RANGE_FACTOR: Mapping[int, float] = {
    2: 2.772,
    3: 3.314,
    4: 3.633,
    5: 3.858,
    6: 4.030,
    7: 4.170,
    8: 4.286,
    9: 4.387,
    10: 4.474,
}
MOST_TUBES = 10
FEWEST_TO_SET_ASIDE = 4

#: Dixon's r10, two-sided, by confidence in percent (Rorabacher 1991).
DIXON_R10: Mapping[int, Mapping[int, float]] = {
    90: {3: 0.941, 4: 0.765, 5: 0.642, 6: 0.560, 7: 0.507, 8: 0.468, 9: 0.437, 10: 0.412},
    95: {3: 0.970, 4: 0.829, 5: 0.710, 6: 0.625, 7: 0.568, 8: 0.526, 9: 0.493, 10: 0.466},
    99: {3: 0.994, 4: 0.926, 5: 0.821, 6: 0.740, 7: 0.680, 8: 0.634, 9: 0.598, 10: 0.568},
}

#: Causes for which a person may set a tube aside.
CAUSES: tuple[str, ...] = (
    "cap leaked",
    "tube cracked or scratched",
    "wrong volume pipetted",
    "spilled",
    "not mixed before digestion",
    "solids or droplets in the light path",
    "precipitate that did not settle",
    "tube not wiped",
    "position in the block too cold",
    "labels exchanged",
)


@dataclass(frozen=True)
class Dixon:
    """Dixon's r10 of the extreme that stands further off.

    Parameters
    ----------
    ratio : float
        Gap over range; zero when all values are equal.
    index : int or None
        Which value; None when both ends stand equally far off.
    """

    ratio: float
    index: int | None


def dixon(values: Sequence[float]) -> Dixon:
    """Return the larger r10 of both ends.

    Parameters
    ----------
    values : sequence of float
        At least three.

    Returns
    -------
    Dixon
    """
    order = sorted(range(len(values)), key=values.__getitem__)
    low, high = values[order[0]], values[order[-1]]
    if high == low:
        return Dixon(0.0, None)
    below, above = values[order[1]] - low, high - values[order[-2]]
    if above == below:
        return Dixon(above / (high - low), None)
    return Dixon(max(above, below) / (high - low), order[-1] if above > below else order[0])


@dataclass(frozen=True)
class Grubbs:
    """Grubbs' G of the value furthest from the mean.

    Parameters
    ----------
    g : float
        Distance in standard deviations; zero when all values are equal.
    index : int or None
        Which value; None when all are equal.
    """

    g: float
    index: int | None


def grubbs(values: Sequence[float]) -> Grubbs:
    """Return Grubbs' G, for information: it sets nothing aside here.

    Parameters
    ----------
    values : sequence of float
        At least three.

    Returns
    -------
    Grubbs
    """
    mean = math.fsum(values) / len(values)
    sd = math.sqrt(math.fsum((v - mean) ** 2 for v in values) / (len(values) - 1))
    if sd == 0.0:
        return Grubbs(0.0, None)
    index = max(range(len(values)), key=lambda i: abs(values[i] - mean))
    return Grubbs(abs(values[index] - mean) / sd, index)


def grubbs_critical(n: int, confidence: float = 0.95, two_sided: bool = True) -> float:
    """Return the critical value of Grubbs' G.

    Parameters
    ----------
    n : int
        Number of values, at least three.
    confidence : float
        For example 0.95.
    two_sided : bool
        Whether the suspect end was not chosen in advance.

    Returns
    -------
    float
        (n - 1) / sqrt(n) sqrt(t^2 / (n - 2 + t^2)), t Student's quantile with
        n - 2 degrees of freedom at (1 - confidence) / n, halved when two-sided.
    """
    tail = (1.0 - confidence) / n / (2.0 if two_sided else 1.0)
    t2 = float(stdtrit(n - 2, tail)) ** 2
    return (n - 1) / math.sqrt(n) * math.sqrt(t2 / (n - 2 + t2))


def median(values: Sequence[float]) -> float:
    """Return the median; of an even number, the mean of the middle two."""
    ordered = sorted(values)
    middle = len(ordered) // 2
    if len(ordered) % 2:
        return ordered[middle]
    return (ordered[middle - 1] + ordered[middle]) / 2.0


@dataclass(frozen=True)
class Screening:
    """What the tubes of one sample say together.

    Parameters
    ----------
    agree : bool
        Whether the tubes used agree.
    used : tuple of int
        Indices that count.
    set_aside : int or None
        Index set aside by rule.
    suspect : int or None
        Index of the tube that stands furthest off when they disagree; None
        with two tubes or where both ends stand equally far off.
    absorbance : float
        Mean of the tubes used, or their median when they disagree.
    ratio : float or None
        Dixon's r10 where it was looked at.
    """

    agree: bool
    used: tuple[int, ...]
    set_aside: int | None
    suspect: int | None
    absorbance: float
    ratio: float | None


ToCod = Callable[[float], float | None]


def agree(absorbance: Sequence[float], to_cod: ToCod, repeatability: Repeatability) -> bool:
    """Tell whether tubes agree by the critical range of ISO 5725-6.

    Parameters
    ----------
    absorbance : sequence of float
        One to ten tubes of one sample.
    to_cod : callable
        Turns an absorbance into mg/L in the tube; None where it cannot.
    repeatability : Repeatability
        sigma(x), taken at the mean absorbance.

    Returns
    -------
    bool
        One tube agrees with itself. Tubes of which one cannot be turned into
        a COD agree only when they read the same.
    """
    if len(absorbance) == 1:
        return True
    low, high = min(absorbance), max(absorbance)
    if low == high:
        return True
    first, last = to_cod(low), to_cod(high)
    middle = to_cod(math.fsum(absorbance) / len(absorbance))
    if first is None or last is None or middle is None:
        return False
    return abs(last - first) <= RANGE_FACTOR[len(absorbance)] * repeatability.sigma(middle)


def screen(
    absorbance: Sequence[float], kept: Sequence[int], to_cod: ToCod, repeatability: Repeatability
) -> Screening:
    """Screen the tubes of one sample and give their value.

    Agreement is judged in mg/L, where the repeatability is known; Dixon's
    ratio is taken on the absorbances, which are what scatters normally and are
    finite also where the curve gives no COD.

    Parameters
    ----------
    absorbance : sequence of float
        All tubes.
    kept : sequence of int
        Indices that no person excluded; one to ten.
    to_cod : callable
        Turns an absorbance into mg/L in the tube; None where it cannot.
    repeatability : Repeatability
        The laboratory's own.

    Returns
    -------
    Screening
    """
    values = [absorbance[i] for i in kept]
    if agree(values, to_cod, repeatability):
        return Screening(True, tuple(kept), None, None, math.fsum(values) / len(values), None)
    found = dixon(values) if len(values) > 2 else Dixon(1.0, None)
    suspect = None if found.index is None else kept[found.index]
    if len(values) >= FEWEST_TO_SET_ASIDE and suspect is not None:
        rest = [v for i, v in enumerate(values) if i != found.index]
        if found.ratio > DIXON_R10[95][len(values)] and agree(rest, to_cod, repeatability):
            used = tuple(i for i in kept if i != suspect)
            return Screening(True, used, suspect, None, math.fsum(rest) / len(rest), found.ratio)
    return Screening(False, tuple(kept), None, suspect, median(values), found.ratio)
