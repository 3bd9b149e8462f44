"""Papers of the stores: preparation sheet of a recipe, label of a reagent lot."""

from __future__ import annotations

import sqlite3
from typing import Any

from flask import Response
from flask_smorest import Blueprint
from marshmallow import fields, validate

from app import verbs
from app.documents.preparation import PreparationData, render_preparation
from app.documents.reagent_label import ReagentLabelData, render_reagent_label
from app.errors import InputError
from app.records import change
from app.records.laboratory import recipe_input
from app.safety.hazards import AGENTS, STATEMENTS
from app.web.context import context
from app.web.papers import PaperSchema, now_text, pdf, programme_of, record
from app.web.sessions import need

blueprint = Blueprint("store_papers", __name__, url_prefix="/api/papers", description="Papers of the stores")

LABELLED = ("H272", "H290", "H300", "H310", "H314", "H330", "H340", "H350", "H372", "H410")


def _volume() -> fields.Float:
    return fields.Float(load_default=0.0, validate=validate.Range(min=0, max=1e6))


def _purity() -> fields.Float:
    return fields.Float(load_default=1.0, validate=validate.Range(min=0, max=1, min_inclusive=False))


class PreparationSchema(PaperSchema):
    """Wanted volumes, purities and the standards to make."""

    digestion_ml = _volume()
    acid_ml = _volume()
    dichromate = _purity()
    mercury_sulfate = _purity()
    silver_sulfate = _purity()
    phthalate = _purity()
    stock = fields.Float(load_default=None, validate=validate.Range(min=0, max=1e5, min_inclusive=False))
    stock_ml = fields.Float(load_default=1000.0, validate=validate.Range(min=1, max=1e5))
    levels = fields.String(load_default="", validate=validate.Length(max=200))


class PreparationAnswer(PaperSchema):
    """What the verb ``preparation`` answers."""

    weigh = fields.List(fields.Dict())
    stock = fields.Dict(allow_none=True)
    standards = fields.List(fields.Dict())


def _levels(text: str) -> list[float]:
    try:
        return [float(part) for part in text.split(",") if part.strip()]
    except ValueError:
        raise InputError(
            "The levels are numbers with commas between.", {"levels": ["such as 0,50,100"]}
        ) from None


def _sheet(connection: sqlite3.Connection, recipe_id: str, given: dict[str, Any]) -> change.Body:
    recipe = record(connection, "recipe", recipe_id)
    stock = given["stock"] and {"cod": given["stock"], "volume_ml": given["stock_ml"]}
    names = ("dichromate", "mercury_sulfate", "silver_sulfate", "phthalate")
    return verbs.find("preparation")(
        {
            "recipe": recipe_input(recipe),
            "digestion_solution_ml": given["digestion_ml"],
            "acid_reagent_ml": given["acid_ml"],
            "digestion_acid_ml_per_l": recipe.get("digestion_acid_ml_per_l") or 0.0,
            "purity": {name: given[name] for name in names},
            "stock": stock or None,
            "levels": _levels(given["levels"]) if stock else [],
        }
    )


@blueprint.route("/preparation/<recipe_id>")
@need()
@blueprint.arguments(PreparationSchema, location="query")
@blueprint.response(200, PreparationAnswer)
def preparation(given: dict[str, Any], recipe_id: str) -> change.Body:
    """What to weigh and measure, as data."""
    return _sheet(context().store.read(), recipe_id, given)


@blueprint.route("/preparation/<recipe_id>.pdf")
@need()
@blueprint.arguments(PreparationSchema, location="query")
@blueprint.response(200, content_type="application/pdf")
def preparation_paper(given: dict[str, Any], recipe_id: str) -> Response:
    """What to weigh and measure, to print."""
    connection = context().store.read()
    recipe, programme = record(connection, "recipe", recipe_id), programme_of(connection)
    stock = f"{given['stock']:g} mg/L in {given['stock_ml']:g} mL" if given["stock"] else ""
    data = PreparationData(
        recipe=recipe["name"],
        source=recipe["source"],
        programme=programme["name"],
        laboratory=programme["laboratory"],
        zone=programme["zone"],
        made_at=now_text(),
        sheet=_sheet(connection, recipe_id, given),
        stock=stock,
        example=programme["example"],
    )
    return pdf(render_preparation(data, given["paper"]), "preparation")


def _hazards() -> tuple[str, ...]:
    bench = {code for agent in AGENTS if agent.place == "bench" for code in agent.statements}
    return tuple(f"{STATEMENTS[code]} ({code})" for code in LABELLED if code in bench)


@blueprint.route("/lot/<lot_id>.pdf")
@need()
@blueprint.arguments(PaperSchema, location="query")
@blueprint.response(200, content_type="application/pdf")
def reagent_label(given: dict[str, Any], lot_id: str) -> Response:
    """The labels of a reagent lot."""
    connection = context().store.read()
    lot, programme = record(connection, "lot", lot_id), programme_of(connection)
    told = [lot.get("standardised_on") or "", lot.get("standardised", "")]
    data = ReagentLabelData(
        lot=lot["name"],
        recipe=record(connection, "recipe", lot["recipe"])["name"],
        made_on=lot["made_on"],
        expires_on=lot["expires_on"],
        origin=lot.get("origin", "made"),
        standardised=" ".join(part for part in told if part),
        hazards=_hazards(),
        laboratory=programme["laboratory"],
        zone=programme["zone"],
        made_at=now_text(),
        example=programme["example"],
    )
    return pdf(render_reagent_label(data, given["paper"]), "reagent-label")
