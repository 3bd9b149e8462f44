"""Typed numbers: kept as typed, read by one explicit rule.

A person writes ``1,5``, ``<20`` or ``1e3``; the text is what is stored. The
reading is derived: an optional ``<`` or ``>``, an optional minus, digits with
at most one decimal mark (point or comma), groups of three digits set apart by
spaces, an optional exponent. A text with both marks is refused, since
``1.234,5`` and ``1,234.5`` mean different numbers to different people. The
tablet reads by the same rule; both sides are held to the same vectors.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from app.errors import InputError
from app.journal import units

_SPACES = "\u00a0\u2007\u2009\u202f"
_TEXT = re.compile(
    r"(?P<sign>[<>]?)"
    r"(?P<number>-?(?:\d{1,3}(?: \d{3})+|\d+)(?:[.,]\d+)?|-?[.,]\d+)"
    r"(?P<exponent>[eE][+-]?\d{1,3})?",
    re.ASCII,
)
_SIGNS = str.maketrans({"≤": "<", "≥": ">", "−": "-"} | dict.fromkeys(_SPACES, " "))


@dataclass(frozen=True)
class Reading:
    """A typed number as it was read.

    Attributes
    ----------
    sign : str
        ``=`` for a value, ``<`` or ``>`` for a bound.
    value : float
        The number.
    """

    sign: str
    value: float


def read(text: str) -> Reading:
    """Read a typed number.

    Parameters
    ----------
    text : str
        What the person typed.

    Returns
    -------
    Reading

    Raises
    ------
    InputError
        If the text is no number by the rule of this module.
    """
    plain = text.translate(_SIGNS).strip()
    if "." in plain and "," in plain:
        raise InputError(f"“{text}” has both a point and a comma: write 1234.5 or 1234,5.")
    found = _TEXT.fullmatch(re.sub(r"^([<>])\s+", r"\1", plain))
    if found is None:
        raise InputError(f"“{text}” is not a number.")
    digits = found["number"].replace(" ", "").replace(",", ".")
    value = float(digits + (found["exponent"] or ""))
    if value in (float("inf"), float("-inf")):
        raise InputError(f"“{text}” is too large.")
    return Reading(found["sign"] or "=", value)


def value(measured: dict[str, Any] | None, unit: str) -> float | None:
    """Return the number of a measured value in ``unit``, or None where there is none."""
    if measured is None:
        return None
    return units.convert(read(measured["text"]).value, measured["unit"], unit)
