"""What else than organic matter takes dichromate, and what may be done about it.

Chloride is a gate, not a correction. While mercury is in the tube only a small
part of the chloride reacts, and nobody knows which: 0.226 mg O2 per mg is the
most that chloride can do without mercury, never a term to subtract. Chloride in
the tube must stay under a tenth of the mercury(II) sulfate; diluting the sample
dilutes it too. Where it was not measured, conductivity bounds it from above (if
all salt were sodium chloride), which can open the gate and never close it.

Nitrite, ferrous iron and sulfide react by stoichiometry. With measured
concentrations their share may be shown as a separate corrected value beside the
uncorrected one, which is the one that permits mean.

References
----------
EPA 410.4 rev. 2.0, 4.1; Standard Methods 5220 A. Factors are 7.9995 mg O2 per
milliequivalent over the mass of the species.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

from app.chemistry.atoms import ATOMIC_MASS, OXYGEN
from app.chemistry.problems import Problems

MG_O2_PER_MEQ = OXYGEN / 4.0
Sign = Literal["=", "<", ">"]
_SIGN_WORDS = {"=": "", "<": "At most ", ">": "Over "}


@dataclass(frozen=True)
class Interferent:
    """A species that takes dichromate by stoichiometry.

    Parameters
    ----------
    name, given_as : str
        In words, and how its concentration is given.
    electrons : int
        Per atom given.
    mg_per_mmol : float
        Mass of what it is given as.
    """

    name: str
    given_as: str
    electrons: int
    mg_per_mmol: float

    @property
    def mg_o2_per_mg(self) -> float:
        """Oxygen demand of one milligram."""
        return self.electrons * MG_O2_PER_MEQ / self.mg_per_mmol


CHLORIDE = Interferent("chloride", "mg Cl/L", 1, ATOMIC_MASS["Cl"])
#: Species that may be corrected for when they were measured.
CORRECTABLE: Mapping[str, Interferent] = {
    "nitrite": Interferent("nitrite", "mg N/L", 2, ATOMIC_MASS["N"]),
    "ferrous": Interferent("ferrous iron", "mg Fe/L", 1, ATOMIC_MASS["Fe"]),
    "sulfide": Interferent("sulfide", "mg S/L", 8, ATOMIC_MASS["S"]),
}
#: Sulfamic acid that removes nitrite before digestion, in mg per mg of nitrite nitrogen;
#: added to blanks too. Stoichiometry needs 6.9.
SULFAMIC_ACID_PER_NITRITE_N = 10.0
#: Above it a result carries a chloride flag even when the mercury suffices.
CHLORIDE_FLAG_MG_L = 1000.0

#: Sodium chloride at 25 degrees C: chloride in mg/L, conductivity in mS/cm (molar
#: conductivities of a handbook, from memory). Between the points the line lies on
#: the side of more chloride, and four percent on top cover other chlorides (calcium
#: chloride) of the same conductivity.
_OTHER_CHLORIDES = 1.04
_SODIUM_CHLORIDE: tuple[tuple[float, float], ...] = tuple(
    (1000.0 * molar * ATOMIC_MASS["Cl"], molar * conductivity)
    for molar, conductivity in (
        (0.0, 126.4),
        (0.001, 123.7),
        (0.005, 120.6),
        (0.01, 118.5),
        (0.02, 115.7),
        (0.05, 111.0),
        (0.1, 106.7),
        (0.5, 93.6),
        (1.0, 85.8),
    )
)


def chloride_bound(conductivity_us_cm: float) -> float | None:
    """Return the most chloride that a conductivity allows, in mg/L.

    Parameters
    ----------
    conductivity_us_cm : float
        At 25 degrees C, in microsiemens per centimetre.

    Returns
    -------
    float or None
        Chloride if all dissolved salt were sodium chloride, with a small
        margin; None beyond the table (about 86 mS/cm).

    Notes
    -----
    Acid carries more current for its mass than salt, so a strongly acid or
    alkaline sample only makes the bound safer.

    Raises
    ------
    InputError
        Naming the field.
    """
    wrong = Problems()
    wrong.number("conductivity_us_cm", conductivity_us_cm, least=0)
    wrong.stop("No chloride can be estimated from this.")
    at = conductivity_us_cm / 1000.0
    for (low, before), (high, after) in pairwise(_SODIUM_CHLORIDE):
        if at <= after:
            return _OTHER_CHLORIDES * (low + (high - low) * (at - before) / (after - before))
    return None


@dataclass(frozen=True)
class ChlorideGate:
    """Whether a tube's mercury masks its chloride.

    Parameters
    ----------
    basis : {"recorded", "bounded by conductivity", "unknown"}
        How chloride is known.
    after_dilution : float or None
        Chloride in what goes into the tube, or its upper bound, mg/L.
    limit : float
        That the recipe masks, mg/L.
    verdict : {"open", "flagged", "closed", "unknown"}
        Open; open with a flag; dilute first; not known.
    needed_factor : float or None
        Smallest dilution factor that opens the gate; 1 when none is needed
        or nothing is known, None when no dilution does.
    words : str
        For the analyst.
    """

    basis: Literal["recorded", "bounded by conductivity", "unknown"]
    after_dilution: float | None
    limit: float
    verdict: Literal["open", "flagged", "closed", "unknown"]
    needed_factor: float | None
    words: str


def chloride_gate(
    limit: float,
    dilution_factor: float = 1.0,
    chloride: float | None = None,
    conductivity_us_cm: float | None = None,
    sign: Sign = "=",
) -> ChlorideGate:
    """Judge chloride after dilution.

    Parameters
    ----------
    limit : float
        Chloride limit of the recipe, mg/L in the tube's sample.
    dilution_factor : float
        At least 1.
    chloride : float, optional
        Measured in the undiluted sample, mg/L.
    conductivity_us_cm : float, optional
        Of the undiluted sample; used when chloride was not measured.
    sign : {"=", "<", ">"}
        What a strip says of ``chloride``: about so much, less, or more.

    Returns
    -------
    ChlorideGate

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    wrong = Problems()
    wrong.number("limit", limit, least=0)
    wrong.number("dilution_factor", dilution_factor, least=1)
    if chloride is not None:
        wrong.number("chloride", chloride, least=0)
    wrong.stop("Chloride cannot be judged from this.")
    if chloride is not None:
        if (open_ended := _open_ended(limit, dilution_factor, chloride, sign)) is not None:
            return open_ended
        return _recorded(limit, dilution_factor, chloride, _SIGN_WORDS[sign])
    bound = None if conductivity_us_cm is None else chloride_bound(conductivity_us_cm)
    if bound is not None and bound / dilution_factor <= limit:
        after = bound / dilution_factor
        words = f"By conductivity the tube holds at most {after:.0f} mg/L chloride; the limit is {limit:.0f}."
        return ChlorideGate("bounded by conductivity", after, limit, "open", 1.0, words)
    words = (
        "Chloride is unknown: measure it, or bound it by conductivity."
        if conductivity_us_cm is None
        else "Conductivity is too high to exclude chloride over the limit: measure chloride."
    )
    after_bound = None if bound is None else bound / dilution_factor
    return ChlorideGate("unknown", after_bound, limit, "unknown", 1.0, words)


