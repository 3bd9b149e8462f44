"""Preservation and holding time of a COD bottle.

The rule for chemical oxygen demand (40 CFR 136.3, Table II): plastic,
fluoropolymer or glass; cool to 6 degrees C or less; sulfuric acid to pH below 2;
28 days. The footnotes count the time of a composite from the **end** of its
collection, want acid within 15 minutes, and do not mean 6 to be met by rounding
down (6.4 fails).

Times are aware datetimes. Twenty-eight days are 28 times 24 elapsed hours, so
that a change to or from daylight saving neither gives nor takes an hour; the
wall clock then shows another hour than at collection.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from typing import Literal
from zoneinfo import ZoneInfo

from app.compliance.exact import need_number
from app.errors import InputError


@dataclass(frozen=True)
class Preservation:
    """How a sample is kept and for how long; a setting of the programme.

    Parameters
    ----------
    cool_to_c : float
        Highest temperature at receipt, in degrees C.
    ph_below : float
        Acidified samples must be below this pH.
    hold_days : float
        Longest time from the end of collection to the start of analysis.
    acid_within_minutes : float
        Time after collection in which acid may still be added.
    acidity : {"qualified", "rejected"}
        What becomes of a bottle that arrives insufficiently acid.
    source : str
        Where the numbers stand.
    """

    cool_to_c: float = 6.0
    ph_below: float = 2.0
    hold_days: float = 28.0
    acid_within_minutes: float = 15.0
    acidity: Literal["qualified", "rejected"] = "qualified"
    source: str = "40 CFR 136.3, Table II"


COD = Preservation()


def need_aware(name: str, moment: datetime) -> None:
    """Refuse a time without an offset.

    Parameters
    ----------
    name : str
        Path of the field.
    moment : datetime.datetime
        The time.

    Raises
    ------
    InputError
        If the time does not say its offset.
    """
    if moment.utcoffset() is None:
        raise InputError("A time without an offset is ambiguous.", {name: ["needs an offset, e.g. -06:00"]})


def elapsed_hours(start: datetime, end: datetime) -> float:
    """Return the hours that really passed between two aware times.

    Parameters
    ----------
    start, end : datetime.datetime
        Aware; Python subtracts two times of one zone by the wall clock, so both
        are taken to UTC first.

    Returns
    -------
    float
        Hours; 23 or 25 for a "day" over a change of daylight saving.

    Raises
    ------
    InputError
        If a time has no offset or the end lies before the start.
    """
    need_aware("start", start)
    need_aware("end", end)
    hours = (end.astimezone(UTC) - start.astimezone(UTC)).total_seconds() / 3600.0
    if hours < 0:
        raise InputError("Collection cannot end before it starts.", {"end": ["lies before the start"]})
    return hours


def hold_until(collected_end: datetime, rule: Preservation = COD, zone: ZoneInfo | None = None) -> datetime:
    """Return the last moment at which the analysis may start.

    Parameters
    ----------
    collected_end : datetime.datetime
        Aware; the end of collection, for a grab its only time.
    rule : Preservation
        The programme's rule.
    zone : zoneinfo.ZoneInfo, optional
        Zone in which the answer is shown; the zone of ``collected_end`` when absent.

    Returns
    -------
    datetime.datetime
        Aware.

    Raises
    ------
    InputError
        If the time has no offset.
    """
    need_aware("collected_end", collected_end)
    moment = collected_end.astimezone(UTC) + timedelta(days=rule.hold_days)
    return moment.astimezone(zone or collected_end.tzinfo)


def acid_dilution_factor(sample_ml: float, acid_ml: float) -> float:
    """Return what the acid left of the sample's concentration.

    Parameters
    ----------
    sample_ml, acid_ml : float
        Sample in the bottle and acid added to it, mL.

    Returns
    -------
    float
        2 mL in 1 L give 0.998; divide a result by it where it matters.
    """
    need_number("sample_ml", sample_ml, above=0)
    need_number("acid_ml", acid_ml, least=0)
    return sample_ml / (sample_ml + acid_ml)
