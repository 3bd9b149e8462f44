"""How long waste may stand, and what a site generates in a month.

The federal thresholds and clocks are defaults, shown as such: states have other
categories, shorter times and stricter labels. The category counts the whole
site and its calendar month, never the laboratory alone.

References
----------
40 CFR 260.10 and 262.13 (categories), 262.15 (satellite accumulation), 262.16
and 262.17 (central accumulation).
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, timedelta
from typing import Literal

from app.errors import InputError

FEDERAL_NOTE = "Federal default (40 CFR); state and local rules decide."
GALLON_L = 3.785411784


@dataclass(frozen=True)
class Generator:
    """Thresholds of a site's category in one calendar month; settings.

    Parameters
    ----------
    small_above_kg, large_from_kg : float
        Very small up to the first, large from the second on.
    acute_above_kg : float
        Acute waste above this makes a large generator.
    small_days, small_far_days, large_days : int
        Central accumulation; "far" means beyond 200 miles.
    satellite_l : float
        Most that may stand at the point of generation.
    satellite_days : int
        Consecutive calendar days to move what is beyond it.
    note : str
        Shown beside every number.
    """

    small_above_kg: float = 100.0
    large_from_kg: float = 1000.0
    acute_above_kg: float = 1.0
    small_days: int = 180
    small_far_days: int = 270
    large_days: int = 90
    satellite_l: float = 55 * GALLON_L
    satellite_days: int = 3
    note: str = FEDERAL_NOTE


FEDERAL = Generator()
Category = Literal["very small", "small", "large"]


@dataclass(frozen=True)
class MonthTotal:
    """A site's hazardous waste in one calendar month.

    Parameters
    ----------
    total_kg : float
        All streams together.
    category : {"very small", "small", "large"}
        By the thresholds.
    days : int or None
        Longest central accumulation; None for a very small generator.
    note : str
        What else counts, and who decides.
    """

    total_kg: float
    category: Category
    days: int | None
    note: str


def month_total(
    streams_kg: Mapping[str, float], acute_kg: float = 0.0, far: bool = False, rules: Generator = FEDERAL
) -> MonthTotal:
    """Add up a month's streams and name the category of the whole site.

    Parameters
    ----------
    streams_kg : mapping of str to float
        Each waste stream of the site, COD digest and all others.
    acute_kg : float
        Acute hazardous waste among them.
    far : bool
        The waste travels more than 200 miles.
    rules : Generator
        The programme's thresholds.

    Returns
    -------
    MonthTotal

    Raises
    ------
    InputError
        If an amount is negative or not finite.
    """
    amounts = {**streams_kg, "acute": acute_kg}
    wrong = {k: ["must be zero or more"] for k, v in amounts.items() if not math.isfinite(v) or v < 0}
    if wrong:
        raise InputError("These amounts cannot be added.", wrong)
    total = math.fsum(streams_kg.values())
    note = f"The whole site counts, not the laboratory alone. {rules.note}"
    if total >= rules.large_from_kg or acute_kg > rules.acute_above_kg:
        return MonthTotal(total, "large", rules.large_days, note)
    if total > rules.small_above_kg:
        return MonthTotal(total, "small", rules.small_far_days if far else rules.small_days, note)
    return MonthTotal(total, "very small", None, note)


@dataclass(frozen=True)
class Clock:
    """A deadline with the day on which it is called to mind.

    Parameters
    ----------
    due : datetime.date
        Last day.
    remind_on : datetime.date
        When 75 % of the days have passed.
    words : str
        What is due.
    """

    due: date
    remind_on: date
    words: str


def central_clock(start: date, days: int) -> Clock:
    """Return the clock of a container in central accumulation.

    Parameters
    ----------
    start : datetime.date
        Day on which central accumulation began; stands on the container.
    days : int
        From :func:`month_total`.

    Returns
    -------
    Clock
    """
    words = f"Ship by {start + timedelta(days)}: {days} days from {start}."
    return Clock(start + timedelta(days), start + timedelta(math.ceil(0.75 * days)), words)


def satellite_clock(passed_on: date, rules: Generator = FEDERAL) -> Clock:
    """Return the clock of what exceeds the limit at the point of generation.

    Parameters
    ----------
    passed_on : datetime.date
        Day on which the limit was passed; before it there is no clock.
    rules : Generator
        The programme's thresholds.

    Returns
    -------
    Clock
        Consecutive calendar days, weekends and holidays included.
    """
    due = passed_on + timedelta(rules.satellite_days)
    return Clock(due, passed_on, f"Date the excess {passed_on} and move it by {due}, weekends included.")
