"""What a calibration is valid for, the refusal of any other reading, and when it must be looked at again.

A slope belongs to one recipe, wavelength, instrument, kind of tube and reagent
lot, until a date. A reading taken under other conditions is not turned into a
COD by it: the curve of another lot is not nearly right, it is unknown.

A standard from another source is read after each calibration and then every
quarter, within 10 % (EPA 410.4 revision 2.0, 9.2.3); the linear range is
verified every six months (9.2.2).
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from datetime import date

from app.chemistry.detection_study import months_later
from app.errors import InputError

SECOND_SOURCE_PERCENT = 10.0
AGAIN_MONTHS = {"second source": 3, "linear range": 6}


@dataclass(frozen=True)
class Conditions:
    """Under what tubes were digested and read.

    Parameters
    ----------
    recipe, instrument, tube, reagent_lot : str
        Their ids or names.
    wavelength_nm : float
        Where they were read.
    """

    recipe: str
    wavelength_nm: float
    instrument: str
    tube: str
    reagent_lot: str


_NAMES = {
    "recipe": "recipe",
    "wavelength_nm": "wavelength",
    "instrument": "instrument",
    "tube": "kind of tube",
    "reagent_lot": "reagent lot",
}


@dataclass(frozen=True)
class Validity:
    """What one calibration is valid for.

    Parameters
    ----------
    conditions : Conditions
        Those of its standards.
    made_on, valid_until : date
        First and last day.
    """

    conditions: Conditions
    made_on: date
    valid_until: date


def refusals(validity: Validity, read: Conditions, on: date) -> dict[str, list[str]]:
    """Return why a calibration may not serve a reading, by field.

    Parameters
    ----------
    validity : Validity
        Of the calibration.
    read : Conditions
        Of the reading.
    on : date
        Day of the reading, in the programme's zone.

    Returns
    -------
    dict of str to list of str
        Empty when it may.
    """
    found: dict[str, list[str]] = {}
    for field in fields(Conditions):
        mine, theirs = getattr(validity.conditions, field.name), getattr(read, field.name)
        if mine != theirs:
            found[field.name] = [
                f"the curve was made for {_NAMES[field.name]} {mine}, the tubes were read with {theirs}"
            ]
    if not validity.made_on <= on <= validity.valid_until:
        found["on"] = [f"the curve is valid from {validity.made_on} to {validity.valid_until}"]
    return found


def require_valid(validity: Validity, read: Conditions, on: date) -> None:
    """Refuse a reading that a calibration may not serve.

    Parameters
    ----------
    validity : Validity
        Of the calibration.
    read : Conditions
        Of the reading.
    on : date
        Day of the reading.

    Raises
    ------
    InputError
        Naming every condition that differs.
    """
    found = refusals(validity, read, on)
    if found:
        raise InputError("This calibration does not belong to these tubes: choose or make another.", found)


def recovery_percent(found: float, expected: float) -> float:
    """Return what was found of a standard, in percent.

    Parameters
    ----------
    found, expected : float
        mg O2/L, expected above zero.

    Returns
    -------
    float
    """
    return 100.0 * found / expected


def holds(recovery: float, limit_percent: float = SECOND_SOURCE_PERCENT) -> bool:
    """Tell whether a recovery lies within 100 % and its limit, the limit itself included."""
    return abs(recovery - 100.0) <= limit_percent + 1e-9


def due_again(what: str, on: date) -> date:
    """Return when a check of a curve is due again.

    Parameters
    ----------
    what : {"second source", "linear range"}
        The check.
    on : date
        Its day, or that of the calibration.

    Returns
    -------
    date
        A quarter or half a year later.
    """
    return months_later(on, AGAIN_MONTHS[what])