def _open_ended(limit: float, factor: float, chloride: float, sign: Sign) -> ChlorideGate | None:
    """Return the gate where a strip's bound leaves it open which side of the limit chloride is on."""
    after = chloride / factor
    if sign == "=" or (sign == "<") == (after <= limit):
        return None
    words = (
        f"The strip says only that the tube holds {'less' if sign == '<' else 'more'} than {after:.0f} mg/L "
        f"chloride; the limit is {limit:.0f}: measure it nearer."
    )
    return ChlorideGate("recorded", after, limit, "unknown", 1.0, words)


def _recorded(limit: float, factor: float, chloride: float, lead: str) -> ChlorideGate:
    after = chloride / factor
    if after > limit:
        needed = chloride / limit if limit > 0 else None
        remedy = f"dilute at least {needed:.3g} times, or this" if needed else "this"
        words = (
            f"{lead}{after:.0f} mg/L chloride in the tube is more than the {limit:.0f} mg/L that the mercury "
            f"masks: {remedy} method does not determine the sample."
        )
        return ChlorideGate("recorded", after, limit, "closed", needed, words)
    if after > CHLORIDE_FLAG_MG_L:
        words = f"{lead}{after:.0f} mg/L chloride in the tube is masked; the result carries a flag for it."
        return ChlorideGate("recorded", after, limit, "flagged", 1.0, words)
    words = f"{lead}{after:.0f} mg/L chloride in the tube is within the limit of {limit:.0f} mg/L."
    return ChlorideGate("recorded", after, limit, "open", 1.0, words)


