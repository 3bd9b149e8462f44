"""Holding time and day length: 40 CFR 136.3 Table II, footnotes on the start of holding; IANA time zones."""

from datetime import datetime
from zoneinfo import ZoneInfo

import pytest

from app.compliance.holding import acid_dilution_factor, elapsed_hours, hold_until

pytestmark = pytest.mark.published

NEW_YORK = ZoneInfo("America/New_York")


def at(text: str, zone: ZoneInfo = NEW_YORK) -> datetime:
    """Return a wall-clock time in a zone."""
    return datetime.fromisoformat(text).replace(tzinfo=zone)


def test_a_composite_is_held_from_its_end():
    """40 CFR 136.3 Table II: 28 days; from the end of a composite, not from its start."""
    start, end = at("2024-05-31T08:00"), at("2024-06-01T08:00")
    assert hold_until(end) == at("2024-06-29T08:00")
    assert hold_until(start) == at("2024-06-28T08:00")


def test_a_day_over_a_clock_change_has_23_or_25_hours():
    """Elapsed time over the United States' changes of 10 March and 3 November 2024 (IANA tz)."""
    assert elapsed_hours(at("2024-03-09T08:00"), at("2024-03-10T08:00")) == 23
    assert elapsed_hours(at("2024-11-02T08:00"), at("2024-11-03T08:00")) == 25


def test_holding_is_elapsed_time():
    """28 x 24 h over the spring change end an hour later by the wall clock (IANA tz)."""
    end = at("2024-03-01T08:00")
    assert hold_until(end).isoformat() == "2024-03-29T09:00:00-04:00"
    assert elapsed_hours(end, hold_until(end)) == 28 * 24


def test_acid_dilutes_the_sample_a_little():
    """2 mL of acid in 1 L leave 0.998 (arithmetic)."""
    assert round(acid_dilution_factor(1000, 2), 3) == 0.998
