"""The study behind a detection limit: plan, gaps, and the duties that follow.

40 CFR 136 Appendix B, revision 2: at least seven spikes at 2 to 10 times the
estimate and seven method blanks, in at least three batches on three dates. Then
at least two spikes an instrument every quarter, and at least every 13 months the
limit is calculated again from the data of the last 24 months at that spike
level. It may stand when the new one lies between half and twice the old one and
fewer than 3 % of the blanks exceed it (numbers from memory: check them against
the rule's text). Dates are arguments; nothing here knows what day it is.
"""

from __future__ import annotations

import calendar
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from typing import Literal

from app.chemistry.detection import FEWEST_BLANKS, FEWEST_SPIKES
from app.chemistry.problems import Problems

FEWEST_BATCHES = 3
FEWEST_DATES = 3
RECOMPUTE_MONTHS = 13
DATA_MONTHS = 24
SPIKES_PER_QUARTER = 2
EACH_INSTRUMENT = 2
MAY_STAND = (0.5, 2.0)
MOST_BLANKS_ABOVE = 0.03
MOST_SPIKES_WITHOUT_NUMBER = 0.05


@dataclass(frozen=True)
class StudyResult:
    """One result of a detection limit study.

    Parameters
    ----------
    on : date
        Day of the batch.
    batch : str
        Its name.
    kind : {"spike", "blank"}
        What was digested.
    instrument : str
        What read it.
    mg_l : float or None
        What it gave; None for a tube without a number.
    """

    on: date
    batch: str
    kind: Literal["spike", "blank"]
    instrument: str = ""
    mg_l: float | None = 1.0


def study_gaps(
    results: Sequence[StudyResult], instruments: Mapping[str, str] | None = None, initial: bool = True
) -> tuple[str, ...]:
    """Say what a study still lacks.

    Parameters
    ----------
    results : sequence of StudyResult
        Done so far.
    instruments : mapping of str to str, optional
        Identity and name of the instruments that one limit shall serve. Where
        they are several, each needs two spikes and two blanks on different
        dates.
    initial : bool
        In an initial study every spike must give a positive number; later on
        one in twenty may fail to.

    Returns
    -------
    tuple of str
        Empty when numbers, batches and dates suffice.
    """
    words = [*_spikes_without_number(results, initial)]
    for kind, fewest in (("spike", FEWEST_SPIKES), ("blank", FEWEST_BLANKS)):
        mine = [r for r in results if r.kind == kind]
        if len(mine) < fewest:
            words.append(f"{kind}s still missing: {fewest - len(mine)} of {fewest}")
        if len({r.batch for r in mine}) < FEWEST_BATCHES:
            words.append(f"{kind}s in at least three batches")
        if len({r.on for r in mine}) < FEWEST_DATES:
            words.append(f"{kind}s on at least three dates")
        if kind == "spike" and len(mine) >= fewest and len({r.mg_l for r in mine}) == 1:
            words.append("spikes that differ: all gave the same number, so read one digit more")
        words += _instruments_left(mine, kind, instruments or {})
    return tuple(words)


def _spikes_without_number(results: Sequence[StudyResult], initial: bool) -> list[str]:
    spikes = [r.mg_l for r in results if r.kind == "spike"]
    lost = sum(1 for s in spikes if s is None or s <= 0)
    if not lost or not (initial or spike_too_low(spikes)):
        return []
    return [f"spikes without a positive result: {lost}; every one must give one, so spike higher, all anew"]


def _instruments_left(mine: Sequence[StudyResult], kind: str, instruments: Mapping[str, str]) -> list[str]:
    if len(instruments) < 2:
        return []
    days = {id_: {r.on for r in mine if r.instrument == id_} for id_ in instruments}
    return [
        f"{kind}s on {instruments[id_]}: {len(days[id_])} of {EACH_INSTRUMENT} dates"
        for id_ in instruments
        if len(days[id_]) < EACH_INSTRUMENT
    ]


def counting(results: Sequence[StudyResult], on: date) -> tuple[StudyResult, ...]:
    """Return the results whose day lies within the months that a calculation takes its data from."""
    return tuple(r for r in results if data_from(on) <= r.on <= on)


def level_fits(estimate: float, level: float) -> bool:
    """Tell whether a spike lies at two to ten times the estimated limit."""
    return 2.0 * estimate <= level * (1 + 1e-9) and level <= 10.0 * estimate * (1 + 1e-9)


def blank_alone(absorbances: Sequence[float], index: int) -> float:
    """Return a blank's absorbance above the mean of the other blanks of its run.

    Parameters
    ----------
    absorbances : sequence of float
        Of the run's digested blanks, at least two.
    index : int
        The one that is asked for.

    Returns
    -------
    float
        Against the mean of all it would look quieter than a blank is, since it
        is in that mean itself.
    """
    others = [a for i, a in enumerate(absorbances) if i != index]
    return absorbances[index] - math.fsum(others) / len(others)


