"""How a discharge point stands against its limits over six months.

Text: 40 CFR 403.8(f)(2)(viii). *Chronic*: 66 % or more of all measurements of a
pollutant in six months exceed a numeric limit by any amount. *Technical review*:
33 % or more equal or exceed the limit times a factor, 1.4 for BOD, suspended
solids, fats, oil and grease, and **1.2 for all other pollutants except pH**, COD
among them (a setting; another factor needs a citation). Either one makes
significant noncompliance.

What the text leaves open is a setting or is fixed here and said:

- The daily and the monthly set are judged apart; pooling can hide a violator.
- The unit of the monthly set is the average of a calendar month's daily values;
  a single sample in a month is its average.
- Exceeding is strictly above; technical is equal or above; both on exact
  fractions. Shares are compared in whole numbers, ``100 k >= 66 n``.
- A day whose bound decides nothing against the limit leaves that set and is
  listed as undecided: analyse again.
- The limit in force on the day decides; for a month the one in force on its
  last day with a sample.
- Nothing measured is "cannot be judged", never "compliant".
"""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import date, datetime
from typing import Literal
from zoneinfo import ZoneInfo

from app.compliance.days import Measured, day_values
from app.compliance.deadlines import month_end, notice, results_by, window_start
from app.compliance.judging import Judge, Judged, JudgedSet, Policy
from app.compliance.limits import Basis, Limit

FEW = 4
JudgedBasis = Literal["daily_maximum", "monthly_average"]


@dataclass(frozen=True)
class Counts:
    """The counts of one basis in one window.

    Parameters
    ----------
    n : int
        Daily values or months judged.
    exceeding, technical : int
        How many exceed the limit, and how many reach limit times factor.
    """

    n: int
    exceeding: int
    technical: int

    @property
    def exceeding_fraction(self) -> float | None:
        """Share exceeding; None without a value."""
        return self.exceeding / self.n if self.n else None

    @property
    def technical_fraction(self) -> float | None:
        """Share at or above limit times factor; None without a value."""
        return self.technical / self.n if self.n else None

    @property
    def few(self) -> bool:
        """Whether fewer than four values were judged; the share then says little."""
        return self.n < FEW


@dataclass(frozen=True)
class Exceedance:
    """One value above its limit, with what follows from it.

    Parameters
    ----------
    basis : {"daily_maximum", "monthly_average"}
        Which limit.
    when : str
        Day (``2031-02-11``) or month (``2031-02``).
    value, limit : float
        mg/L.
    source : str
        Where the limit stands.
    notify_by : datetime.datetime or None
        24 elapsed hours after the value was known.
    results_by : datetime.date or None
        30 days after that day.
    """

    basis: JudgedBasis
    when: str
    value: float
    limit: float
    source: str
    notify_by: datetime | None
    results_by: date | None


@dataclass(frozen=True)
class Standing:
    """The standing of a point over one window.

    Parameters
    ----------
    start, end : datetime.date
        First and last day.
    undecided : tuple of datetime.date
        Days to be analysed again.
    daily, monthly : Counts or None
        None where no limit of that basis was in force.
    chronic, technical_review : bool or None
        None: cannot be judged.
    exceedances : tuple of Exceedance
        In order of time, a month after its days.
    excluded : tuple of Measured
        Results of the window that a person took out, with reason and name.
    unjudged : tuple of str
        Bases with a limit but without a value.
    policy : Policy
        The settings used.
    """

    start: date
    end: date
    undecided: tuple[date, ...]
    daily: Counts | None
    monthly: Counts | None
    chronic: bool | None
    technical_review: bool | None
    exceedances: tuple[Exceedance, ...]
    excluded: tuple[Measured, ...]
    unjudged: tuple[JudgedBasis, ...]
    policy: Policy

    @property
    def significant_noncompliance(self) -> bool | None:
        """Either test met; None: cannot be judged."""
        return None if self.chronic is None else self.chronic or bool(self.technical_review)

    @property
    def word(self) -> str:
        """The words that are shown; never "within limits" where something is open."""
        if self.significant_noncompliance:
            return "significant noncompliance"
        if self.exceedances:
            return "above a limit"
        if self.undecided:
            return "undecided: analyse again"
        if self.significant_noncompliance is None or self.unjudged:
            return "cannot be judged"
        return "within limits"


def is_chronic(exceeding: int, n: int, percent: int = 66) -> bool:
    """Tell whether a share is at or above a percentage, in whole numbers.

    Parameters
    ----------
    exceeding, n : int
        Counts, ``n`` above zero.
    percent : int
        66 for chronic, 33 for technical review.

    Returns
    -------
    bool
        ``100 exceeding >= percent n``; 19 of 29 (65.5 %) is not 66 %.
    """
    return 100 * exceeding >= percent * n


