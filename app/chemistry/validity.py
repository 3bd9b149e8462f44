"""What a calibration is valid for, and the refusal of any other reading.

A slope belongs to one recipe, wavelength, instrument, kind of tube and reagent
lot, until a date. A reading taken under other conditions is not turned into a
COD by it: the curve of another lot is not nearly right, it is unknown.
"""

from __future__ import annotations

from dataclasses import dataclass, fields
from datetime import date

from app.errors import InputError


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
