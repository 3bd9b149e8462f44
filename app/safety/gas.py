"""Gas at a manhole: alarm points that block a sample, and what is needed afterwards.

The set points are those of 29 CFR 1910.146, appendix E (sewer system entry);
the order is oxygen, combustible gas, toxic gas. A reading at a set point blocks
the record "sample taken at this manhole" until a new reading lies below every
one of them and a person confirms. Nothing here ever permits entry.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass


def _plain(value: float) -> str:
    return f"{value:g}"


@dataclass(frozen=True)
class GasReading:
    """One reading of a four-gas meter at a manhole; None where a sensor gave nothing.

    Parameters
    ----------
    oxygen_percent, lel_percent, h2s_ppm, co_ppm : float or None
        Oxygen by volume, combustible gas as a share of its lower explosive
        limit, hydrogen sulfide and carbon monoxide.
    """

    oxygen_percent: float | None
    lel_percent: float | None
    h2s_ppm: float | None
    co_ppm: float | None


@dataclass(frozen=True)
class AlarmPoints:
    """Set points at which a gas reading blocks; a programme may set stricter ones.

    Parameters
    ----------
    oxygen_low_percent, oxygen_high_percent : float
        Blocks below the one and above the other.
    lel_percent, h2s_ppm, co_ppm : float
        Block at and above.
    source : str
        Where they stand.
    """

    oxygen_low_percent: float = 19.5
    oxygen_high_percent: float = 23.5
    lel_percent: float = 10.0
    h2s_ppm: float = 10.0
    co_ppm: float = 35.0
    source: str = "29 CFR 1910.146, appendix E (sewer entry) and paragraph (b) for oxygen above 23.5 %"


ALARMS = AlarmPoints()
NO_ENTRY = "This tool cannot permit entry."


def gas_alarms(reading: GasReading, points: AlarmPoints = ALARMS) -> list[str]:
    """Return what in a reading blocks a sample at this manhole.

    Parameters
    ----------
    reading : GasReading
        One reading.
    points : AlarmPoints
        The programme's set points.

    Returns
    -------
    list of str
        In the order of testing: oxygen, combustible, toxic. A gas that was not
        measured blocks as well.
    """
    found = []
    oxygen = reading.oxygen_percent
    if oxygen is None:
        found.append("oxygen was not measured")
    elif oxygen < points.oxygen_low_percent:
        found.append(f"oxygen {_plain(oxygen)} % is below {_plain(points.oxygen_low_percent)} %")
    elif oxygen > points.oxygen_high_percent:
        found.append(f"oxygen {_plain(oxygen)} % is above {_plain(points.oxygen_high_percent)} %")
    for name, value, point, unit in (
        ("combustible gas", reading.lel_percent, points.lel_percent, "% of the lower explosive limit"),
        ("hydrogen sulfide", reading.h2s_ppm, points.h2s_ppm, "ppm"),
        ("carbon monoxide", reading.co_ppm, points.co_ppm, "ppm"),
    ):
        if value is None:
            found.append(f"{name} was not measured")
        elif value >= point:
            found.append(f"{name} {_plain(value)} {unit} is at or above {_plain(point)} {unit}")
    return found


@dataclass(frozen=True)
class GasGate:
    """Whether a sample may be taken at a manhole from outside.

    Parameters
    ----------
    blocked : bool
        The sample cannot be recorded.
    why : tuple of str
        What blocks.
    words : str
        What is needed, and what the tool never permits.
    """

    blocked: bool
    why: tuple[str, ...]
    words: str


def gas_gate(
    readings: Sequence[GasReading], confirmed_by: str | None = None, points: AlarmPoints = ALARMS
) -> GasGate:
    """Judge the readings of one stop in the order in which they were taken.

    Parameters
    ----------
    readings : sequence of GasReading
        Oldest first.
    confirmed_by : str, optional
        Who confirmed, after the last reading, that it is safe to sample from
        outside; needed once any reading of the stop has alarmed.
    points : AlarmPoints
        The programme's set points.

    Returns
    -------
    GasGate
        Never a permission to enter.
    """
    if not readings:
        return GasGate(True, ("no gas reading was taken",), f"Test from outside first. {NO_ENTRY}")
    now = gas_alarms(readings[-1], points)
    if now:
        words = f"Get away from the manhole. A new reading below every alarm point is needed. {NO_ENTRY}"
        return GasGate(True, tuple(now), words)
    if not confirmed_by and any(gas_alarms(reading, points) for reading in readings):
        words = f"An earlier reading alarmed: a person must confirm that the sample can be taken. {NO_ENTRY}"
        return GasGate(True, ("not confirmed after an alarm",), words)
    return GasGate(False, (), f"Below every alarm point, from outside only. {NO_ENTRY}")
