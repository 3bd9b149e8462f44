"""Values held against the limits of their days, exactly and once.

Exceeding is strictly above the limit; technical is equal to or above limit times
factor. Both are decided on the numbers as they were typed, so that a result
equal to 1.2 times 10.3 is equal, whatever binary floating point makes of it.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import date, datetime
from fractions import Fraction
from functools import partial
from itertools import groupby
from statistics import fmean
from zoneinfo import ZoneInfo

from app.compliance.days import DayRule, DayValue, NonDetect
from app.compliance.exact import exact, need_number
from app.compliance.limits import Limit, limit_on


@dataclass(frozen=True)
class Policy:
    """The programme's or permit's rules for standing; printed beside every verdict.

    Parameters
    ----------
    zone : zoneinfo.ZoneInfo
        Decides which day a sample belongs to.
    technical_review_factor : float
        1.2 for COD.
    non_detect : {"zero", "half", "limit"} or None
        How a result below its bound counts; needed as soon as there is one.
    day_rule : {"mean", "flow_weighted", "highest"}
        How several samples make one day.
    chronic_percent, technical_percent : int
        66 and 33.
    source : str
        Where these numbers stand.
    """

    zone: ZoneInfo
    technical_review_factor: float = 1.2
    non_detect: NonDetect | None = None
    day_rule: DayRule = "mean"
    chronic_percent: int = 66
    technical_percent: int = 33
    source: str = "40 CFR 403.8(f)(2)(viii)(A) and (B)"

    def __post_init__(self) -> None:
        """Refuse a factor that would soften the limit."""
        need_number("technical_review_factor", self.technical_review_factor, least=1)


@dataclass(frozen=True, slots=True)
class Judged:
    """One daily value or month held against its limit.

    Parameters
    ----------
    day : datetime.date
        The day; of a month its last day with a sample.
    value : float
        mg/L.
    limit : Limit
        The limit that was in force.
    exceeding, technical : bool
        Strictly above it; equal to or above limit times factor.
    known : datetime.datetime or None
        When the last result behind it became known.
    """

    day: date
    value: float
    limit: Limit
    exceeding: bool
    technical: bool
    known: datetime | None


@dataclass(frozen=True)
class JudgedSet:
    """All judged values of one basis and its undecided days."""

    judged: list[Judged]
    undecided: list[date]


class Edge:
    """A number to be compared with exactly, without exact arithmetic where none is needed.

    A double within ``NEAR`` of the edge is compared as a fraction; one further
    away lies on the same side as its fraction, because it is the nearest double.
    """

    NEAR = 1e-9

    def __init__(self, edge: Fraction) -> None:
        self.exact = edge
        self.low, self.high = float(edge) * (1 - self.NEAR), float(edge) * (1 + self.NEAR)

    def exceeded(self, value: float, precise: Callable[[], Fraction]) -> bool:
        """Tell whether a value lies strictly above the edge."""
        return value > self.high or (value >= self.low and precise() > self.exact)

    def reached(self, value: float, precise: Callable[[], Fraction]) -> bool:
        """Tell whether a value equals the edge or lies above it."""
        return value > self.high or (value >= self.low and precise() >= self.exact)


class Judge:
    """Holds values against limits; each limit's two edges are worked out once."""

    def __init__(self, limits: Sequence[Limit], policy: Policy) -> None:
        factor = exact(policy.technical_review_factor)
        self.limits = limits
        self.edges = {id(x): (Edge(x.exact_value), Edge(x.exact_value * factor)) for x in limits}

    def held(
        self, day: date, value: float, precise: Callable[[], Fraction], limit: Limit, known: datetime | None
    ) -> Judged:
        """Hold one value against one limit."""
        edge, technical = self.edges[id(limit)]
        above = edge.exceeded(value, precise)
        return Judged(day, value, limit, above, technical.reached(value, precise), known)

    def days(self, days: Sequence[DayValue]) -> JudgedSet:
        """Hold each daily value against the daily maximum of its day."""
        judged, undecided = [], []
        for d in days:
            limit = limit_on(self.limits, d.day, "daily_maximum")
            if limit is None:
                continue
            if d.undecided(limit.value):
                undecided.append(d.day)
            else:
                judged.append(self.held(d.day, d.value, d.exact_value, limit, d.known))
        return JudgedSet(judged, undecided)

    def months(self, days: Sequence[DayValue]) -> JudgedSet:
        """Hold each calendar month's average against its monthly limit.

        Parameters
        ----------
        days : sequence of DayValue
            In order.

        Returns
        -------
        JudgedSet
            A day whose bound decides nothing is left out of its average.
        """
        judged, undecided = [], []
        for _, group in groupby(days, key=lambda d: (d.day.year, d.day.month)):
            month = list(group)
            last = month[-1].day
            limit = limit_on(self.limits, last, "monthly_average")
            if limit is None:
                continue
            open_days = [d.day for d in month if d.undecided(limit.value)]
            undecided += open_days
            kept = [d for d in month if d.day not in open_days] if open_days else month
            if kept:
                average, precise = fmean(d.value for d in kept), partial(_month_average, kept)
                judged.append(self.held(last, average, precise, limit, _last_known(kept)))
        return JudgedSet(judged, undecided)


def _month_average(days: Sequence[DayValue]) -> Fraction:
    return sum((d.exact_value() for d in days), Fraction(0)) / len(days)


def _last_known(days: Sequence[DayValue]) -> datetime | None:
    known = [d.known for d in days if d.known is not None]
    return max(known, key=datetime.timestamp) if known else None