def _between(judged: Sequence[Judged], start: date, end: date) -> Sequence[Judged]:
    low = bisect_left(judged, start, key=lambda j: j.day)
    return judged[low : bisect_right(judged, end, key=lambda j: j.day)]


def _had_limit(limits: Iterable[Limit], basis: Basis, start: date, end: date) -> bool:
    return any(
        limit.basis == basis
        and limit.effective_from <= end
        and (limit.effective_until is None or limit.effective_until >= start)
        for limit in limits
    )


def _exceedance(j: Judged, basis: JudgedBasis, zone: ZoneInfo) -> Exceedance:
    return Exceedance(
        basis,
        j.day.isoformat() if basis == "daily_maximum" else f"{j.day:%Y-%m}",
        j.value,
        j.limit.value,
        j.limit.source,
        None if j.known is None else notice(j.known, zone).due,
        None if j.known is None else results_by(j.known, zone),
    )


class PointHistory:
    """The judged history of one point, from which any window is cut.

    Every value is judged once; a window only counts. Ten years of monthly
    results with forty quarterly windows therefore cost little more than one.

    Parameters
    ----------
    results : iterable of Measured
        Of one discharge point, in any order.
    limits : iterable of Limit
        Of the point, in the order in which they were set.
    policy : Policy
        The rules.

    Raises
    ------
    InputError
        Naming every result that cannot be judged.
    """

    def __init__(self, results: Iterable[Measured], limits: Iterable[Limit], policy: Policy) -> None:
        self.policy = policy
        self.limits = list(limits)
        kept = list(results)
        self.excluded = [r for r in kept if r.excluded_reason]
        self.days = day_values(kept, policy.zone, policy.non_detect, policy.day_rule)
        self._judge = Judge(self.limits, policy)
        self._daily = self._judge.days(self.days)
        self._monthly = self._judge.months(self.days)

    def _window_months(self, start: date, end: date) -> JudgedSet:
        if end == month_end(end):
            return self._monthly
        low = bisect_left(self.days, start, key=lambda d: d.day)
        high = bisect_right(self.days, end, key=lambda d: d.day)
        return self._judge.months(self.days[low:high])

    def standing(self, end: date) -> Standing:
        """Return the standing over the six calendar months that end with a day.

        Parameters
        ----------
        end : datetime.date
            Last day of the window.

        Returns
        -------
        Standing
        """
        start = window_start(end)
        policy = self.policy
        counts: dict[str, Counts] = {}
        undecided: set[date] = set()
        exceedances: list[Exceedance] = []
        sets: tuple[tuple[JudgedBasis, JudgedSet], ...] = (
            ("daily_maximum", self._daily),
            ("monthly_average", self._window_months(start, end)),
        )
        for basis, whole in sets:
            judged = _between(whole.judged, start, end)
            undecided |= {day for day in whole.undecided if start <= day <= end}
            if not judged and not _had_limit(self.limits, basis, start, end):
                continue
            above = [j for j in judged if j.exceeding]
            counts[basis] = Counts(len(judged), len(above), sum(j.technical for j in judged))
            exceedances += [_exceedance(j, basis, policy.zone) for j in above]
        told = [c for c in counts.values() if c.n]
        return Standing(
            start,
            end,
            tuple(sorted(undecided)),
            counts.get("daily_maximum"),
            counts.get("monthly_average"),
            any(is_chronic(c.exceeding, c.n, policy.chronic_percent) for c in told) if told else None,
            any(is_chronic(c.technical, c.n, policy.technical_percent) for c in told) if told else None,
            tuple(sorted(exceedances, key=lambda e: (e.when[:7], e.basis, e.when))),
            tuple(r for r in self.excluded if start <= r.taken.astimezone(policy.zone).date() <= end),
            tuple(basis for basis, _ in sets if basis in counts and not counts[basis].n),
            policy,
        )


def standing(
    results: Iterable[Measured], limits: Iterable[Limit], policy: Policy, window_end: date
) -> Standing:
    """Return how a point stands over the six months that end with a day.

    Parameters
    ----------
    results : iterable of Measured
        Of one discharge point, in any order; those outside the window are ignored.
    limits : iterable of Limit
        Of the point, in the order in which they were set.
    policy : Policy
        The rules.
    window_end : datetime.date
        Last day of the window.

    Returns
    -------
    Standing
    """
    return PointHistory(results, limits, policy).standing(window_end)
