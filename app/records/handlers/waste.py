"""Containers on their way out, the month's waste of the whole site, and instruments that were checked."""

from __future__ import annotations

from collections.abc import Callable
from datetime import date, datetime
from typing import Any
from zoneinfo import ZoneInfo

from app.chemistry import instruments
from app.errors import InputError
from app.journal import measured
from app.journal.kinds.settings import DEFAULTS
from app.records.change import Body, Change, Refused
from app.records.handlers import handles
from app.safety.accumulation import Generator, central_clock, month_total, satellite_clock

DIGEST = "spent COD digest"


def rules_of(change: Change) -> Generator:
    """Return the programme's thresholds of waste; the federal ones where it has none of its own."""
    settings: dict[str, Any] = change.find("programme")[0][1]["settings"]
    return Generator(**(DEFAULTS["waste"] | settings.get("waste", {})))


def day_of(change: Change) -> date:
    """Return the entry's day in the programme's zone."""
    zone = ZoneInfo(change.find("programme")[0][1]["zone"])
    return datetime.fromisoformat(change.entry.at).astimezone(zone).date()


def add_to_month(change: Change, on: date, stream: str, mass_kg: float, acute: bool = False) -> Body:
    """Add a mass to a month of the site and name the site's category anew."""
    id_ = on.isoformat()[:7]
    month = change.get("waste_month", id_) or {"streams_kg": {}, "acute_kg": 0.0}
    month["streams_kg"][stream] = month["streams_kg"].get(stream, 0.0) + mass_kg
    month["acute_kg"] += mass_kg if acute else 0.0
    rules = rules_of(change)
    total = month_total(month["streams_kg"], month["acute_kg"], rules=rules)
    month |= {"total_kg": total.total_kg, "category": total.category, "days": total.days, "note": total.note}
    change.put("waste_month", id_, month, at=id_)
    return month


@handles("waste.added")
def waste_added(change: Change) -> None:
    """Another stream of the site."""
    kg = (measured.value(change.body["mass"], "kg")) or 0.0
    on = date.fromisoformat(change.body["on"])
    add_to_month(change, on, change.body["stream"], kg, change.body["acute"])


def _clock(change: Change, container: Body) -> Body | None:
    """Return what is due of a container: by when it must move or be shipped."""
    body = change.body
    on, rules = date.fromisoformat(body["on"]), rules_of(change)
    if body["to"] == "over the limit":
        clock = satellite_clock(on, rules)
    elif body["to"] == "central accumulation":
        month = change.get("waste_month", body["on"][:7]) or {}
        days = month.get("days") or rules.small_days
        clock = central_clock(on, days)
    else:
        return None
    return {"due": clock.due.isoformat(), "remind_on": clock.remind_on.isoformat(), "words": clock.words}


@handles("container.moved")
def container_moved(change: Change) -> None:
    """A container passed a limit, moved, or left; what left takes no more waste."""
    container = change.need("container", change.entry.about)
    if container["state"] == "picked up":
        raise Refused("picked_up", "This container has left the site; nothing more can be said of it.")
    if change.body["to"] == "picked up" and not change.body["by"].strip():
        raise Refused("invalid", "Say who took it.", {"by": ["is missing"]})
    told = {**change.body, "recorded_by": change.name_of(change.entry.by), "at": change.entry.at}
    moved = {
        "state": change.body["to"],
        "moves": [*container["moves"], told],
        "clock": _clock(change, container),
    }
    change.update("container", change.entry.about, container | moved)


def _block(wanted: float, found: list[float], _: float | None) -> instruments.Checked:
    worst = max(found, key=lambda one: abs(one - wanted))
    return instruments.check_near(worst, wanted, instruments.BLOCK_C, "°C")


def _wavelength(wanted: float, found: list[float], _: float | None) -> instruments.Checked:
    worst = max(found, key=lambda one: abs(one - wanted))
    return instruments.check_near(worst, wanted, instruments.WAVELENGTH_NM, "nm")


def _pipette(wanted: float, found: list[float], water_c: float | None) -> instruments.Checked:
    return instruments.check_pipette(wanted, found, water_c if water_c is not None else 20.0)


_JUDGES: dict[str, Callable[[float, list[float], float | None], instruments.Checked]] = {
    "block temperature": _block,
    "wavelength": _wavelength,
    "pipette by weight": _pipette,
}


@handles("instrument.checked")
def instrument_checked(change: Change) -> None:
    """A check of an instrument; what it says, and when it is due again."""
    body, instrument = change.body, change.need("instrument", change.entry.about)
    found = [measured.read(text).value for text in body["found"]]
    water = None if body["water_c"] is None else measured.read(body["water_c"]).value
    try:
        judged = _JUDGES[body["what"]](measured.read(body["wanted"]).value, found, water)
    except InputError as error:
        raise Refused("invalid", error.message, error.fields) from None
    check = {**body, "by": change.name_of(change.entry.by), "ok": judged.ok, "words": judged.words}
    checks = [*instrument["checks"], check][-24:]
    change.update("instrument", change.entry.about, instrument | {"checks": checks})
