"""What was measured beside the COD, and the server's words about it on each result."""

from __future__ import annotations

from app.records.change import Body, Change, Refused
from app.records.handlers import handles

BESIDE = ("chloride", "qualifiers", "corrected", "detection_limit")


@handles("bottle.measured")
def bottle_measured(change: Change) -> None:
    """Concentrations of a bottle under its code, the sample known or not; a later value stands."""
    code = change.entry.about
    if code != change.body["bottle"]:
        raise Refused("wrong_about", "These values are about the bottle whose code they give.")
    said = {name: change.body[name] for name in ("how", "note")}
    said |= {"by": change.name_of(change.entry.by), "at": change.entry.at}
    known: Body = change.get("interferents", code) or {}
    found = known | {name: said | {"given": given} for name, given in change.body["species"].items()}
    change.put("interferents", code, found, parent=code, at=change.entry.at)


@handles("result.qualified")
def result_qualified(change: Change) -> None:
    """Qualifiers, the corrected value and the detection limit beside a result; its number stays."""
    result = change.need("result", change.entry.about)
    beside = {name: change.body[name] for name in BESIDE} | {"beside": change.body["words"]}
    change.update("result", change.entry.about, result | beside)
