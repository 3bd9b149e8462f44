"""Exact numbers, so that a value equal to its limit is equal to it.

A limit of 10.3 times 1.2 is 12.36; in binary floating point it is a hair more,
and a result of exactly 12.36 would no longer count as "equal or above". Every
comparison with a limit is therefore made on fractions that stand for the
shortest decimal text of each number, which is what a person typed.
"""

from __future__ import annotations

import math
from decimal import Decimal
from fractions import Fraction

from app.errors import InputError

Number = int | float | Decimal | Fraction


def exact(value: Number) -> Fraction:
    """Return the fraction that the shortest decimal text of a number stands for.

    Parameters
    ----------
    value : int, float, Decimal or Fraction
        A finite number.

    Returns
    -------
    Fraction

    Raises
    ------
    InputError
        If the number is not finite.

    Examples
    --------
    >>> exact(10.3) * exact(1.2) == exact(12.36)
    True
    >>> 10.3 * 1.2 == 12.36
    False
    """
    if isinstance(value, (int, Fraction)):
        return Fraction(value)
    if isinstance(value, float):
        if value.is_integer():
            return Fraction(int(value))
        value = Decimal(repr(value))
    if not value.is_finite():
        raise InputError("A number that is not finite cannot be compared.", {"value": ["must be finite"]})
    return Fraction(value)


def plain(value: Number) -> str:
    """Return a number as a person writes it: no exponent, no trailing ``.0``.

    Parameters
    ----------
    value : int, float, Decimal or Fraction
        A finite number.

    Returns
    -------
    str

    Examples
    --------
    >>> plain(1000.0), plain(1199.9), plain(2.5e-05)
    ('1000', '1199.9', '0.000025')
    """
    if isinstance(value, Decimal):
        text = format(value, "f")
    elif isinstance(value, int):
        return str(value)
    else:
        text = format(Decimal(repr(float(value))), "f")
    return text.rstrip("0").rstrip(".") if "." in text else text


def need_number(name: str, value: float, *, above: float | None = None, least: float | None = None) -> None:
    """Refuse a number that is not finite or lies outside its bound.

    Parameters
    ----------
    name : str
        Path of the field, named in the error.
    value : float
        The number.
    above : float, optional
        The number must be strictly larger.
    least : float, optional
        The number must be at least as large.

    Raises
    ------
    InputError
        Naming the field.
    """
    words = ""
    if isinstance(value, bool) or not math.isfinite(value):
        words = "must be a finite number"
    elif above is not None and value <= above:
        words = f"must be above {plain(above)}"
    elif least is not None and value < least:
        words = f"must be {plain(least)} or more"
    if words:
        raise InputError(f"{name.replace('_', ' ')} {words}.", {name: [words]})