@dataclass(frozen=True)
class PlannedDay:
    """What one day of a study holds.

    Parameters
    ----------
    on : date
        The day.
    spikes, blanks : int
        Tubes to digest.
    """

    on: date
    spikes: int
    blanks: int


@dataclass(frozen=True)
class StudyPlan:
    """An initial study.

    Parameters
    ----------
    spike_low, spike_high : float
        Twice and ten times the estimated limit, mg/L.
    days : tuple of PlannedDay
        At least three.
    """

    spike_low: float
    spike_high: float
    days: tuple[PlannedDay, ...]


def plan_study(estimate: float, days: Sequence[date], spikes: int = 7, blanks: int = 7) -> StudyPlan:
    """Spread an initial study over the days given.

    Parameters
    ----------
    estimate : float
        Estimated detection limit, mg/L.
    days : sequence of date
        At least three different ones.
    spikes, blanks : int
        At least seven each.

    Returns
    -------
    StudyPlan

    Raises
    ------
    InputError
        Naming the wrong fields.
    """
    wrong = Problems()
    wrong.number("estimate", estimate, above=0)
    wrong.number("spikes", spikes, least=FEWEST_SPIKES)
    wrong.number("blanks", blanks, least=FEWEST_BLANKS)
    dates = sorted(set(days))
    if len(dates) < FEWEST_DATES:
        wrong.add("days", "at least three different dates are needed")
    wrong.stop("No study can be planned like this.")
    planned = [
        PlannedDay(
            on, (spikes + len(dates) - 1 - i) // len(dates), (blanks + len(dates) - 1 - i) // len(dates)
        )
        for i, on in enumerate(dates)
    ]
    return StudyPlan(2.0 * estimate, 10.0 * estimate, tuple(planned))


def months_later(on: date, months: int) -> date:
    """Return the day some months later; the last of the month where it has no such day.

    Parameters
    ----------
    on : date
        A day.
    months : int
        May be negative.

    Returns
    -------
    date
    """
    year, month = divmod(on.year * 12 + on.month - 1 + months, 12)
    return date(year, month + 1, min(on.day, calendar.monthrange(year, month + 1)[1]))


@dataclass(frozen=True)
class Duty:
    """Something that must be done by a day.

    Parameters
    ----------
    what : str
        In words.
    due : date
        The last day for it.
    """

    what: str
    due: date


def quarter_end(on: date) -> date:
    """Return the last day of the calendar quarter of a day."""
    last = (on.month + 2) // 3 * 3
    return date(on.year, last, calendar.monthrange(on.year, last)[1])


def duties(computed: date, on: date, spikes_done: Sequence[date]) -> tuple[Duty, ...]:
    """Return what is due for one instrument, as seen on a day.

    Parameters
    ----------
    computed : date
        When the limit was last calculated.
    on : date
        The day of asking.
    spikes_done : sequence of date
        Days of the spikes analysed on this instrument.

    Returns
    -------
    tuple of Duty
        The next calculation, and the spikes of this quarter that are missing;
        earliest first.
    """
    end = quarter_end(on)
    mine = sum(1 for day in spikes_done if day <= on and quarter_end(day) == end)
    found = [Duty("calculate the detection limit again", months_later(computed, RECOMPUTE_MONTHS))]
    if mine < SPIKES_PER_QUARTER:
        found.append(Duty(f"spikes still missing in this quarter: {SPIKES_PER_QUARTER - mine}", end))
    return tuple(sorted(found, key=lambda duty: duty.due))


def data_from(on: date) -> date:
    """Return the first day whose results still count for a new calculation."""
    return months_later(on, -DATA_MONTHS)


def may_stand(old: float, new: float, blanks: Sequence[float | None]) -> bool:
    """Tell whether a limit in force may stand beside a newly calculated one.

    Parameters
    ----------
    old, new : float
        mg/L.
    blanks : sequence of float or None
        Method blanks since; None where a blank gave no number.

    Returns
    -------
    bool
    """
    above = sum(1 for b in blanks if b is not None and b > old)
    few = above < MOST_BLANKS_ABOVE * len(blanks) or above == 0
    return MAY_STAND[0] * old <= new <= MAY_STAND[1] * old and few


def spike_too_low(spikes: Sequence[float | None]) -> bool:
    """Tell whether so many spikes gave no positive number that the spike level must rise.

    Parameters
    ----------
    spikes : sequence of float or None
        Results; None where a spike gave no number.

    Returns
    -------
    bool
        More than 5 % without one.
    """
    without = sum(1 for s in spikes if s is None or s <= 0)
    return without > MOST_SPIKES_WITHOUT_NUMBER * len(spikes)
