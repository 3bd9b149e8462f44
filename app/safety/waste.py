"""What a run leaves behind: mercury, chromium, silver and acid from recipe times tubes.

Mass follows from concentration and volume alone, so nothing is weighed and
nothing forgotten. Process knowledge suffices to call the digest hazardous
(40 CFR 262.11); the determination remains the generator's. Thresholds, clocks
and categories are settings; the federal numbers are their defaults and are
shown as such, and state and local rules decide.

Volume and mass count the liquid only. What a tube of glass adds is left to the
programme's own container record.

References
----------
40 CFR 261.22 and 261.24 (characteristics), 268.40 (mercury subcategories).
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, fields

from app.chemistry.recipe import Recipe, derive
from app.errors import InputError

SILVER_IN_SULFATE = 0.691923
SULFURIC_ACID_G_PER_MOL = 98.079


@dataclass(frozen=True)
class Assumptions:
    """What the recipe does not say about its liquids; settings, printed with the totals.

    Parameters
    ----------
    acid_density_g_ml, acid_assay : float
        Concentrated sulfuric acid.
    digestion_acid_ml_per_l : float
        Concentrated acid in a litre of digestion solution (EPA 410.4 and
        Standard Methods 5220 D: 167 mL; from memory).
    digestion_density_g_ml, sample_density_g_ml : float
        Of the digestion solution and the sample.
    """

    acid_density_g_ml: float = 1.84
    acid_assay: float = 0.96
    digestion_acid_ml_per_l: float = 167.0
    digestion_density_g_ml: float = 1.20
    sample_density_g_ml: float = 1.00


@dataclass(frozen=True)
class PerTube:
    """What one tube holds, by its recipe.

    Parameters
    ----------
    mercury_mg, chromium_mg, silver_mg : float
        Metals.
    sample_ml, digestion_solution_ml, acid_reagent_ml : float
        Volumes.
    """

    mercury_mg: float
    chromium_mg: float
    silver_mg: float
    sample_ml: float
    digestion_solution_ml: float
    acid_reagent_ml: float


@dataclass(frozen=True)
class Totals:
    """What some tubes leave behind; totals add with ``+``.

    Parameters
    ----------
    tubes : int
        Number of tubes.
    mercury_mg, chromium_mg, silver_mg : float
        Metals.
    acid_reagent_ml : float
        Acid reagent, by the recipe.
    concentrated_acid_ml, sulfuric_acid_g : float
        Concentrated acid of reagent and digestion solution together, and the
        sulfuric acid in it.
    volume_ml, mass_g : float
        Of the liquid.
    """

    tubes: int = 0
    mercury_mg: float = 0.0
    chromium_mg: float = 0.0
    silver_mg: float = 0.0
    acid_reagent_ml: float = 0.0
    concentrated_acid_ml: float = 0.0
    sulfuric_acid_g: float = 0.0
    volume_ml: float = 0.0
    mass_g: float = 0.0

    def __add__(self, other: Totals) -> Totals:
        """Add two totals."""
        return Totals(*(getattr(self, f.name) + getattr(other, f.name) for f in fields(self)))


def per_tube(recipe: Recipe) -> PerTube:
    """Return what one tube of a recipe holds.

    Parameters
    ----------
    recipe : app.chemistry.recipe.Recipe
        The recipe version of the run.

    Returns
    -------
    PerTube
    """
    metals = derive(recipe).per_tube_mg
    return PerTube(
        metals.mercury,
        metals.chromium,
        metals.silver,
        recipe.sample_ml,
        recipe.digestion_solution_ml,
        recipe.acid_reagent_ml,
    )


def totals(tube: PerTube, tubes: int, assumed: Assumptions | None = None) -> Totals:
    """Return what a number of tubes of one recipe leaves behind.

    Parameters
    ----------
    tube : PerTube
        From the recipe version of the run.
    tubes : int
        Every tube that was filled, blanks and standards too.
    assumed : Assumptions, optional
        The programme's settings.

    Returns
    -------
    Totals

    Raises
    ------
    InputError
        If a number is negative or not finite.
    """
    wrong = {
        f.name: ["must be zero or more"]
        for f in fields(tube)
        if not math.isfinite(getattr(tube, f.name)) or getattr(tube, f.name) < 0
    }
    if isinstance(tubes, bool) or tubes < 0:
        wrong["tubes"] = ["must be zero or more"]
    if wrong:
        raise InputError("No waste can be counted from this.", wrong)
    a = assumed or Assumptions()
    acid_ml = tube.acid_reagent_ml + tube.digestion_solution_ml * a.digestion_acid_ml_per_l / 1000.0
    mass_g = (
        tube.sample_ml * a.sample_density_g_ml
        + tube.digestion_solution_ml * a.digestion_density_g_ml
        + tube.acid_reagent_ml * a.acid_density_g_ml
        + tube.silver_mg / SILVER_IN_SULFATE / 1000.0
    )
    volume_ml = tube.sample_ml + tube.digestion_solution_ml + tube.acid_reagent_ml
    return Totals(
        tubes,
        tubes * tube.mercury_mg,
        tubes * tube.chromium_mg,
        tubes * tube.silver_mg,
        tubes * tube.acid_reagent_ml,
        tubes * acid_ml,
        tubes * acid_ml * a.acid_density_g_ml * a.acid_assay,
        tubes * volume_ml,
        tubes * mass_g,
    )


def whole_tubes_within(tube: PerTube, *, mass_kg: float | None = None, volume_l: float | None = None) -> int:
    """Return how many whole tubes fit within a mass, a volume or both.

    Parameters
    ----------
    tube : PerTube
        One recipe.
    mass_kg, volume_l : float, optional
        At least one of the two.

    Returns
    -------
    int
    """
    one = totals(tube, 1)
    counts = []
    if mass_kg is not None:
        counts.append(mass_kg * 1000.0 / one.mass_g)
    if volume_l is not None:
        counts.append(volume_l * 1000.0 / one.volume_ml)
    if not counts:
        raise InputError("Give a mass or a volume.", {"mass_kg": ["give a mass or a volume"]})
    return math.floor(min(counts) + 1e-9)


@dataclass(frozen=True)
class Characteristic:
    """One hazardous waste code and why it applies.

    Parameters
    ----------
    code : str
        For example "D009".
    words : str
        What it stands for.
    found, threshold : float
        Estimate and threshold in ``unit``.
    unit : str
        mg/L, or mol/L of acid.
    """

    code: str
    words: str
    found: float
    threshold: float
    unit: str


TOXICITY: tuple[tuple[str, str, str, float], ...] = (
    ("D007", "chromium", "chromium_mg", 5.0),
    ("D009", "mercury", "mercury_mg", 0.2),
    ("D011", "silver", "silver_mg", 5.0),
)
ACID_MOL_L_AT_PH_2 = 0.01


def waste_codes(waste: Totals) -> tuple[Characteristic, ...]:
    """Return the characteristic codes that the recipe alone makes likely.

    Parameters
    ----------
    waste : Totals
        Of a run or a container, with a volume above zero.

    Returns
    -------
    tuple of Characteristic
        D002 by the acid (pH 2 or less), D007, D009 and D011 at or above the
        thresholds of 40 CFR 261.24; the liquid itself counts as the extract.
    """
    if waste.volume_ml <= 0:
        raise InputError("An empty container has no code.", {"volume_ml": ["must be above zero"]})
    litres = waste.volume_ml / 1000.0
    acid = waste.sulfuric_acid_g / SULFURIC_ACID_G_PER_MOL / litres
    found = []
    if acid >= ACID_MOL_L_AT_PH_2:
        found.append(Characteristic("D002", "corrosive, pH 2 or less", acid, ACID_MOL_L_AT_PH_2, "mol/L"))
    for code, metal, name, threshold in TOXICITY:
        level = getattr(waste, name) / litres
        if level >= threshold:
            found.append(Characteristic(code, f"toxic for {metal}", level, threshold, "mg/L"))
    return tuple(found)


def mercury_mg_per_kg(waste: Totals) -> float:
    """Return the mercury content; 260 mg/kg and more is "high mercury" for nonwastewaters (40 CFR 268.40)."""
    if waste.mass_g <= 0:
        raise InputError("Nothing has no content.", {"mass_g": ["must be above zero"]})
    return waste.mercury_mg / (waste.mass_g / 1000.0)


def sum_totals(parts: Iterable[Totals]) -> Totals:
    """Return the sum of totals of runs with different recipes."""
    whole = Totals()
    for part in parts:
        whole = whole + part
    return whole
