"""The verb ``preparation``: what to weigh, what to measure, and how to make the standards."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from marshmallow import ValidationError

from app.chemistry.preparation import Purity, phthalate_stock, preparation_sheet
from app.chemistry.problems import Problems
from app.chemistry.recipe import Recipe
from app.chemistry.standard_series import StandardSolution, standard_series
from app.errors import InputError, flatten
from app.verbs.chemistry_schemas import PreparationInput

Json = dict[str, Any]

_PREPARATION = PreparationInput()


def preparation_verb(value: Any) -> Json:
    """Answer ``preparation``."""
    try:
        data: Json = _PREPARATION.load(value)
    except ValidationError as error:
        raise InputError("No preparation sheet can be written.", flatten(error.messages)) from None
    purity, stock = Purity(**(data["purity"] or {})), data["stock"]
    recipe = Recipe(**data["recipe"])
    weigh = preparation_sheet(
        recipe,
        data["digestion_solution_ml"],
        data["acid_reagent_ml"],
        data["digestion_acid_ml_per_l"],
        purity,
    )
    levels = list(data["levels"])
    if levels and stock is None:
        wrong = Problems()
        wrong.add("stock", "is needed to make standards from")
        wrong.stop("No standards can be made.")
    made = standard_series(stock["cod"], levels) if stock else ()
    return {
        "weigh": [asdict(line) for line in weigh],
        "stock": asdict(phthalate_stock(stock["cod"], stock["volume_ml"], purity.phthalate))
        if stock
        else None,
        "standards": [_standard(one) for one in made],
    }


def _standard(one: StandardSolution) -> Json:
    portions = [{"pipettes_ml": list(p.pipettes_ml), "flask_ml": p.flask_ml} for p in one.portions]
    found = {"wanted": one.wanted, "cod": one.cod, "relative_u": one.relative_u, "words": one.words}
    return found | {"portions": portions}


VERBS = {"preparation": preparation_verb}
