"""The programme, its people, dischargers, points and limits."""

from __future__ import annotations

from app.journal import measured
from app.journal.kinds.settings import DEFAULTS
from app.records.change import Change, Refused
from app.records.handlers import handles


@handles("programme.started")
def programme_started(change: Change) -> None:
    """One programme a server."""
    if change.find("programme"):
        raise Refused("already_started", "A programme runs on this server already.")
    # A programme that began before a setting existed has its default.
    settings = DEFAULTS | change.body["settings"]
    body = {**change.body, "settings": settings, "started_at": change.entry.at}
    change.put("programme", change.entry.about, body)


@handles("settings.changed")
def settings_changed(change: Change) -> None:
    """The named settings take their new values; the others stay."""
    body = change.need("programme", change.entry.about)
    body["settings"] |= change.body["settings"]
    change.update("programme", change.entry.about, body)


@handles("person.added")
def person_added(change: Change) -> None:
    """Somebody may work here."""
    change.put("person", change.entry.about, {**change.body, "active": True})


@handles("person.changed")
def person_changed(change: Change) -> None:
    """Somebody's name, roles or standing as it is from now on."""
    change.need("person", change.entry.about)
    change.put("person", change.entry.about, change.body)


@handles("discharger.registered")
def discharger_registered(change: Change) -> None:
    """A discharger, or what is now known of it."""
    change.put("discharger", change.entry.about, change.body)
    for id_, point in change.find("point", change.entry.about):
        point |= {"discharger_name": change.body["name"], "sector": change.body["sector"]}
        change.update("point", id_, point)


@handles("point.registered")
def point_registered(change: Change) -> None:
    """A discharge point; its limits stay when it is described anew."""
    discharger = change.need("discharger", change.body["discharger"])
    before = change.get("point", change.entry.about) or {"limits": []}
    body = {
        **change.body,
        "discharger_name": discharger["name"],
        "sector": discharger["sector"],
        "limits": before["limits"],
    }
    change.put("point", change.entry.about, body, parent=change.body["discharger"])


@handles("limit.set")
def limit_set(change: Change) -> None:
    """A limit joins the point's limits; an earlier one of the same basis and day gives way to it."""
    point = change.need("point", change.entry.about)
    basis, day = change.body["basis"], change.body["from"]
    kept = [one for one in point["limits"] if (one["basis"], one["from"]) != (basis, day)]
    new = {
        "basis": basis,
        "value": measured.value(change.body["value"], "mg/L"),
        "unit": "mg/L",
        "from": day,
        "source": change.body["source"],
        "set_by": change.name_of(change.entry.by),
    }
    point["limits"] = sorted([*kept, new], key=lambda one: (one["basis"], one["from"]))
    change.update("point", change.entry.about, point)
