"""Calibrations: standards, fit, checks against another source, and what each curve may serve."""

from __future__ import annotations

from datetime import date

from app.chemistry.validity import Conditions, Validity, refusals
from app.journal import measured
from app.records.change import Body, Change, Refused
from app.records.handlers import handles


@handles("calibration.made")
def calibration_made(change: Change) -> None:
    """Standards of one recipe, lot and photometer; the fit follows as an entry of the server."""
    body = change.body
    recipe, lot = change.need("recipe", body["recipe"]), change.need("lot", body["lot"])
    change.need("instrument", body["instrument"])
    if lot["recipe"] != body["recipe"]:
        raise Refused("wrong_lot", "This lot belongs to another recipe.", {"lot": ["Of another recipe."]})
    wavelength = measured.read(body["wavelength_nm"]).value
    if abs(wavelength - recipe["wavelength_nm"]) > 20:
        raise Refused(
            "wrong_wavelength",
            f"The recipe reads at {recipe['wavelength_nm']:g} nm; standards read elsewhere make no curve "
            "for it.",
            {"wavelength_nm": ["More than 20 nm from the recipe's."]},
        )
    made = {
        "wavelength_nm": wavelength,
        "made_at": change.entry.at,
        "made_by": change.name_of(change.entry.by),
    }
    change.put(
        "calibration",
        change.entry.about,
        {"weights": "equal"} | body | made | {"fitted": None, "tube": recipe.get("tube", ""), "checks": []},
        parent=body["recipe"],
        at=change.entry.at,
    )


@handles("calibration.fitted")
def calibration_fitted(change: Change) -> None:
    """The curve, as the server fitted it."""
    body = change.need("calibration", change.entry.about)
    change.update("calibration", change.entry.about, body | {"fitted": change.body["fitted"]})


@handles("curve.checked")
def curve_checked(change: Change) -> None:
    """A check of a curve; the server judges it at once."""
    curve = change.need("calibration", change.entry.about)
    check = {
        **change.body,
        "id": change.entry.id,
        "at": change.entry.at,
        "by": change.name_of(change.entry.by),
        "judged": None,
    }
    change.update("calibration", change.entry.about, curve | {"checks": [*curve["checks"], check]})


@handles("curve.judged")
def curve_judged(change: Change) -> None:
    """What a check amounts to."""
    curve = change.need("calibration", change.entry.about)
    names = ("cod", "recovery_percent", "limit_percent", "ok", "due_on")
    judged = {name: change.body[name] for name in names}
    checks = [
        check | {"judged": judged} if check["id"] == change.body["check"] else check
        for check in curve["checks"]
    ]
    change.update("calibration", change.entry.about, curve | {"checks": checks})


def _conditions(change: Change, body: Body, wavelength_nm: float, tube: str) -> Conditions:
    """Return the conditions of a curve or of a run, in the names that people know."""

    def name(type_: str, id_: str) -> str:
        return str(change.need(type_, id_)["name"])

    return Conditions(
        name("recipe", body["recipe"]),
        wavelength_nm,
        name("instrument", body["instrument"]),
        tube,
        name("lot", body["lot"]),
    )


def wrong_curve(change: Change, body: Body) -> list[str]:
    """Return why the readings of a run would refuse its curve.

    Parameters
    ----------
    change : Change
        The entry that plans or heats the run.
    body : dict
        Names ``calibration``, ``recipe``, ``lot`` and ``instrument``.
    """
    curve, recipe = change.need("calibration", body["calibration"]), change.need("recipe", body["recipe"])
    tube = curve.get("tube", "")
    mine = _conditions(change, curve, recipe["wavelength_nm"], tube)
    theirs = _conditions(change, body, recipe["wavelength_nm"], recipe.get("tube", ""))
    made_on, until = (date.fromisoformat(text[:10]) for text in (curve["made_at"], curve["valid_until"]))
    today = date.fromisoformat(change.entry.at[:10])
    # Clocks of two tablets differ: only the last day of a curve is held against a run.
    validity = Validity(mine, min(made_on, today), until)
    found = [words for reasons in refusals(validity, theirs, today).values() for words in reasons]
    fitted = curve["fitted"] or {}
    found += [fitted["error"]] if "error" in fitted else []
    found += [one["words"] for one in fitted.get("findings", []) if one["severity"] == "stop"]
    return found + _unchecked(change, curve) + _old_lot(change, body, today)


def _unchecked(change: Change, curve: Body) -> list[str]:
    settings = change.find("programme")[0][1]["settings"]
    held = any(
        (check["judged"] or {}).get("ok") for check in curve["checks"] if check["what"] == "second source"
    )
    if held or not settings.get("second_source_required"):
        return []
    return ["no standard of another source has confirmed this curve, and the programme asks for one"]


def _old_lot(change: Change, body: Body, today: date) -> list[str]:
    lot = change.need("lot", body["lot"])
    if date.fromisoformat(lot["expires_on"]) >= today:
        return []
    return [f"the reagent lot {lot['name']} expired on {lot['expires_on']}"]