@dataclass(frozen=True)
class Qualifier:
    """A letter on a result, what it means and why it stands there.

    Parameters
    ----------
    letter, meaning, note : str
        The letters are our own.
    """

    letter: str
    meaning: str
    note: str


_CHLORIDE_QUALIFIERS = {
    "flagged": ("C", "chloride over 1000 mg/L in the tube, masked by mercury"),
    "closed": ("CX", "more chloride in the tube than its mercury masks: the result may be too high"),
    "unknown": ("CU", "chloride in the tube not known"),
}


def chloride_qualifier(gate: ChlorideGate) -> Qualifier | None:
    """Return the letter that a result carries for its chloride, or None where the gate was open.

    Parameters
    ----------
    gate : ChlorideGate
        At the dilution that was digested.

    Returns
    -------
    Qualifier or None
    """
    if gate.verdict == "open":
        return None
    letter, meaning = _CHLORIDE_QUALIFIERS[gate.verdict]
    return Qualifier(letter, meaning, gate.words)


def chloride_at_most(chloride: float) -> float:
    """Return the COD that chloride could feign without any mercury, in mg/L: a bound, never a correction."""
    return chloride * CHLORIDE.mg_o2_per_mg


@dataclass(frozen=True)
class Correction:
    """What one measured species accounts for.

    Parameters
    ----------
    name : str
        In words.
    concentration : float
        As given, mg/L of the sample.
    oxygen_demand : float
        mg O2/L.
    """

    name: str
    concentration: float
    oxygen_demand: float


@dataclass(frozen=True)
class Corrected:
    """A result beside what measured inorganic species account for.

    Parameters
    ----------
    uncorrected : float
        As measured; this is the reported one.
    corrections : tuple of Correction
        One a species.
    corrected : float
        For information, beside the uncorrected one.
    """

    uncorrected: float
    corrections: tuple[Correction, ...]
    corrected: float


def corrected_beside(cod: float, measured: Mapping[str, float]) -> Corrected:
    """Return a result with measured nitrite, ferrous iron and sulfide taken out, beside it as measured.

    Parameters
    ----------
    cod : float
        mg/L of the sample.
    measured : mapping of str to float
        Concentrations in mg/L by ``nitrite`` (as N), ``ferrous`` (as Fe) and
        ``sulfide`` (as S). Chloride is refused: with mercury in the tube it
        is never subtracted.

    Returns
    -------
    Corrected

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    wrong = Problems()
    wrong.number("cod", cod)
    for name, value in measured.items():
        if name == "chloride":
            wrong.add(
                name, "is never subtracted where mercury is in the tube: dilute under the limit instead"
            )
        elif name not in CORRECTABLE:
            wrong.add(name, f"no correction is known; known are {', '.join(CORRECTABLE)}")
        else:
            wrong.number(name, value, least=0)
    wrong.stop("No corrected value can be given.")
    corrections = tuple(
        Correction(CORRECTABLE[name].name, value, value * CORRECTABLE[name].mg_o2_per_mg)
        for name, value in measured.items()
    )
    return Corrected(cod, corrections, cod - sum(c.oxygen_demand for c in corrections))


def sulfamic_acid_mg(nitrite_n: float, sample_ml: float) -> float:
    """Return the sulfamic acid for one tube, in mg.

    Parameters
    ----------
    nitrite_n : float
        Nitrite nitrogen in what goes into the tube, mg/L.
    sample_ml : float
        Sample in the tube.

    Returns
    -------
    float
        Ten milligrams per milligram of nitrogen; the blanks take as much.
    """
    return SULFAMIC_ACID_PER_NITRITE_N * nitrite_n * sample_ml / 1000.0
