"""Today's round and this morning's meters; invented like the rest.

Told by ``make.py``; moments are hours from the moment at which the scenario is told.
"""

from __future__ import annotations

from typing import Any, Protocol

Body = dict[str, Any]


class Teller(Protocol):
    """Where statements are told."""

    def tell(self, hours: float, by: str, kind: str, about: str, body: Body) -> None:
        """Add one statement."""


def measured(text: str, unit: str) -> Body:
    """Return a measured value as it is typed."""
    return {"text": text, "unit": unit}


STOPS = ("hollin-b", "marl-2", "sable-a", "hollin-a", "brackwater-a", "pell-a", "corrie-a")


def visit(
    story: Teller, hours: float, point: str, outcome: str, reason: str, said: str, between: list[Body]
) -> None:
    """Tell a visit of today's round, from arrival to leaving."""
    id_ = f"visit-{point}"
    body: Body = {"round": "round-today", "stop": f"stop-{point}", "point": point}
    body |= {
        "arrived_at": f"@{hours:.2f}",
        "introduced": True,
        "activity": "production",
        "weather": "dry, 11 °C",
    }
    body |= {"present": [{"name": "L. Marsden", "title": "shift lead", "phone": ""}], "production": said}
    story.tell(hours, "teague", "visit.begun", id_, body)
    for one in between:
        story.tell(hours + one["after"], "teague", one["kind"], one.get("about", id_), one["body"])
    ended: Body = {"outcome": outcome, "left_at": f"@{hours + 0.4:.2f}", "reason": reason, "told": ""}
    ended |= {"remarks": "", "signature": None, "declined": outcome == "refused"}
    story.tell(hours + 0.4, "teague", "visit.ended", id_, ended)


def round_of_today(story: Teller, sample: str) -> None:
    """Tell this morning's meter checks, the round and what came of its first stops."""
    check: Body = {"what": "calibration", "at": "@-7.2", "slope_percent": "98.6", "passed": None, "note": ""}
    buffers = [{"reference": a, "read": b, "lot": "B-7"} for a, b in (("4.01", "4.02"), ("7.00", "7.00"))]
    check |= {"quantity": "pH", "points": buffers}
    story.tell(-7.2, "teague", "meter.checked", "meter-4", check)
    stops = [
        {"id": f"stop-{id_}", "point": id_, "sample_kind": "grab", "bottles": 1, "note": ""} for id_ in STOPS
    ]
    body: Body = {"name": "North round", "day": "@day0", "inspector": "teague", "stops": stops}
    story.tell(-20, "ostby", "round.planned", "round-today", body)
    turned = [stops[0], stops[1], stops[2], stops[4], stops[3], *stops[5:]]
    story.tell(-6.6, "teague", "round.changed", "round-today", {"stops": turned})
    split: Body = {"to": "L. Marsden", "container": "own bottle", "receipt": "signed", "note": ""}
    split["signature"] = {"name": "L. Marsden", "strokes": "M10 40L22 18L30 42L44 20M50 40L70 38"}
    of_split = {"after": 0.35, "kind": "sample.split", "about": sample, "body": split}
    visit(story, -6.1, "hollin-b", "sampled", "", "washing of line 1 at ten", [flow_of(-5.95), of_split])
    visit(story, -4.9, "marl-2", "sampled", "", "normal", gas_of(-4.85))
    visit(story, -3.7, "sable-a", "sampled", "", "normal", [])
    dry = "the weir is dry; the tanker bay is closed today"
    visit(story, -3.0, "hollin-a", "no flow", dry, "bay closed", [])
    sampler(story, -1.9)


def flow_of(hours: float) -> Body:
    """Return a flow over the flume, beside what the firm's meter shows."""
    device: Body = {"type": "parshall", "size": "3 in", "crest": None, "crest_height": None}
    body: Body = {"at": f"@{hours:.2f}", "device": device, "head": measured("0.42", "ft")}
    body |= {"head_error": measured("0.01", "ft"), "tail": None, "volume": None, "seconds": None}
    body |= {"register_start": None, "register_end": None, "count": None, "note": ""}
    return {"after": 0.15, "kind": "flow.measured", "body": body | {"meter": measured("121", "gpm")}}


def gas_of(hours: float) -> list[Body]:
    """Return a gas alarm at the opening, a better reading, and the confirmation."""
    names = ("oxygen_percent", "lel_percent", "h2s_ppm", "co_ppm")
    told: list[Body] = []
    for i, read in enumerate((("20.7", "0", "12", "0"), ("20.9", "0", "1", "0"))):
        body = {"at": f"@{hours + i / 10:.2f}", "meter": "gas meter 2"} | dict(zip(names, read, strict=True))
        told.append({"after": 0.05 + i / 10, "kind": "gas.tested", "body": body})
    note = "aired for five minutes; sampling from outside only"
    return [*told, {"after": 0.18, "kind": "gas.confirmed", "body": {"note": note}}]


def sampler(story: Teller, hours: float) -> None:
    """Tell a sampler set up at a point for a day's composite."""
    body: Body = {"point": "corrie-a", "visit": "visit-corrie-a", "started_at": f"@{hours + 0.3:.2f}"}
    body |= {"paced_by": "flow", "every_minutes": None, "every_volume": measured("500", "gal")}
    body |= {"expected_volume": measured("25700", "gal"), "aliquot": measured("150", "mL")}
    body |= {"bottle_volume": measured("10", "L"), "planned": 51, "intake": "mid depth, below the weir"}
    body |= {"tubing": "new", "cooling": "ice", "temperature": measured("3.1", "Cel")}
    body |= {"seal": "4483", "lock": "7"}
    set_up = {"after": 0.3, "kind": "sampler.set", "about": "composite-corrie", "body": body}
    visit(story, hours, "corrie-a", "sampler set", "", "normal", [set_up])
