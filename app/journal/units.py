"""The one table of units, shared with the client as ``static/units.json``.

Each unit names its quantity and how its number becomes the quantity's base
unit: ``base = number x factor + offset``. Codes follow UCUM where it has one.
"""

from __future__ import annotations

import json
from functools import cache
from pathlib import Path
from typing import Any

from app.errors import InputError

STATIC = Path(__file__).resolve().parents[2] / "static"


@cache
def table() -> dict[str, dict[str, Any]]:
    """Return the table of units, by the unit's written form."""
    found: dict[str, dict[str, Any]] = json.loads((STATIC / "units.json").read_text(encoding="utf-8"))
    return found


def quantity(unit: str) -> str:
    """Return what a unit measures.

    Raises
    ------
    InputError
        If the unit is not in the table.
    """
    try:
        return str(table()[unit]["quantity"])
    except KeyError:
        raise InputError(f"“{unit}” is not a unit that Weirbook knows.") from None


def convert(number: float, unit: str, into: str) -> float:
    """Turn a number of one unit into another of the same quantity.

    Raises
    ------
    InputError
        If a unit is unknown or the two measure different things.
    """
    if quantity(unit) != quantity(into):
        raise InputError(f"{unit} cannot be turned into {into}.")
    if unit == into:
        return number
    one, other = table()[unit], table()[into]
    base = number * float(one["factor"]) + float(one.get("offset", 0))
    return (base - float(other.get("offset", 0))) / float(other["factor"])
