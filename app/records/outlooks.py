"""What to expect at a point: made anew when something about it becomes known."""

from __future__ import annotations

from datetime import datetime

from app import __version__
from app.forecast import Observation, Programme, posterior
from app.journal import measured
from app.records.change import Body, Stating

UNITS = {"conductivity_us_cm": "uS/cm", "turbidity_ntu": "NTU", "ph": "pH", "temperature_c": "Cel"}


def days(moment: str) -> float:
    """Return a moment as days since 1970, UTC."""
    return datetime.fromisoformat(moment).timestamp() / 86400.0


def readings(field: Body) -> dict[str, float]:
    """Return field readings as numbers in the units of their names; bounds are left out."""
    found = {}
    for name, given in field.items():
        if name in UNITS and measured.read(given["text"]).sign == "=":
            number = measured.value(given, UNITS[name])
            if number is not None:
                found[name] = number
    return found


def observation(result: Body) -> Observation | None:
    """Return what a result teaches; one that disagrees or was rejected teaches nothing."""
    if result["status"] not in ("ok", "below", "over") or not result["collected_at"]:
        return None
    if result["review"] and result["review"]["decision"] == "rejected":
        return None
    bound = {"below": result.get("reporting_level"), "over": result.get("top")}.get(result["status"])
    return Observation(
        days(result["collected_at"]),
        float(bound if bound is not None else result["cod"]),
        result["status"],
        readings(result["field"]),
        result["activity"],
    )


def look_ahead(writing: Stating, point: str) -> None:
    """State what is expected of a point's next sample."""
    body = writing.get("point", point)
    if body is None:
        return
    results = [result for _, result in writing.find("result", point)]
    history = [one for one in map(observation, results) if one is not None]
    pack = posterior(Programme.default(), body["sector"], history).to_json()
    stated = {
        "software": f"weirbook {__version__}",
        "pack": pack,
        "n": len(history),
        "last_at": results[-1]["collected_at"] if results else None,
    }
    writing.state("outlook.computed", point, stated)
