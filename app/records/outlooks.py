"""What to expect at a point: made anew when something about it becomes known."""

from __future__ import annotations

from datetime import datetime

from app import __version__
from app.forecast import Observation, Programme, posterior
from app.forecast.learning import Point, learn
from app.journal import measured
from app.records.change import Body, Stating

SOFTWARE = f"weirbook {__version__}"
GROWTH, FEW = 1.1, 10
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


def chloride_known(species: Body, field: Body) -> Body | None:
    """Return chloride as it is best known: from the bench, else from the strip at the point."""
    for given, source in (
        ((species.get("chloride") or {}).get("given"), "bottle"),
        (field.get("chloride_mg_l"), "point"),
    ):
        if given:
            sign = measured.read(given["text"]).sign
            return {"mg_l": measured.value(given, "mg/L"), "sign": sign, "from": source}
    return None


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


def history_of(writing: Stating, point: str) -> list[Observation]:
    """Return what a point's results teach, in the order of their times."""
    results = (result for _, result in writing.find("result", point))
    return [one for one in map(observation, results) if one is not None]


def learn_again(writing: Stating, about: str) -> None:
    """State what the points have in common, once a good part of the results is new."""
    known: Body = writing.get("learned", about) or {"n": 0}
    n = writing.count("result")
    if n < GROWTH * known["n"] + FEW:
        return
    points = [
        Point(body["sector"], tuple(history_of(writing, point))) for point, body in writing.find("point")
    ]
    stated = {"software": SOFTWARE, "programme": learn(points).to_json(), "n": n}
    writing.state("programme.learned", about, stated)


def programme(writing: Stating) -> Programme:
    """Return what the programme has learnt, or the beginning."""
    known = writing.get("learned", "programme")
    return Programme.from_json(known["programme"]) if known else Programme.default()


def look_ahead(writing: Stating, point: str) -> None:
    """State what is expected of a point's next sample."""
    body = writing.get("point", point)
    if body is None:
        return
    history = history_of(writing, point)
    results = writing.find("result", point)
    stated = {
        "software": SOFTWARE,
        "pack": posterior(programme(writing), body["sector"], history).to_json(),
        "n": len(history),
        "last_at": results[-1][1]["collected_at"] if results else None,
    }
    writing.state("outlook.computed", point, stated)
