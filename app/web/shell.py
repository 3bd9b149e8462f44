"""The client: one shell for every place, its files, its service worker."""

from __future__ import annotations

import hashlib
import json
from dataclasses import asdict
from functools import cache
from pathlib import Path

from flask import Blueprint, Response, jsonify, send_file

from app import __version__
from app.chemistry.recipe import COMMON_PRACTICE_C, COMMON_PRACTICE_HOURS
from app.chemistry.standard_recipes import STANDARD_RECIPES, TUBES_ML, StandardRecipe
from app.compliance import flow, meters
from app.journal.units import STATIC
from app.safety.pack import client_pack
from app.web.context import context
from app.web.security import NotFound

blueprint = Blueprint("shell", __name__)

_KINDS = {".js", ".css", ".html", ".json", ".svg", ".png", ".webmanifest"}
_OUTSIDE = {"sw.js", "index.html"}
_PICTURES = "pictures"
WORDS = "/words.json"


def shell_files(folder: Path = STATIC) -> list[str]:
    """Return the addresses of the client's files, in a fixed order."""
    found = (p.relative_to(folder) for p in sorted(folder.rglob("*")) if p.suffix in _KINDS)
    kept = (p.as_posix() for p in found if p.parts[0] != _PICTURES)
    return [f"/static/{name}" for name in kept if name not in _OUTSIDE]


def build_of(folder: Path = STATIC) -> str:
    """Return the digest that names this build of the client."""
    total = hashlib.sha256(words_text().encode())
    for path in sorted(p for p in folder.rglob("*") if p.suffix in _KINDS):
        total.update(path.relative_to(folder).as_posix().encode())
        total.update(path.read_bytes())
    return total.hexdigest()[:16]


@blueprint.get("/sw.js")
def service_worker() -> Response:
    """The service worker of this build: its name and the list of its files."""
    text = (STATIC / "sw.js").read_text(encoding="utf-8")
    text = text.replace('"__BUILD__"', json.dumps(context().build))
    text = text.replace("/*__SHELL__*/[]", json.dumps(["/", WORDS, *shell_files()]))
    return Response(text, mimetype="text/javascript", headers={"Cache-Control": "no-cache"})


@blueprint.get("/manifest.webmanifest")
def manifest() -> Response:
    """What makes the client installable."""
    return send_file(STATIC / "manifest.webmanifest", mimetype="application/manifest+json")


@blueprint.get(WORDS)
def words() -> Response:
    """Gates, hazards, emergency lines and published recipes: part of the client, without signing in."""
    headers = {"Cache-Control": "no-cache"}
    return Response(words_text(), mimetype="application/json", headers=headers)


@cache
def words_text() -> str:
    """Return the words, ratings and published recipes that are part of this build of the client."""
    recipes = [_form(one) for one in STANDARD_RECIPES]
    field = {"ratings": flow.ratings(), "acceptances": meters.acceptances()}
    bench = {"recipes": recipes, "tubes": {name: list(ml) for name, ml in TUBES_ML.items()}}
    return json.dumps({"weirbook": __version__, **client_pack(), **field, **bench})


def _form(one: StandardRecipe) -> dict[str, str]:
    """Return a published recipe as the texts of the form that adopts one; what is not stated stays blank."""
    numbers = {name: f"{value:.4g}" for name, value in asdict(one.recipe).items()}
    numbers["dichromate_g_per_l"] = f"{one.recipe.dichromate_g_per_l:.5g}"
    range_ = {"working_low": one.stated_low, "working_high": one.stated_top}
    told = {name: "" if value is None else f"{value:g}" for name, value in range_.items()}
    practice = {
        "temperature_c": f"{COMMON_PRACTICE_C:g}",
        "minutes": f"{60 * COMMON_PRACTICE_HOURS:g}",
    }
    practice["digestion_acid_ml_per_l"] = f"{one.digestion_acid_ml_per_l:g}"
    source = one.source
    if one.stated_chloride is not None:
        source += f" The method itself allows at most {one.stated_chloride:g} mg/L of chloride in the sample."
    return {"name": one.name, "source": source} | numbers | told | practice


@blueprint.get("/healthz")
def alive() -> Response:
    """The process runs."""
    return jsonify({"alive": True})


@blueprint.get("/readyz")
def ready() -> Response:
    """The store answers a write."""
    with context().store.write() as connection:
        connection.execute("INSERT OR REPLACE INTO meta VALUES ('probe', '1')")
    return jsonify({"ready": True})


@blueprint.get("/")
@blueprint.get("/<path:path>")
def shell(path: str = "") -> Response:
    """Every other address is a screen of the client."""
    if path.startswith(("api/", "static/")):
        raise NotFound("There is nothing under this address.")
    response = send_file(STATIC / "index.html", mimetype="text/html")
    response.headers["Cache-Control"] = "no-cache"
    return response
