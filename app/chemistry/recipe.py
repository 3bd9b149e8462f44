"""A recipe and everything that follows from it.

Volumes and concentrations of one digestion chemistry are typed; capacity,
chloride limit, metals and acid are derived, never typed, because each depends
on all of them. Half reactions:

    Cr2O7(2-) + 14 H+ + 6 e- -> 2 Cr(3+) + 7 H2O,   O2 + 4 H+ + 4 e- -> 2 H2O,

so one dichromate stands for one and a half O2. Mercury(II) sulfate masks
chloride up to a tenth of its own mass (EPA 410.3; Standard Methods 5220 A: 1 g
for 50 mL at 2000 mg/L). Every published range ends at 83 to 90 % of the
capacity; a stated range that goes further is a typing error or a risk.

Grams per litre of potassium dichromate and mercury(II) sulfate are per litre of
digestion solution, silver sulfate per litre of acid reagent. EPA 410.4 prints
its digestion solution for 500 mL: :func:`per_litre` exists for that trap.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from app.chemistry.atoms import ATOMIC_MASS, DICHROMATE, MERCURY_SULFATE, OXYGEN, SILVER_SULFATE
from app.chemistry.problems import Problems, in_words

Response = Literal["rises", "falls"]

#: Share of the capacity up to which a range may be stated.
USABLE_SHARE = 0.9
#: Mercury(II) sulfate needed for one part of chloride, by mass.
MERCURY_SULFATE_PER_CHLORIDE = 10.0
#: Chromium(III) is read where absorbance rises with COD, dichromate where it falls, in nm.
RISING_NM = (580.0, 640.0)
FALLING_NM = (400.0, 460.0)
#: Slopes that stoichiometry and real tubes allow at 600 to 620 nm, in mg/L per AU,
#: for 2.5 mL of sample in 7.5 mL (17 to 25 L/mol cm per chromium(III), 1.0 to 1.4 cm,
#: with a margin; practice).
SLOPE_BAND_MG_L_PER_AU = (1400.0, 4000.0)
SLOPE_BAND_SAMPLE_SHARE = 2.5 / 7.5

#: Common practice, without a source: how the test is usually run.
COMMON_PRACTICE_HOURS = 2.0
COMMON_PRACTICE_C = 150.0
COMMON_PRACTICE_TUBE_ML = (2.5, 1.5, 3.5)
COMMON_PRACTICE_HIGH_NM = 600.0
COMMON_PRACTICE_LOW_NM = 420.0
COMMON_PRACTICE_REPLICATES = 3


@dataclass(frozen=True)
class Recipe:
    """One digestion chemistry, as mixed and pipetted.

    Parameters
    ----------
    sample_ml, digestion_solution_ml, acid_reagent_ml : float
        What goes into one tube.
    dichromate_g_per_l, mercury_sulfate_g_per_l : float
        K2Cr2O7 and HgSO4 in the digestion solution.
    silver_sulfate_g_per_l : float
        Ag2SO4 in the acid reagent.
    wavelength_nm : float
        Where the tubes are read.
    """

    sample_ml: float
    digestion_solution_ml: float
    acid_reagent_ml: float
    dichromate_g_per_l: float
    mercury_sulfate_g_per_l: float
    silver_sulfate_g_per_l: float
    wavelength_nm: float

    def __post_init__(self) -> None:
        """Refuse volumes and strengths that no tube can have.

        Raises
        ------
        InputError
            Naming every wrong field.
        """
        wrong = Problems()
        for name in ("sample_ml", "digestion_solution_ml", "acid_reagent_ml"):
            wrong.number(name, getattr(self, name), least=0.001, most=1000)
        wrong.number("dichromate_g_per_l", self.dichromate_g_per_l, least=0.001, most=1000)
        wrong.number("mercury_sulfate_g_per_l", self.mercury_sulfate_g_per_l, least=0, most=1000)
        wrong.number("silver_sulfate_g_per_l", self.silver_sulfate_g_per_l, least=0, most=1000)
        wrong.number("wavelength_nm", self.wavelength_nm, least=190, most=1100)
        wrong.stop("This is no recipe yet.")

    @property
    def tube_volume_ml(self) -> float:
        """What one tube holds before mixing contracts it (about 6 %)."""
        return self.sample_ml + self.digestion_solution_ml + self.acid_reagent_ml

    @property
    def oxidant_capacity(self) -> float:
        """COD that would use up all the dichromate of a tube, in mg O2/L."""
        dichromate_mmol = self.dichromate_g_per_l * self.digestion_solution_ml / DICHROMATE
        return dichromate_mmol * 1.5 * OXYGEN / self.sample_ml * 1000.0

    @property
    def chloride_limit(self) -> float:
        """Chloride in the tube's sample that the mercury masks, in mg/L."""
        mercury_sulfate_mg = self.mercury_sulfate_g_per_l * self.digestion_solution_ml
        return mercury_sulfate_mg / MERCURY_SULFATE_PER_CHLORIDE / self.sample_ml * 1000.0

    @property
    def response(self) -> Response | None:
        """How absorbance goes with COD at this wavelength; None where neither colour is usually read."""
        if RISING_NM[0] <= self.wavelength_nm <= RISING_NM[1]:
            return "rises"
        if FALLING_NM[0] <= self.wavelength_nm <= FALLING_NM[1]:
            return "falls"
        return None


