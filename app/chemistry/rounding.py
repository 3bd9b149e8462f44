"""Round once, at the end, ties to even, on the number that a person sees.

A binary float is not the decimal it prints: 2.675 is a hair less, and rounding
it in binary gives 2.67. Every rounding here works on the shortest decimal text
of the number, which is what was typed or computed, in decimal arithmetic.

Results carry three significant figures, two below 10 mg/L, uncertainties two
(an EPA contract sheet for method 410.4, 1999; ASTM E29, rounding method, half
to even). A bound keeps its digits while they are few; a long one is rounded
outwards, so that "< 334" stays true when the bound is 333.33.
"""

from __future__ import annotations

from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Context, Decimal
from functools import lru_cache
from typing import Literal

RESULT_DIGITS = 3
SMALL_RESULT = 10.0
SMALL_RESULT_DIGITS = 2
UNCERTAINTY_DIGITS = 2
BOUND_DIGITS = 3
LONGEST_BOUND = 5


@lru_cache(maxsize=32)
def _context(digits: int, rounding: str) -> Context:
    return Context(prec=digits, rounding=rounding)


def significant(value: float, digits: int, rounding: str = ROUND_HALF_EVEN) -> Decimal:
    """Round to significant figures.

    Parameters
    ----------
    value : float
        A finite number; its shortest decimal text is what is rounded. Minus
        zero is zero.
    digits : int
        At least one.
    rounding : str
        A rounding mode of :mod:`decimal`.

    Returns
    -------
    Decimal

    Examples
    --------
    >>> str(significant(2.675, 3)), str(significant(124.5, 3))
    ('2.68', '124')
    """
    return _context(digits, rounding).create_decimal(repr(float(value) + 0.0))


def plain(value: Decimal) -> str:
    """Return a decimal without an exponent, as paper shows it.

    Parameters
    ----------
    value : Decimal
        A finite number.

    Returns
    -------
    str

    Examples
    --------
    >>> plain(Decimal("1.28E+4")), plain(Decimal("60.0"))
    ('12800', '60.0')
    """
    return format(value, "f")


def result_digits(cod: float) -> int:
    """Return how many significant figures a result in mg/L carries."""
    return SMALL_RESULT_DIGITS if abs(cod) < SMALL_RESULT else RESULT_DIGITS


def reported_cod(cod: float) -> Decimal:
    """Round a result in mg/L as it is reported."""
    return significant(cod, result_digits(cod))


def reported_u(u: float) -> Decimal:
    """Round an expanded uncertainty as it is reported."""
    return significant(u, UNCERTAINTY_DIGITS)


def bound_text(sign: Literal["<", ">"], in_tube: float, dilution_factor: float) -> str:
    """Return a bound of the sample, e.g. ``"< 200"``.

    Parameters
    ----------
    sign : {"<", ">"}
        Below the lower end, or above the top.
    in_tube, dilution_factor : float
        The bound in the tube, and what multiplies it.

    Returns
    -------
    str
        The exact product while it has at most five figures; a longer one is
        rounded to three, upwards for "<" and downwards for ">".

    Examples
    --------
    >>> bound_text("<", 20, 50), bound_text("<", 20, 16.666666666666668)
    ('< 1000', '< 334')
    """
    product = (Decimal(repr(float(in_tube))) * Decimal(repr(float(dilution_factor)))).normalize()
    if len(product.as_tuple().digits) > LONGEST_BOUND:
        outwards = ROUND_CEILING if sign == "<" else ROUND_FLOOR
        product = _context(BOUND_DIGITS, outwards).create_decimal(product)
    return f"{sign} {plain(product)}"
