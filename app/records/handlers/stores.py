"""What the laboratory works with: recipes, lots, instruments, containers, calibrations."""

from __future__ import annotations

from datetime import date
from typing import Any

from app.journal import measured
from app.records.change import Change, Refused
from app.records.handlers import handles

_NUMBERS = (
    "sample_ml",
    "digestion_solution_ml",
    "acid_reagent_ml",
    "dichromate_g_per_l",
    "mercury_sulfate_g_per_l",
    "silver_sulfate_g_per_l",
    "wavelength_nm",
    "working_low",
    "working_high",
    "temperature_c",
    "minutes",
)


@handles("recipe.adopted")
def recipe_adopted(change: Change) -> None:
    """A recipe; what follows from it comes as an entry of the server."""
    numbers: dict[str, Any] = {name: measured.read(change.body[name]).value for name in _NUMBERS}
    body = change.body | numbers
    if body["working_low"] >= body["working_high"]:
        raise Refused("wrong_range", "The working range's lower end must lie under its top.")
    body |= {"digestion_acid_ml_per_l": _acid(change.body), "tube": change.body.get("tube", "")}
    change.put("recipe", change.entry.about, body | {"derived": None})


def _acid(body: dict[str, Any]) -> float | None:
    text = body.get("digestion_acid_ml_per_l")
    return None if text is None else measured.read(text).value


@handles("recipe.derived")
def recipe_derived(change: Change) -> None:
    """Capacity, chloride limit and metals per tube, as the server computed them."""
    body = change.need("recipe", change.entry.about)
    change.update("recipe", change.entry.about, body | {"derived": change.body["derived"]})


@handles("lot.made")
def lot_made(change: Change) -> None:
    """A reagent batch of one recipe."""
    change.need("recipe", change.body["recipe"])
    if date.fromisoformat(change.body["expires_on"]) < date.fromisoformat(change.body["made_on"]):
        raise Refused("wrong_dates", "A lot cannot expire before it was made.")
    unsaid: dict[str, Any] = {"origin": "made", "standardised_on": None, "standardised": ""}
    body = unsaid | change.body
    change.put("lot", change.entry.about, body, parent=body["recipe"], at=body["made_on"])


@handles("instrument.added")
def instrument_added(change: Change) -> None:
    """An instrument."""
    change.put("instrument", change.entry.about, {"positions": None, **change.body, "checks": []})


@handles("container.opened")
def container_opened(change: Change) -> None:
    """An empty waste container."""
    body = {
        "name": change.body["name"],
        "capacity_ml": measured.read(change.body["capacity_ml"]).value,
        "filled_ml": 0.0,
        "mercury_mg": 0.0,
        "chromium_mg": 0.0,
        "silver_mg": 0.0,
        "acid_reagent_ml": 0.0,
        "sulfuric_acid_g": 0.0,
        "mass_g": 0.0,
        "tubes": 0,
        "runs": [],
        "opened_at": change.entry.at,
        "state": "in use",
        "moves": [],
        "clock": None,
    }
    change.put("container", change.entry.about, body)
