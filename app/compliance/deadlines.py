"""Windows and deadlines of a pretreatment programme, in its own calendar.

A result belongs to the day in the programme's time zone; a composite to the day
on which its collection ended. The window of significant noncompliance is six
calendar months that end with a given day, looked at from the end of each
quarter: 31 March looks back to 1 October, and so on. A window that ends inside
a month takes that month up to the day and the five before it whole, so that no
month but the running one is averaged over a part of its days.

Deadlines: notice within 24 hours and results of a repeat within 30 days of
becoming aware (40 CFR 403.12(g)(2)); a report is late in the sense of
403.8(f)(2)(viii)(F) from the 46th day on (30 days in ordinances not yet
revised; a setting).
"""

from __future__ import annotations

import calendar
from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta
from zoneinfo import ZoneInfo

from app.errors import InputError

WINDOW_MONTHS = 6
NOTICE_HOURS = 24
RESAMPLE_DAYS = 30
LATE_REPORT_DAYS = 45


def month_end(day: date) -> date:
    """Return the last day of a day's month."""
    return day.replace(day=calendar.monthrange(day.year, day.month)[1])


def window_start(end: date, months: int = WINDOW_MONTHS) -> date:
    """Return the first day of the calendar months that end with a day.

    Parameters
    ----------
    end : datetime.date
        Last day of the window.
    months : int
        Number of calendar months, the one of ``end`` included.

    Returns
    -------
    datetime.date
        The first of a month.
    """
    number = end.year * 12 + end.month - months
    return date(number // 12, number % 12 + 1, 1)


def quarter_ends(year: int) -> tuple[date, date, date, date]:
    """Return the four days of a year at which the standing is looked at.

    Parameters
    ----------
    year : int
        Calendar year.

    Returns
    -------
    tuple of datetime.date
    """
    return date(year, 3, 31), date(year, 6, 30), date(year, 9, 30), date(year, 12, 31)


@dataclass(frozen=True)
class Notice:
    """When a discharger's notice is due after becoming aware.

    Parameters
    ----------
    due : datetime.datetime
        24 elapsed hours later, in the programme's zone.
    target : datetime.datetime
        The earlier of that and the same wall-clock time of the next day; what a
        letter asks for.
    """

    due: datetime
    target: datetime


def notice(known: datetime, zone: ZoneInfo, hours: float = NOTICE_HOURS) -> Notice:
    """Return when notice is due (40 CFR 403.12(g)(2)).

    Parameters
    ----------
    known : datetime.datetime
        When the discharger got the result; aware.
    zone : zoneinfo.ZoneInfo
        The programme's zone.
    hours : float
        A setting.

    Returns
    -------
    Notice

    Raises
    ------
    InputError
        If the time has no offset.
    """
    if known.utcoffset() is None:
        raise InputError("A time without an offset is ambiguous.", {"known": ["needs an offset"]})
    elapsed = timedelta(hours=hours)
    due = (known.astimezone(UTC) + elapsed).astimezone(zone)
    wall = known.astimezone(zone) + elapsed
    return Notice(due, min(due, wall, key=datetime.timestamp))


def results_by(known: datetime, zone: ZoneInfo, days: int = RESAMPLE_DAYS) -> date:
    """Return the last day for the results of the repeat sample, not merely its taking.

    Parameters
    ----------
    known : datetime.datetime
        When the discharger got the result; aware.
    zone : zoneinfo.ZoneInfo
        The programme's zone.
    days : int
        A setting.

    Returns
    -------
    datetime.date
    """
    return known.astimezone(zone).date() + timedelta(days)


def report_late_from(due: date, days: int = LATE_REPORT_DAYS) -> date:
    """Return the first day on which a missing report is significant noncompliance.

    Parameters
    ----------
    due : datetime.date
        When the report was due.
    days : int
        Days of grace; 45 federally.

    Returns
    -------
    datetime.date
    """
    return due + timedelta(days + 1)
