"""Published recipes as data, each with its source.

Amounts are those of the method; capacity, chloride limit and metals follow
from them in :mod:`app.chemistry.recipe`. What was read in a public copy and
what is from memory stands in each ``source``: check it against the method's
own text before working from it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from app.chemistry.atoms import DICHROMATE, MERCURY_SULFATE
from app.chemistry.recipe import Recipe, per_litre


@dataclass(frozen=True)
class StandardRecipe:
    """A published recipe.

    Parameters
    ----------
    name : str
        The method and its range.
    source : str
        Where the amounts come from, and how far that was checked.
    recipe : Recipe
        For a 16 x 100 mm tube or the method's own vial.
    stated_low, stated_top : float or None
        The range that the method states, in mg/L; None where it leaves the
        low end to the laboratory.
    stated_chloride : float or None
        Chloride limit that the method states itself, where it is stricter
        than the mercury would allow.
    digestion_acid_ml_per_l : float
        Concentrated sulfuric acid in a litre of digestion solution.
    """

    name: str
    source: str
    recipe: Recipe
    stated_low: float | None
    stated_top: float
    stated_chloride: float | None = None
    digestion_acid_ml_per_l: float = 167.0


_SM_ACID = 5.5 * 1.84
_EPA_ACID = 22.0 / 4.09 * 1.84
_SM_HIGH = Recipe(2.5, 1.5, 3.5, 10.216, 33.3, _SM_ACID, 600.0)
_EPA = Recipe(2.5, 1.5, 3.5, per_litre(5.1, 500), per_litre(16.7, 500), _EPA_ACID, 600.0)
# ISO 15705 pipettes dichromate (0.50 mL) and mercury(II) sulfate (0.20 mL) apart.
_ISO_HIGH = Recipe(
    2.0, 0.7, 2.5, 0.1 * DICHROMATE * 0.5 / 0.7, 1.35 * MERCURY_SULFATE * 0.2 / 0.7, 12.0, 600.0
)
_ISO_LOW = replace(_ISO_HIGH, dichromate_g_per_l=0.015 * DICHROMATE * 0.5 / 0.7, wavelength_nm=440.0)

#: Published forms as data; capacity and limits follow from them.
STANDARD_RECIPES: tuple[StandardRecipe, ...] = (
    StandardRecipe(
        "Standard Methods 5220 D, high range",
        "Standard Methods 5220 D; a laboratory's slides after it. Acid reagent: 5.5 g Ag2SO4 per kg of acid, "
        "1.84 kg/L.",
        _SM_HIGH,
        50.0,
        900.0,
    ),
    StandardRecipe(
        "Standard Methods 5220 D, low range",
        "Standard Methods 5220 D, from memory: a tenth of the dichromate, read at 420 nm.",
        replace(_SM_HIGH, dichromate_g_per_l=1.022, wavelength_nm=420.0),
        None,
        90.0,
    ),
    StandardRecipe(
        "EPA 410.4, manual",
        "EPA 410.4 revision 2.0 (1993), 7.2 to 7.5 and 11.2: 5.1 g and 16.7 g in 500 mL; 22 g Ag2SO4 in "
        "4.09 kg of acid.",
        _EPA,
        20.0,
        900.0,
        digestion_acid_ml_per_l=168.0,
    ),
    StandardRecipe(
        "ISO 15705, high range",
        "ISO 15705:2002, volumes from its Mexican adoption, strengths from memory; dichromate and "
        "mercury(II) sulfate are pipetted apart and counted here as one digestion solution of 0.70 mL.",
        _ISO_HIGH,
        None,
        1000.0,
        1000.0,
        0.0,
    ),
    StandardRecipe(
        "ISO 15705, low range",
        "ISO 15705:2002, Annex D, strengths from memory; see the high range.",
        _ISO_LOW,
        None,
        150.0,
        1000.0,
        0.0,
    ),
)

#: Tubes of Standard Methods 5220 and EPA 410.4: mL of sample, digestion solution, acid reagent.
TUBES_ML: Mapping[str, tuple[float, float, float]] = {
    "16 x 100 mm": (2.5, 1.5, 3.5),
    "20 x 150 mm": (5.0, 3.0, 7.0),
    "25 x 150 mm": (10.0, 6.0, 14.0),
}


def in_tube(recipe: Recipe, tube: str) -> Recipe:
    """Return a recipe with the volumes of another standard tube.

    Parameters
    ----------
    recipe : Recipe
        The chemistry.
    tube : str
        A key of :data:`TUBES_ML`.

    Returns
    -------
    Recipe
        The same strengths; capacity and limits stay, metals scale.
    """
    scale = TUBES_ML[tube][0] / recipe.sample_ml
    return replace(
        recipe,
        sample_ml=recipe.sample_ml * scale,
        digestion_solution_ml=recipe.digestion_solution_ml * scale,
        acid_reagent_ml=recipe.acid_reagent_ml * scale,
    )
