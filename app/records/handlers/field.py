"""Samples, bottles and custody.

Entries of different devices arrive in any order: a bottle may be received
before the tablet that filled it has sent its entry. What is known of a bottle
is therefore kept under its code, and a sample finds it there.
"""

from __future__ import annotations

from datetime import datetime
from typing import Any
from zoneinfo import ZoneInfo

from app.compliance import holding
from app.records.change import Body, Change, Refused
from app.records.handlers import handles, rounds


def bottle(change: Change, code: str) -> Body:
    """Return what is known of a bottle, or an empty beginning."""
    return change.get("bottle", code) or {
        "code": code,
        "sample": None,
        "point": None,
        "holder": None,
        "received": None,
        "runs": [],
        "results": [],
        "certificate": None,
        "state": "unknown",
    }


def state_of(known: Body) -> str:
    """Return the state of a bottle, and so of its sample, in the trade's words."""
    if known["certificate"]:
        return "certified"
    if known["results"]:
        return "result"
    if known["runs"]:
        return "in digestion"
    if known["received"]:
        return "received" if known["received"]["decision"] != "rejected" else "rejected"
    return "handed over" if known["holder"] else "taken"


def put_bottle(change: Change, known: Body) -> None:
    """Put a bottle's record and carry its state into its sample."""
    known["state"] = state_of(known)
    change.put("bottle", known["code"], known, parent=known["sample"] or "")
    sample = known["sample"] and change.get("sample", known["sample"])
    if sample:
        shared = ("holder", "received", "results", "certificate", "state")
        sample |= {name: known[name] for name in shared}
        change.update("sample", known["sample"], sample)


def _zone(change: Change) -> ZoneInfo:
    programme: dict[str, Any] = change.find("programme")[0][1]
    return ZoneInfo(programme["zone"])


@handles("sample.taken")
def sample_taken(change: Change) -> None:
    """A sample, in a bottle whose code nobody else has used."""
    code, id_ = change.body["bottle"], change.entry.about
    change.need("point", change.body["point"])
    known = bottle(change, code)
    if known["sample"] not in (None, id_):
        raise Refused(
            "bottle_in_use",
            f"Bottle {code} already belongs to another sample. Both entries are kept; a coordinator decides "
            "which label was wrong.",
            {"bottle": ["This code is taken."]},
        )
    if change.get("sample", id_):
        raise Refused("already_stated", "This sample was stated before; a correction is an entry of its own.")
    _need_whole(change)
    visit = change.body["visit"] and change.need("visit", change.body["visit"])
    if visit:
        rounds.need_safe(change.need("point", visit["point"]), visit)
    collected = datetime.fromisoformat(change.body["collected_at"])
    sample = {
        **change.body,
        "by": change.entry.by,
        "by_name": change.name_of(change.entry.by),
        "recorded_at": change.entry.at,
        "hold_until": holding.hold_until(collected, zone=_zone(change)).isoformat(),
        "split": None,
        "doubts": [],
    }
    change.put("sample", id_, sample, parent=change.body["point"], at=change.body["collected_at"])
    put_bottle(change, known | {"sample": id_, "point": change.body["point"]})
    if visit:
        samples = [*visit["samples"], id_]
        change.update("visit", change.body["visit"], visit | {"samples": samples})
    sampler = change.get("sampler", id_)
    if sampler:
        change.update("sampler", id_, sampler | {"state": "picked up"})
    if change.body["meter"]:
        rounds.meter_used(change, change.body["meter"], id_, change.body)


def _need_whole(change: Change) -> None:
    """Refuse a composite without its period, and a duplicate of nothing."""
    body = change.body
    period = body["composite"]
    if (body["sample_kind"] == "composite") != (period is not None):
        raise Refused(
            "invalid", "A composite needs its period, a grab has none.", {"composite": ["is wrong"]}
        )
    if period and datetime.fromisoformat(period["started_at"]) >= datetime.fromisoformat(
        body["collected_at"]
    ):
        raise Refused(
            "wrong_order", "A composite cannot end before it began.", {"composite": ["began later"]}
        )
    if body["purpose"] == "duplicate" and body["of"] is None:
        raise Refused("invalid", "A duplicate names the sample that it repeats.", {"of": ["is missing"]})


@handles("custody.handed_over")
def handed_over(change: Change) -> None:
    """The bottles have a new holder."""
    for code in change.body["bottles"]:
        known = bottle(change, code)
        put_bottle(change, known | {"holder": change.body["to"]})
    change.put(
        "hand_over",
        change.entry.about,
        {**change.body, "by": change.entry.by, "at": change.entry.at},
        at=change.entry.at,
    )


@handles("bottle.received")
def bottle_received(change: Change) -> None:
    """The laboratory has the bottle, in this condition; a later receipt stands before an earlier one."""
    if change.entry.about != change.body["bottle"]:
        raise Refused("wrong_about", "A receipt is about the bottle whose code it gives.")
    known = bottle(change, change.body["bottle"])
    received = {
        **change.body,
        "at": change.entry.at,
        "by": change.entry.by,
        "by_name": change.name_of(change.entry.by),
    }
    put_bottle(change, known | {"received": received, "holder": "laboratory"})
