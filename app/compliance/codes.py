"""Bottle codes: six characters, the last one a check character.

The check character is ISO/IEC 7064, MOD 37-2, unchanged: characters ``0-9A-Z*``
stand for 0 to 36, and a string with its check character satisfies
``sum(a_i * 2**i) mod 37 == 1``, ``i`` counted from the right. Because 37 is
prime, every single wrong character changes the sum by ``d * 2**i``, which is
never a multiple of 37; and every swap of two neighbours changes it by
``d * 2**i``, ``d`` the difference of the two, so that every swap of two
different neighbours is caught as well.

What is ours is the choice of codes: only characters that are not mistaken for
one another on a wet label are printed (:data:`ALPHABET`; no 0 O, 1 I L, 2 Z,
5 S, 8 B, U V twins: of each group at most one is used), and a body whose check
character falls outside that alphabet is never issued. Any ISO/IEC 7064 library
can verify a code.

The client has the same functions in ``static/parts/bottle_code.js``; both are
tested on the same vectors.
"""

from __future__ import annotations

from collections.abc import Iterator

from app.errors import InputError

STANDARD = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ*"
ALPHABET = "23456789ACDEFGHJKMNPQRTVWXY"
MODULUS, RADIX, LENGTH = 37, 2, 6
SLIPS = str.maketrans({"Z": "2", "S": "5", "B": "8"})


def _sum(text: str) -> int:
    total = 0
    for character in text:
        total = (total + STANDARD.index(character)) * RADIX % MODULUS
    return total


def check_character(text: str) -> str:
    """Return the ISO/IEC 7064 MOD 37-2 check character of a text.

    Parameters
    ----------
    text : str
        Digits and capital letters.

    Returns
    -------
    str
        One of ``0-9``, ``A-Z`` or ``*``.

    Examples
    --------
    >>> check_character("G123489654321")
    'Y'
    """
    return STANDARD[(1 - _sum(text)) % MODULUS]


def make(body: str) -> str:
    """Return the bottle code of a body of five characters.

    Parameters
    ----------
    body : str
        Five characters of :data:`ALPHABET`.

    Returns
    -------
    str
        Six characters.

    Raises
    ------
    InputError
        If the body has another length or character, or its check character
        would not be printable; the next body then serves.
    """
    if len(body) != LENGTH - 1 or any(c not in ALPHABET for c in body):
        raise InputError(
            "This cannot begin a bottle code.", {"body": [f"needs five characters of {ALPHABET}"]}
        )
    check_with = check_character(body)
    if check_with not in ALPHABET:
        raise InputError(
            "This body is never issued.",
            {"body": ["its check character could be misread: take the next body"]},
        )
    return body + check_with


def codes(start: int, count: int) -> Iterator[str]:
    """Yield codes in order, leaving out the bodies that are never issued.

    Parameters
    ----------
    start : int
        Number of the first body tried, from 0; the same number always stands
        for the same body.
    count : int
        How many codes.

    Yields
    ------
    str

    Raises
    ------
    InputError
        If the numbers are negative or the bodies run out.
    """
    size = len(ALPHABET)
    number = start
    if start < 0 or count < 0:
        raise InputError("Numbers of codes are not negative.", {"start": ["must be 0 or more"]})
    while count:
        if number >= size ** (LENGTH - 1):
            raise InputError("No codes are left.", {"start": ["every body has been issued"]})
        body, rest = "", number
        for _ in range(LENGTH - 1):
            rest, digit = divmod(rest, size)
            body = ALPHABET[digit] + body
        number += 1
        if check_character(body) in ALPHABET:
            count -= 1
            yield make(body)


def check(text: str) -> str:
    """Return the code behind what was typed or scanned.

    Small letters, spaces and hyphens are forgiven, and so is a Z, S or B, which
    is never printed, for the 2, 5 or 8 it looks like.

    Parameters
    ----------
    text : str
        As typed.

    Returns
    -------
    str
        Six characters.

    Raises
    ------
    InputError
        If it is not a bottle code; the words say what to look at.
    """
    code = "".join(text.split()).replace("-", "").upper().translate(SLIPS)
    words = ""
    unknown = sorted({c for c in code if c not in ALPHABET})
    if unknown:
        words = f"{' '.join(unknown)} is never printed in a bottle code: look at the label again"
    elif len(code) != LENGTH:
        words = f"a bottle code has six characters, not {len(code)}"
    elif (_sum(code[:-1]) + STANDARD.index(code[-1])) % MODULUS != 1:
        words = "one character is wrong or two are swapped: compare with the label"
    if words:
        raise InputError("This is not a bottle code.", {"bottle": [words]})
    return code
