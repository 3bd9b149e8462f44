"""Field meters: whether a check holds, and which readings a failed one casts doubt on.

A reading at the manhole stands on the check before it and the check after it.
A meter that has drifted beyond its acceptance at the later check flags every
reading since the last check that held. Acceptances are settings:

===============  =====================  ====================================
quantity         acceptance             source
===============  =====================  ====================================
pH               0.1 pH                 operator training text of a state
conductivity     10 % of the standard   from memory (5 to 10 % are usual)
temperature      0.5 degrees Celsius    common practice
turbidity        10 % of the standard   common practice
===============  =====================  ====================================

A pH calibration brackets what is expected with two buffers at least 3 pH apart
(the same training text); its slope lies within 92 to 102 % of the theoretical
one (from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import asdict, dataclass
from datetime import datetime
from typing import Any, Literal

from app.compliance.exact import need_number, plain
from app.errors import InputError

Quantity = Literal["pH", "conductivity", "temperature", "turbidity"]


@dataclass(frozen=True)
class Acceptance:
    """How far a meter may be from a reference.

    Parameters
    ----------
    limit : float
        In the unit of the quantity, or in percent of the reference.
    relative : bool
        Whether it is a percentage.
    source : str
        Where the number comes from.
    """

    limit: float
    relative: bool
    source: str


ACCEPTANCES: dict[str, Acceptance] = {
    "pH": Acceptance(0.1, False, "operator training text of a state"),
    "conductivity": Acceptance(10.0, True, "from memory"),
    "temperature": Acceptance(0.5, False, "common practice"),
    "turbidity": Acceptance(10.0, True, "common practice"),
}
BUFFERS_APART_PH = 3.0
SLOPE_PERCENT = (92.0, 102.0)


def acceptances() -> dict[str, dict[str, Any]]:
    """Return the default acceptances as plain data, for a client that judges a check by itself."""
    return {name: asdict(rule) for name, rule in ACCEPTANCES.items()}


@dataclass(frozen=True)
class Point:
    """A reference and what the meter read in it, same unit."""

    reference: float
    read: float


@dataclass(frozen=True)
class Judged:
    """What a check says of a meter.

    Parameters
    ----------
    ok : bool
        Whether the meter holds.
    worst : float
        Largest deviation, in the acceptance's measure.
    words : tuple of str
        What is wrong, or what it was held to.
    """

    ok: bool
    worst: float
    words: tuple[str, ...]


def _deviation(quantity: str, point: Point, rule: Acceptance) -> float:
    if not rule.relative:
        return abs(point.read - point.reference)
    if point.reference <= 0:
        raise InputError(
            "A percentage needs a reference above zero.", {"points": [f"{quantity}: reference above zero"]}
        )
    return 100.0 * abs(point.read / point.reference - 1.0)


def judge(
    quantity: str,
    points: Sequence[Point],
    slope_percent: float | None = None,
    calibration: bool = False,
    rule: Acceptance | None = None,
) -> Judged:
    """Judge a calibration or a check of one meter.

    Parameters
    ----------
    quantity : {"pH", "conductivity", "temperature", "turbidity"}
        What it measures.
    points : sequence of Point
        References and readings after any adjustment, at least one.
    slope_percent : float, optional
        Slope of a pH electrode.
    calibration : bool
        A pH calibration must bracket with two buffers.
    rule : Acceptance, optional
        Another acceptance than the default of the quantity.

    Returns
    -------
    Judged

    Raises
    ------
    InputError
        If the quantity is unknown or no reference was read.
    """
    rule = rule or ACCEPTANCES.get(quantity)
    if rule is None:
        known = ", ".join(ACCEPTANCES)
        raise InputError("No acceptance is known for this quantity.", {"quantity": [f"one of {known}"]})
    if not points:
        raise InputError("A check needs a reference.", {"points": ["need at least one"]})
    for i, point in enumerate(points):
        need_number(f"points.{i}.reference", point.reference)
        need_number(f"points.{i}.read", point.read)
    unit = "%" if rule.relative else {"pH": "pH", "temperature": "°C"}.get(quantity, "")
    off = [_deviation(quantity, point, rule) for point in points]
    wrong = [
        f"{plain(round(d, 3))} {unit} off at {plain(point.reference)}, more than {plain(rule.limit)} {unit}"
        for point, d in zip(points, off, strict=True)
        if d > rule.limit + 1e-9
    ]
    wrong += _electrode(quantity, points, slope_percent, calibration)
    held = (f"within {plain(rule.limit)} {unit} ({rule.source})",)
    return Judged(not wrong, max(off), tuple(wrong) or held)


def _electrode(quantity: str, points: Sequence[Point], slope: float | None, calibration: bool) -> list[str]:
    if quantity != "pH":
        return []
    found = []
    buffers = [point.reference for point in points]
    # Buffers named 4 and 7 stand at 4.01 and 7.00: their distance is judged to a tenth.
    if calibration and round(max(buffers) - min(buffers), 1) < BUFFERS_APART_PH:
        found.append(f"the buffers lie less than {plain(BUFFERS_APART_PH)} pH apart")
    if slope is not None and not SLOPE_PERCENT[0] <= slope <= SLOPE_PERCENT[1]:
        low, high = SLOPE_PERCENT
        found.append(f"a slope of {plain(slope)} % lies outside {plain(low)} to {plain(high)} %")
    return found


def in_doubt(checks: Sequence[tuple[datetime, bool]], readings: Sequence[datetime]) -> tuple[datetime, ...]:
    """Return the readings that no pair of good checks encloses any more.

    Parameters
    ----------
    checks : sequence of (datetime, bool)
        Moments of one meter's checks and whether each held, any order.
    readings : sequence of datetime
        Moments of readings with it, any order.

    Returns
    -------
    tuple of datetime
        Readings made after the last good check and before (or at) a failed
        one, in time order.
    """
    ordered = sorted(checks)
    doubtful = set()
    for i, (failed_at, ok) in enumerate(ordered):
        if ok:
            continue
        good = [at for at, held in ordered[:i] if held]
        since = good[-1] if good else None
        doubtful |= {at for at in readings if at <= failed_at and (since is None or at > since)}
    return tuple(sorted(doubtful))
