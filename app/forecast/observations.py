"""Past results, the moment of the next sample, and the inputs field readings make.

A reading enters on a fixed scale (logarithms of conductivity and turbidity
against a common reference), so that what one point shows can start another.
Conductivity and turbidity have a bend: salt beyond fresh water and solids
beyond a haze act differently from what is under it. A missing reading enters
as usual for the point; one far outside the point's past is drawn back to a
bound and named.

Assumes that within these scales a reading acts about linearly on ln COD.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Literal

import numpy as np

from app.errors import InputError

State = Literal["ok", "over", "below"]

READINGS = ("conductivity_us_cm", "turbidity_ntu", "ph", "temperature_c")
ACTIVITIES = ("production", "cleaning", "idle")
#: The inputs that readings make, in order; each from one reading.
INPUTS = ("conductivity", "turbidity", "ph", "temperature", "salt", "solids")
SOURCE = (0, 1, 2, 3, 0, 1)
#: Usual spread of each input at one point, before it is known there: common practice, from experience.
TYPICAL = np.array([0.6, 0.9, 0.5, 0.5, 0.5, 0.5])
FARTHEST = 4.0
KNOWN_WELL = 5
YEAR_DAYS = 365.25
LARGEST_COD = 1e9


@dataclass(frozen=True)
class Observation:
    """One past result of a point.

    Parameters
    ----------
    days : float
        When it was collected, days since 1970-01-01 UTC.
    cod : float
        mg/L; for ``over`` and ``below`` the bound.
    state : {"ok", "over", "below"}
        A value, more than the bound, or less than it.
    field : mapping of str to float
        Field readings by the names of :data:`READINGS`; others are ignored.
    activity : str or None
        What the discharger was doing.
    """

    days: float
    cod: float
    state: State = "ok"
    field: Mapping[str, float] = field(default_factory=dict)
    activity: str | None = None

    def __post_init__(self) -> None:
        """Refuse a result that is no number above zero."""
        if not (0 < self.cod <= LARGEST_COD):
            raise InputError("A COD must be above zero.", {"cod": ["must be above zero"]})
        if not math.isfinite(self.days):
            raise InputError("A result needs its moment.", {"at": ["must be a moment"]})


@dataclass(frozen=True)
class Now:
    """The moment of the next sample and what the meters show."""

    days: float
    field: Mapping[str, float] = field(default_factory=dict)
    activity: str | None = None


def _logarithm(value: float | None, reference: float) -> float:
    return math.log(value / reference) if value is not None and value > 0 else math.nan


def inputs_of(readings: Mapping[str, float]) -> list[float]:
    """Return the inputs some readings make.

    Parameters
    ----------
    readings : mapping of str to float
        By the names of :data:`READINGS`.

    Returns
    -------
    list of float
        One for each of :data:`INPUTS`; not a number where the reading is missing.
    """
    salt = _logarithm(readings.get("conductivity_us_cm"), 1000.0)
    solids = _logarithm(readings.get("turbidity_ntu"), 50.0)
    return [
        salt,
        solids,
        readings.get("ph", math.nan) - 7.5,
        (readings.get("temperature_c", math.nan) - 20.0) / 10.0,
        salt if math.isnan(salt) else max(salt - math.log(2.0), 0.0),
        solids if math.isnan(solids) else max(solids, 0.0),
    ]


def calendar_of(days: float) -> tuple[float, float]:
    """Return the cosine and sine of the season."""
    turn = 2.0 * math.pi * days / YEAR_DAYS
    return math.cos(turn), math.sin(turn)


def activity_of(activity: str | None) -> list[float]:
    """Return one for the activity that was going on, zero for the others."""
    return [1.0 if activity == one else 0.0 for one in ACTIVITIES]


def usual_before(inputs: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return centre, spread and count of each input before each sample and after the last.

    Parameters
    ----------
    inputs : ndarray of shape (n, 6)
        In order of time, not a number where missing.

    Returns
    -------
    tuple of ndarray of shape (n + 1, 6)
    """
    given = ~np.isnan(inputs)
    zero = np.zeros((1, len(INPUTS)))
    count = np.concatenate([zero, np.cumsum(given, axis=0)])
    filled = np.where(given, inputs, 0.0)
    centre = np.concatenate([zero, np.cumsum(filled, axis=0)]) / (count + 1.0)
    off = np.where(given, inputs - centre[:-1], 0.0)
    squares = np.concatenate([zero, np.cumsum(off**2, axis=0)])
    spread = np.sqrt((squares + 3.0 * TYPICAL**2) / (count + 3.0))
    return centre, spread, count


def settle(
    inputs: np.ndarray, centre: np.ndarray, spread: np.ndarray
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return inputs with missing ones put at the centre and far ones at a bound.

    Parameters
    ----------
    inputs, centre, spread : ndarray of equal shape
        Inputs with what is usual for them.

    Returns
    -------
    settled : ndarray
        Finite inputs.
    missing, bounded : ndarray of bool
        What was put at the centre, and what at the bound.
    """
    missing = np.isnan(inputs)
    reach = FARTHEST * np.maximum(spread, 0.3 * TYPICAL)
    held = np.where(missing, centre, inputs)
    settled = np.clip(held, centre - reach, centre + reach)
    return settled, missing, settled != held


def in_order(history: Sequence[Observation]) -> list[Observation]:
    """Return results in the order of time; equal moments keep their order."""
    return sorted(history, key=lambda one: one.days)
