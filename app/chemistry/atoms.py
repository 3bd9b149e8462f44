"""Atomic masses and chemical formulas.

Masses are the IUPAC abridged standard atomic weights (five significant
digits; Prohaska et al., Pure Appl. Chem. 94 (2022) 573; typed from memory and
checked against published molar masses in the tests). The table holds the
elements that meet in an oxygen demand or in a recipe; any other is refused by
name rather than guessed.
"""

from __future__ import annotations

import re
from collections.abc import Mapping

from app.errors import InputError

ATOMIC_MASS: Mapping[str, float] = {
    "H": 1.008,
    "Li": 6.94,
    "B": 10.81,
    "C": 12.011,
    "N": 14.007,
    "O": 15.999,
    "F": 18.998,
    "Na": 22.990,
    "Mg": 24.305,
    "Al": 26.982,
    "Si": 28.085,
    "P": 30.974,
    "S": 32.06,
    "Cl": 35.45,
    "K": 39.098,
    "Ca": 40.078,
    "Cr": 51.996,
    "Mn": 54.938,
    "Fe": 55.845,
    "Cu": 63.546,
    "Zn": 65.38,
    "Br": 79.904,
    "Ag": 107.87,
    "I": 126.90,
    "Hg": 200.59,
}

LONGEST_FORMULA = 120
MOST_ATOMS = 100_000
_TOKEN = re.compile(r"([A-Z][a-z]?)|([(\[])|([)\]])|([0-9]+)")
_DOTS = "·•*."


def _refuse(words: str) -> InputError:
    return InputError(f"The formula cannot be read: {words}.", {"formula": [words]})


def _tokens(formula: str) -> list[str]:
    if not formula:
        raise _refuse("it is empty")
    if len(formula) > LONGEST_FORMULA:
        raise _refuse(f"it is longer than {LONGEST_FORMULA} characters")
    if any(mark in formula for mark in _DOTS):
        raise _refuse("write water of crystallisation into the formula, e.g. C6H10O8 for C6H8O7 with H2O")
    if any(mark in formula for mark in "+-^"):
        raise _refuse("write the neutral substance, without a charge")
    found, at = [], 0
    while at < len(formula):
        token = _TOKEN.match(formula, at)
        if token is None:
            raise _refuse(f"'{formula[at]}' at place {at + 1} is no symbol, bracket or number")
        found.append(token.group())
        at = token.end()
    return found


def _count(tokens: list[str], at: int) -> tuple[int, int]:
    """Return the number that follows a symbol or bracket, and the next place."""
    if at == len(tokens) or not tokens[at].isdigit():
        return 1, at
    text = tokens[at]
    if text.startswith("0") or int(text) > MOST_ATOMS:
        raise _refuse(f"'{text}' is no number of atoms")
    return int(text), at + 1


def parse_formula(formula: str) -> dict[str, int]:
    """Count the atoms of a formula such as ``C8H5KO4`` or ``(CH3)2CO``.

    Parameters
    ----------
    formula : str
        Element symbols, whole numbers, round or square brackets. Hydrates
        written with a dot and charges are refused with a word on what to
        write instead.

    Returns
    -------
    dict of str to int
        Atoms by element, in the order met.

    Raises
    ------
    InputError
        Naming ``formula``.

    Examples
    --------
    >>> parse_formula("(CH3)2CO")
    {'C': 3, 'H': 6, 'O': 1}
    """
    tokens = _tokens(formula)
    stack: list[tuple[str, dict[str, int]]] = [("", {})]
    at = 0
    while at < len(tokens):
        token, at = tokens[at], at + 1
        if token in "([":
            stack.append((token, {}))
            continue
        if token in ")]":
            opened, inner = stack.pop()
            if opened + token not in ("()", "[]") or not inner:
                raise _refuse(f"the bracket '{token}' closes nothing")
        elif token in ATOMIC_MASS:
            inner = {token: 1}
        elif token.isdigit():
            raise _refuse(f"the number {token} follows no symbol")
        else:
            raise _refuse(f"'{token}' is no element known here ({', '.join(ATOMIC_MASS)})")
        times, at = _count(tokens, at)
        for element, atoms in inner.items():
            stack[-1][1][element] = stack[-1][1].get(element, 0) + atoms * times
    if len(stack) > 1:
        raise _refuse(f"a bracket '{stack[-1][0]}' is not closed")
    if sum(stack[0][1].values()) > MOST_ATOMS:
        raise _refuse(f"it has more than {MOST_ATOMS} atoms")
    return stack[0][1]


def molar_mass(atoms: Mapping[str, int]) -> float:
    """Return the molar mass of counted atoms.

    Parameters
    ----------
    atoms : mapping of str to int
        As :func:`parse_formula` gives them.

    Returns
    -------
    float
        g/mol.
    """
    return sum(ATOMIC_MASS[element] * count for element, count in atoms.items())


OXYGEN = 2 * ATOMIC_MASS["O"]
DICHROMATE = molar_mass({"K": 2, "Cr": 2, "O": 7})
MERCURY_SULFATE = molar_mass({"Hg": 1, "S": 1, "O": 4})
SILVER_SULFATE = molar_mass({"Ag": 2, "S": 1, "O": 4})
