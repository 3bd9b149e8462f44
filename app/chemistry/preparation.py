"""What to weigh for a wanted volume of reagent or stock.

Masses follow from the recipe's strengths and are corrected for purity; every
line carries its caution, which names the hazard and the usual precaution and
defers to the safety data sheet, local codes and trained practice.
"""

from __future__ import annotations

from dataclasses import dataclass

from app.chemistry.oxygen_demand import oxygen_demand
from app.chemistry.problems import Problems
from app.chemistry.recipe import Recipe

PHTHALATE = "C8H5KO4"

DICHROMATE_CAUTION = (
    "Potassium dichromate is toxic, oxidising and causes cancer: gloves, goggles and hood. Dry it at 150 °C "
    "for two hours first. The safety data sheet, local codes and your training go before this line."
)
MERCURY_CAUTION = (
    "Mercury(II) sulfate is very toxic: weigh in the hood with gloves, and collect every rest as mercury "
    "waste. The safety data sheet, local codes and your training go before this line."
)
ACID_CAUTION = (
    "Concentrated sulfuric acid burns and heats violently with water: acid into water, slowly, cooled, "
    "behind a shield. The safety data sheet, local codes and your training go before this line."
)
SILVER_CAUTION = (
    "Silver sulfate dissolves in a day or two; the acid burns: hood, gloves, face shield. The safety data "
    "sheet, local codes and your training go before this line."
)
PHTHALATE_CAUTION = (
    "Crush lightly and dry to constant mass at 110 °C; keep the solution cold and discard at growth."
)


@dataclass(frozen=True)
class Weighing:
    """One line of a preparation sheet.

    Parameters
    ----------
    substance : str
        Name and formula.
    amount : float
        How much.
    unit : {"g", "mL"}
        Of the amount.
    into : str
        The solution it goes into.
    purity : float
        Mass fraction that was corrected for.
    caution : str
        Hazard and usual precaution.
    """

    substance: str
    amount: float
    unit: str
    into: str
    purity: float
    caution: str


@dataclass(frozen=True)
class Purity:
    """Mass fractions on the bottles.

    Parameters
    ----------
    dichromate, mercury_sulfate, silver_sulfate, phthalate : float
        Above zero, at most 1.
    """

    dichromate: float = 1.0
    mercury_sulfate: float = 1.0
    silver_sulfate: float = 1.0
    phthalate: float = 1.0


def _purity_problems(wrong: Problems, purity: Purity) -> None:
    for name in ("dichromate", "mercury_sulfate", "silver_sulfate", "phthalate"):
        wrong.number(f"purity.{name}", getattr(purity, name), above=0, most=1)


def preparation_sheet(
    recipe: Recipe,
    digestion_solution_ml: float,
    acid_reagent_ml: float,
    digestion_acid_ml_per_l: float,
    purity: Purity | None = None,
) -> tuple[Weighing, ...]:
    """Return what to weigh and measure for wanted volumes of both reagents.

    Parameters
    ----------
    recipe : Recipe
        Its strengths.
    digestion_solution_ml, acid_reagent_ml : float
        Wanted volumes; zero leaves a reagent out.
    digestion_acid_ml_per_l : float
        Concentrated sulfuric acid in a litre of digestion solution (167 in
        Standard Methods 5220 D, 168 in EPA 410.4).
    purity : Purity, optional
        Of the chemicals.

    Returns
    -------
    tuple of Weighing
        In order of use.

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    pure, wrong = purity or Purity(), Problems()
    wrong.number("digestion_solution_ml", digestion_solution_ml, least=0, most=1e6)
    wrong.number("acid_reagent_ml", acid_reagent_ml, least=0, most=1e6)
    wrong.number("digestion_acid_ml_per_l", digestion_acid_ml_per_l, least=0, most=1000)
    _purity_problems(wrong, pure)
    wrong.stop("No preparation sheet can be written.")
    digestion, acid = (
        f"{digestion_solution_ml:g} mL digestion solution",
        f"{acid_reagent_ml:g} mL acid reagent",
    )
    litres = digestion_solution_ml / 1000.0
    dichromate, mercury = recipe.dichromate_g_per_l * litres, recipe.mercury_sulfate_g_per_l * litres
    silver, sulfuric = recipe.silver_sulfate_g_per_l * acid_reagent_ml / 1000.0, "sulfuric acid, concentrated"
    lines = [
        _weigh("potassium dichromate, K2Cr2O7", dichromate, digestion, pure.dichromate, DICHROMATE_CAUTION),
        Weighing(sulfuric, digestion_acid_ml_per_l * litres, "mL", digestion, 1.0, ACID_CAUTION),
        _weigh("mercury(II) sulfate, HgSO4", mercury, digestion, pure.mercury_sulfate, MERCURY_CAUTION),
        _weigh("silver sulfate, Ag2SO4", silver, acid, pure.silver_sulfate, SILVER_CAUTION),
        Weighing(sulfuric, acid_reagent_ml, "mL", acid, 1.0, ACID_CAUTION),
    ]
    return tuple(line for line in lines if line.amount > 0)


def _weigh(substance: str, grams: float, into: str, purity: float, caution: str) -> Weighing:
    return Weighing(substance, grams / purity, "g", into, purity, caution)


def phthalate_stock(cod: float, volume_ml: float, purity: float = 1.0) -> Weighing:
    """Return the potassium hydrogen phthalate for a stock of known COD.

    Parameters
    ----------
    cod : float
        Wanted, mg O2/L.
    volume_ml : float
        Of the flask.
    purity : float
        Mass fraction.

    Returns
    -------
    Weighing

    Raises
    ------
    InputError
        Naming every wrong field.

    Examples
    --------
    >>> round(phthalate_stock(1000, 1000).amount, 5)
    0.85098
    """
    wrong = Problems()
    wrong.number("cod", cod, above=0)
    wrong.number("volume_ml", volume_ml, above=0)
    wrong.number("purity", purity, above=0, most=1)
    wrong.stop("No stock can be made from this.")
    grams = cod * volume_ml / 1e6 / oxygen_demand(PHTHALATE).oxygen_demand
    into = f"{volume_ml:g} mL stock"
    return _weigh("potassium hydrogen phthalate, C8H5KO4", grams, into, purity, PHTHALATE_CAUTION)