@dataclass(frozen=True)
class Metals:
    """Metal in one tube.

    Parameters
    ----------
    mercury, chromium, silver : float
        mg of the element.
    """

    mercury: float
    chromium: float
    silver: float


@dataclass(frozen=True)
class RecipeSums:
    """What follows from a recipe.

    Parameters
    ----------
    oxidant_capacity, chloride_limit : float
        mg O2/L and mg Cl/L of what goes into the tube.
    tube_volume_ml : float
        Parts added, before contraction.
    per_tube_mg : Metals
        Metals of one tube.
    per_tube_acid_ml : float
        Acid reagent of one tube.
    response : str or None
        ``rises``, ``falls``, or None at an unusual wavelength.
    warnings : tuple of str
        Sentences for the person who typed the recipe.
    """

    oxidant_capacity: float
    chloride_limit: float
    tube_volume_ml: float
    per_tube_mg: Metals
    per_tube_acid_ml: float
    response: Response | None
    warnings: tuple[str, ...]


def derive(recipe: Recipe, working_range: tuple[float, float] | None = None) -> RecipeSums:
    """Derive capacity, limits, metals and warnings of a recipe.

    Parameters
    ----------
    recipe : Recipe
        Volumes, strengths, wavelength.
    working_range : tuple of float, optional
        Lower and upper end in mg/L in the tube, to be checked against the
        capacity.

    Returns
    -------
    RecipeSums

    Examples
    --------
    >>> sums = derive(Recipe(2.5, 1.5, 3.5, 10.216, 33.3, 10.12, 600))
    >>> round(sums.oxidant_capacity), round(sums.chloride_limit)
    (1000, 1998)
    """
    digestion, acid = recipe.digestion_solution_ml, recipe.acid_reagent_ml
    metals = Metals(
        mercury=recipe.mercury_sulfate_g_per_l * digestion * ATOMIC_MASS["Hg"] / MERCURY_SULFATE,
        chromium=recipe.dichromate_g_per_l * digestion * 2 * ATOMIC_MASS["Cr"] / DICHROMATE,
        silver=recipe.silver_sulfate_g_per_l * acid * 2 * ATOMIC_MASS["Ag"] / SILVER_SULFATE,
    )
    return RecipeSums(
        recipe.oxidant_capacity,
        recipe.chloride_limit,
        recipe.tube_volume_ml,
        metals,
        acid,
        recipe.response,
        tuple(_recipe_warnings(recipe)) + range_warnings(recipe, working_range),
    )


