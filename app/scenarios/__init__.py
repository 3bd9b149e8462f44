"""Invented programmes from ``seed_scenarios/``, told to a store as if they had happened.

A scenario is a folder: ``programme.json`` (people, places, limits, recipes,
stores), ``history.csv`` (results of two years, in days before the present) and
``story.json`` (the last days, statement by statement, in hours before the
present), so that the example is always of today. It is told through the one
write path with a clock of its own: the journal of an example is a journal
like any other.
"""

from __future__ import annotations

import csv
import json
from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from app.journal import chain
from app.journal.kinds.settings import DEFAULTS
from app.journal.store import Store, StoreError
from app.records.ledger import Ledger, Writing
from app.scenarios.teller import Clock, Teller

FOLDER = Path(__file__).resolve().parents[2] / "seed_scenarios"
BEGINNING_H = -900 * 24.0

Statement = tuple[float, str, str, str, dict[str, Any]]


def load(store: Store, name: str = "esker_valley", now: datetime | None = None) -> None:
    """Fill an empty store with a scenario.

    Parameters
    ----------
    store : Store
        Must hold nothing yet.
    name : str
        A folder of ``seed_scenarios/``.
    now : datetime, optional
        The present of the story; the real one when absent.

    Raises
    ------
    StoreError
        If the store holds entries already.
    """
    folder = FOLDER / name
    told = json.loads((folder / "programme.json").read_text(encoding="utf-8"))
    clock = Clock(now or datetime.now(UTC))
    with Ledger(store, clock).transaction() as writing:
        if chain.head(writing.connection).position:
            raise StoreError("The example needs an empty store; nothing was changed.")
        _begin(writing, clock, told)
        teller = Teller(writing, clock, told["programme"]["zone"])
        for statement in _statements(folder, told):
            teller.tell(*statement)
        clock.set(0)


def _statements(folder: Path, told: dict[str, Any]) -> Iterator[Statement]:
    yield from _setting_up(told)
    yield from _history(folder / "history.csv", _who(told, "coordinator"))
    yield from _story(folder / "story.json")


def _begin(writing: Writing, clock: Clock, told: dict[str, Any]) -> None:
    clock.set(BEGINNING_H)
    programme = told["programme"]
    body = {
        "name": programme["name"],
        "laboratory": programme["laboratory"],
        "zone": programme["zone"],
        "units": "metric",
        "example": True,
        "settings": DEFAULTS | {"address": programme["address"]},
    }
    writing.state("programme.started", "programme", body)
    for person in told["people"]:
        writing.state("person.added", person["id"], {"name": person["name"], "roles": person["roles"]})


def _who(told: dict[str, Any], role: str) -> str:
    return next(str(person["id"]) for person in told["people"] if role in person["roles"])


def _setting_up(told: dict[str, Any]) -> Iterator[Statement]:
    office, bench = _who(told, "coordinator"), _who(told, "analyst")
    for one in told["dischargers"]:
        body = {"name": one["name"], "sector": one["sector"], "address": one["address"]}
        yield BEGINNING_H, office, "discharger.registered", one["id"], body
        for point in one["points"]:
            yield from _point(office, one["id"], point)
    for recipe in told["recipes"]:
        body = {name: recipe[name] for name in recipe if name != "id"}
        yield BEGINNING_H, bench, "recipe.adopted", recipe["id"], body
    yield from _stores(bench, told)


def _point(office: str, discharger: str, point: dict[str, Any]) -> Iterator[Statement]:
    names = ("name", "access", "hazards", "sample_kind", "flow_device")
    body = {"discharger": discharger} | {name: point[name] for name in names}
    yield BEGINNING_H, office, "point.registered", point["id"], body
    for limit in point["limits"]:
        days = -float(limit["from_days_ago"])
        value = {"text": limit["value"], "unit": "mg/L"}
        body = {"basis": limit["basis"], "value": value, "from": f"@day{days:g}", "source": limit["source"]}
        yield max(BEGINNING_H, (days - 5) * 24), office, "limit.set", point["id"], body


def _stores(bench: str, told: dict[str, Any]) -> Iterator[Statement]:
    for lot in told["lots"]:
        made = -float(lot["made_days_ago"])
        body = {"recipe": lot["recipe"], "name": lot["name"], "made_on": f"@day{made:g}"}
        body["expires_on"] = f"@day{lot['expires_in_days']}"
        yield made * 24, bench, "lot.made", lot["id"], body
    for kind, things in (("instrument.added", "instruments"), ("container.opened", "containers")):
        for one in told[things]:
            yield BEGINNING_H, bench, kind, one["id"], {name: one[name] for name in one if name != "id"}
    for one in told["calibrations"]:
        body = {
            name: one[name] for name in ("recipe", "lot", "instrument", "wavelength_nm", "model", "standards")
        }
        body["valid_until"] = f"@day{one['valid_in_days']}"
        yield -24.0 * one["made_days_ago"], bench, "calibration.made", one["id"], body
        yield -24.0 * one["made_days_ago"] + 1, bench, "curve.checked", one["id"], one["check"]


def _history(path: Path, person: str) -> Iterator[Statement]:
    with path.open(encoding="utf-8", newline="") as file:
        for count, row in enumerate(csv.DictReader(file), start=1):
            hours = -24.0 * float(row["days_ago"])
            readings = {
                "conductivity_us_cm": {"text": row["conductivity"], "unit": "uS/cm"},
                "turbidity_ntu": {"text": row["turbidity"], "unit": "NTU"},
                "ph": {"text": row["ph"], "unit": "pH"},
            }
            body = {
                "point": row["point"],
                "collected_at": f"@{hours:.2f}",
                "cod": {"text": row["cod"], "unit": "mg/L"},
                "expanded_u": None,
                "field": readings,
                "activity": row["activity"],
                "source": "laboratory book",
            }
            yield hours + 48, person, "result.recorded", f"book-{count}", body


def _story(path: Path) -> Iterator[Statement]:
    for one in json.loads(path.read_text(encoding="utf-8")):
        yield one["hours"], one["by"], one["kind"], one["about"], one["body"]
