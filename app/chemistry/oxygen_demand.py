"""Theoretical oxygen demand of a substance, as the dichromate test sees it.

Carbon goes to CO2, hydrogen to water, sulfur to sulfate, phosphorus to
phosphate, halogens leave as halide, alkali and alkaline earth metals as ions
(an ion of charge z counts like z hydrogens). Nitrogen stays reduced and leaves
as ammonium: dichromate does not oxidise ammonia (Standard Methods 5220 A; from
memory), so urea has no demand and the nitrification form (glycine 1.49) is not
offered. Per mole

    O2 = C + (H + K + Na + ... - X - 3 N) / 4 - O / 2 + 3/2 S + 5/4 P.

Other elements change valence in ways that depend on the substance and are
refused. The result is theory: what a digestion reaches is a property of the
substance (pyridine hardly reacts, volatiles stay in the headspace).
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from app.chemistry.atoms import OXYGEN, molar_mass, parse_formula
from app.errors import InputError

#: Mol O2 taken by one atom of each element.
O2_PER_ATOM: Mapping[str, Fraction] = {
    "C": Fraction(1),
    "H": Fraction(1, 4),
    "Li": Fraction(1, 4),
    "Na": Fraction(1, 4),
    "K": Fraction(1, 4),
    "Mg": Fraction(1, 2),
    "Ca": Fraction(1, 2),
    "O": Fraction(-1, 2),
    "N": Fraction(-3, 4),
    "F": Fraction(-1, 4),
    "Cl": Fraction(-1, 4),
    "Br": Fraction(-1, 4),
    "I": Fraction(-1, 4),
    "S": Fraction(3, 2),
    "P": Fraction(5, 4),
}


@dataclass(frozen=True)
class OxygenDemand:
    """What one milligram of a substance takes.

    Parameters
    ----------
    formula : str
        As given.
    molar_mass : float
        g/mol.
    oxygen_demand : float
        mg O2 per mg of the substance.
    """

    formula: str
    molar_mass: float
    oxygen_demand: float


def oxygen_demand(formula: str) -> OxygenDemand:
    """Return the theoretical oxygen demand of a substance.

    Parameters
    ----------
    formula : str
        For example ``C8H5KO4``, potassium hydrogen phthalate.

    Returns
    -------
    OxygenDemand

    Raises
    ------
    InputError
        When the formula cannot be read, holds an element without a rule, or
        belongs to an oxidant, which takes no oxygen.

    Examples
    --------
    >>> round(oxygen_demand("C8H5KO4").oxygen_demand, 4)
    1.1751
    """
    atoms = parse_formula(formula)
    strangers = [element for element in atoms if element not in O2_PER_ATOM]
    if strangers:
        words = f"no rule says where {', '.join(strangers)} goes in a dichromate digestion"
        raise InputError(f"No oxygen demand for {formula}: {words}.", {"formula": [words]})
    moles = sum((O2_PER_ATOM[element] * count for element, count in atoms.items()), Fraction(0))
    if moles < 0:
        words = "it holds more oxygen than it could take up: it is an oxidant"
        raise InputError(f"No oxygen demand for {formula}: {words}.", {"formula": [words]})
    mass = molar_mass(atoms)
    return OxygenDemand(formula, mass, float(moles) * OXYGEN / mass)