def _recipe_warnings(recipe: Recipe) -> list[str]:
    words = []
    if recipe.mercury_sulfate_g_per_l == 0:
        words.append(
            "Without mercury(II) sulfate no chloride is masked: each mg of chloride can read as 0.226 mg."
        )
    if recipe.silver_sulfate_g_per_l == 0:
        words.append("Without silver sulfate straight-chain aliphatics are oxidised only in part.")
    if recipe.response is None:
        nm = in_words(recipe.wavelength_nm)
        words.append(f"{nm} nm is neither near 600 nm (rising) nor near 420 to 440 nm (falling).")
    return words


def range_warnings(recipe: Recipe, working_range: tuple[float, float] | None) -> tuple[str, ...]:
    """Say whether a working range reaches further than the recipe carries.

    Parameters
    ----------
    recipe : Recipe
        The chemistry.
    working_range : tuple of float or None
        Lower and upper end in mg/L in the tube.

    Returns
    -------
    tuple of str
        Empty when the range is sound.
    """
    if working_range is None:
        return ()
    top, capacity = working_range[1], recipe.oxidant_capacity
    if top > capacity:
        return (
            f"The range ends at {in_words(top)} mg/L, beyond the {capacity:.0f} mg/L that the dichromate "
            "can oxidise. Were the grams perhaps given for 500 mL?",
        )
    if top > USABLE_SHARE * capacity:
        return (
            f"The range ends at {in_words(top)} mg/L, above 90 % of the capacity ({capacity:.0f} mg/L): "
            f"readings over {USABLE_SHARE * capacity:.0f} mg/L count as over range.",
        )
    return ()


def usable_top(recipe: Recipe, working_range: tuple[float, float]) -> float:
    """Return the COD in the tube above which a reading is over range.

    Parameters
    ----------
    recipe : Recipe
        The chemistry.
    working_range : tuple of float
        Lower and upper end in mg/L in the tube.

    Returns
    -------
    float
        The lower of the range's top and 0.9 times the capacity.
    """
    return min(working_range[1], USABLE_SHARE * recipe.oxidant_capacity)


def slope_band(recipe: Recipe) -> tuple[float, float]:
    """Return the plausible slopes at 600 nm for this tube, in mg/L per AU.

    Chromium(III) in the tube, hence absorbance, is proportional to the share
    of sample in it; the band for 2.5 mL in 7.5 mL is scaled by that share.

    Parameters
    ----------
    recipe : Recipe
        The chemistry.

    Returns
    -------
    tuple of float
    """
    scale = SLOPE_BAND_SAMPLE_SHARE / (recipe.sample_ml / recipe.tube_volume_ml)
    return SLOPE_BAND_MG_L_PER_AU[0] * scale, SLOPE_BAND_MG_L_PER_AU[1] * scale


def chromium_mmol_per_l(recipe: Recipe, cod: float) -> float:
    """Return the chromium(III) in the tube after a COD was oxidised.

    Parameters
    ----------
    recipe : Recipe
        The chemistry.
    cod : float
        mg O2/L of what went into the tube.

    Returns
    -------
    float
        mmol/L of the mixed volumes, contraction neglected as the standards
        neglect it too.
    """
    return cod * recipe.sample_ml / recipe.tube_volume_ml / OXYGEN * 4.0 / 3.0


def per_litre(grams: float, final_volume_ml: float) -> float:
    """Return g/L for grams made up to a final volume.

    Parameters
    ----------
    grams : float
        As printed by the method.
    final_volume_ml : float
        The volume they are made up to; EPA 410.4 prints 500 mL.

    Returns
    -------
    float

    Raises
    ------
    InputError
        Naming the field.
    """
    wrong = Problems()
    wrong.number("grams", grams, least=0)
    wrong.number("final_volume_ml", final_volume_ml, above=0)
    wrong.stop("No strength follows from this.")
    return grams / final_volume_ml * 1000.0
