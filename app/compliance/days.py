"""From results to daily values, with bounds kept as what they are.

Samples of one day make one daily value; by default their mean (40 CFR 122.2,
"daily discharge"), or the flow-weighted mean, or the highest, as the permit
says. A result below its bound counts with nothing, half or all of it: the
permit's non-detect rule, which has no default, because different permits really
print different ones. A result above its bound (over range) counts with the
bound.

What a bound cannot decide is remembered: the largest bound of a result *below*
and the smallest bound of a result *above*. Held against a limit, a "below" whose
bound is over the limit, or an "above" whose bound is not, decides nothing.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from datetime import date, datetime
from fractions import Fraction
from typing import Literal
from zoneinfo import ZoneInfo

from app.compliance.exact import exact
from app.errors import Fields, InputError

NonDetect = Literal["zero", "half", "limit"]
DayRule = Literal["mean", "flow_weighted", "highest"]
LARGEST = 1e9
SHARES: dict[str, Fraction] = {"zero": Fraction(0), "half": Fraction(1, 2), "limit": Fraction(1)}


@dataclass(frozen=True, slots=True)
class Measured:
    """One result of a discharge point.

    Parameters
    ----------
    taken : datetime.datetime
        Aware; for a composite the end of its collection.
    cod : float
        mg/L; the bound where ``below`` or ``above``.
    below, above : bool
        The result is known only to lie below or above ``cod``.
    known : datetime.datetime, optional
        When the discharger got it; aware.
    flow : float, optional
        What the sample stands for, where samples of a day are weighted by flow.
    excluded_reason, excluded_by : str
        Why a person took it out of the counts, and who; both or neither.
    id : str
        The result's id, carried along.
    """

    taken: datetime
    cod: float
    below: bool = False
    above: bool = False
    known: datetime | None = None
    flow: float | None = None
    excluded_reason: str = ""
    excluded_by: str = ""
    id: str = ""


@dataclass(frozen=True, slots=True)
class DayValue:
    """The value of one day.

    Parameters
    ----------
    day : datetime.date
        In the programme's zone.
    value : float
        mg/L, the double nearest to :meth:`exact_value`.
    results : tuple of Measured
        What it was made from.
    known : datetime.datetime or None
        When the last of them became known.
    largest_below, smallest_above : float or None
        The bounds that may decide nothing.
    share : fractions.Fraction
        How much of its bound a result below it counts.
    rule : {"mean", "flow_weighted", "highest"}
        How several samples make one day.
    """

    day: date
    value: float
    results: tuple[Measured, ...]
    known: datetime | None
    largest_below: float | None
    smallest_above: float | None
    share: Fraction
    rule: DayRule

    def exact_value(self) -> Fraction:
        """Return the value as an exact fraction of the numbers that were typed."""
        counted = [exact(r.cod) * self.share if r.below else exact(r.cod) for r in self.results]
        if self.rule == "highest":
            return max(counted)
        if self.rule == "mean":
            return sum(counted, Fraction(0)) / len(counted)
        flows = [exact(r.flow or 0) for r in self.results]
        return sum((v * q for v, q in zip(counted, flows, strict=True)), Fraction(0)) / sum(flows)

    def undecided(self, limit: float) -> bool:
        """Tell whether a bound of the day decides nothing against a limit."""
        return (self.largest_below is not None and self.largest_below > limit) or (
            self.smallest_above is not None and self.smallest_above <= limit
        )


def check_results(results: Sequence[Measured], non_detect: NonDetect | None, day_rule: DayRule) -> None:
    """Refuse results that cannot be judged, naming each.

    Parameters
    ----------
    results : sequence of Measured
        Of one discharge point.
    non_detect : {"zero", "half", "limit"} or None
        Needed as soon as a result lies below its bound.
    day_rule : {"mean", "flow_weighted", "highest"}
        A flow-weighted mean needs every flow.

    Raises
    ------
    InputError
        Naming every bad field.
    """
    wrong: Fields = {}

    def say(i: int, name: str, words: str) -> None:
        wrong.setdefault(f"results.{i}.{name}", []).append(words)

    for i, r in enumerate(results):
        if r.taken.utcoffset() is None:
            say(i, "taken", "needs an offset")
        if not 0 <= r.cod <= LARGEST:
            say(i, "cod", f"must be a number from 0 to {LARGEST:.0f}")
        if r.below and r.above:
            say(i, "above", "cannot be below and above its bound")
        if r.below and non_detect is None:
            wrong["non_detect"] = ["say how a result below its bound counts: zero, half or limit"]
        if r.known is not None:
            if r.known.utcoffset() is None:
                say(i, "known", "needs an offset")
            elif r.taken.utcoffset() is not None and r.known.timestamp() < r.taken.timestamp():
                say(i, "known", "lies before the sample was taken")
        if day_rule == "flow_weighted" and not (r.flow and 0 < r.flow <= LARGEST):
            say(i, "flow", "is needed for a flow-weighted day")
        if bool(r.excluded_reason.strip()) != bool(r.excluded_by.strip()):
            say(i, "excluded_reason", "an exclusion needs its reason and a name")
    if wrong:
        raise InputError("These results cannot be judged.", wrong)


def _day_value(day: date, group: list[Measured], share: Fraction, rule: DayRule) -> DayValue:
    below = [r.cod for r in group if r.below]
    above = [r.cod for r in group if r.above]
    known = [r.known for r in group if r.known is not None]
    made = DayValue(
        day,
        group[0].cod,
        tuple(group),
        max(known, key=datetime.timestamp) if known else None,
        max(below) if below else None,
        min(above) if above else None,
        share,
        rule,
    )
    if len(group) == 1 and not below:
        return made
    return replace(made, value=float(made.exact_value()))


def day_values(
    results: Iterable[Measured], zone: ZoneInfo, non_detect: NonDetect | None, day_rule: DayRule = "mean"
) -> list[DayValue]:
    """Return the daily values of a discharge point in order.

    Parameters
    ----------
    results : iterable of Measured
        In any order; excluded ones are left out.
    zone : zoneinfo.ZoneInfo
        The programme's zone.
    non_detect : {"zero", "half", "limit"} or None
        How a result below its bound counts.
    day_rule : {"mean", "flow_weighted", "highest"}
        How several samples make one day.

    Returns
    -------
    list of DayValue

    Raises
    ------
    InputError
        Naming every result that cannot be judged.
    """
    kept = list(results)
    check_results(kept, non_detect, day_rule)
    groups: dict[date, list[Measured]] = {}
    for r in kept:
        if not r.excluded_reason:
            groups.setdefault(r.taken.astimezone(zone).date(), []).append(r)
    share = SHARES[non_detect] if non_detect else Fraction(1)
    return [_day_value(day, groups[day], share, day_rule) for day in sorted(groups)]
