"""Calibrations: standards, fit, checks against another source, and what each curve may serve."""

from __future__ import annotations

from datetime import date

from app.chemistry.validity import Conditions, Validity, due_again, refusals
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
    begun = {"fitted": None, "tube": recipe.get("tube", ""), "checks": [], "due": {}}
    change.put(
        "calibration",
        change.entry.about,
        {"weights": "equal"} | body | made | begun,
        parent=body["recipe"],
        at=change.entry.at,
    )


@handles("calibration.fitted")
def calibration_fitted(change: Change) -> None:
    """The curve, as the server fitted it, and when it is to be checked."""
    body = change.need("calibration", change.entry.about)
    made_on = date.fromisoformat(body["made_at"][:10])
    due = {"second source": made_on, "linear range": due_again("linear range", made_on)}
    first = {what: day.isoformat() for what, day in due.items()}
    change.update(
        "calibration",
        change.entry.about,
        body | {"fitted": change.body["fitted"], "due": first | body["due"]},
    )


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
    what = next(check["what"] for check in checks if check["id"] == change.body["check"])
    due = curve["due"] | ({what: change.body["due_on"]} if change.body["ok"] else {})
    change.update("calibration", change.entry.about, curve | {"checks": checks, "due": due})


def _conditions(change: Change, body: Body, curve: Body, wavelength_nm: float, tube: str) -> Conditions:
    """Return the conditions of a curve or of a run, in the names that people know.

    Two things may bear one name: one that is not the curve's says so.
    """

    def name(type_: str) -> str:
        known = str(change.need(type_, body[type_])["name"])
        namesake = body[type_] != curve[type_] and change.need(type_, curve[type_])["name"] == known
        return f"{known} (another of that name)" if namesake else known

    return Conditions(name("recipe"), wavelength_nm, name("instrument"), tube, name("lot"))


def unfit(change: Change, body: Body) -> list[str]:
    """Return why a curve does not belong to the tubes of a run on the day of an entry.

    Parameters
    ----------
    change : Change
        The entry that plans the run or reads a tube.
    body : dict
        Names ``calibration``, ``recipe``, ``lot`` and ``instrument``.
    """
    curve, recipe = change.need("calibration", body["calibration"]), change.need("recipe", body["recipe"])
    tube = curve.get("tube", "")
    mine = _conditions(change, curve, curve, recipe["wavelength_nm"], tube)
    theirs = _conditions(change, body, curve, recipe["wavelength_nm"], recipe.get("tube", ""))
    made_on, until = (date.fromisoformat(text[:10]) for text in (curve["made_at"], curve["valid_until"]))
    today = date.fromisoformat(change.entry.at[:10])
    # Clocks of two tablets differ: only the last day of a curve is held against a run.
    validity = Validity(mine, min(made_on, today), until)
    return [words for reasons in refusals(validity, theirs, today).values() for words in reasons]


def wrong_curve(change: Change, body: Body) -> list[str]:
    """Return why a run may not be planned with its curve; takes what :func:`unfit` takes."""
    curve, today = change.need("calibration", body["calibration"]), date.fromisoformat(change.entry.at[:10])
    fitted = curve["fitted"] or {}
    found = unfit(change, body)
    found += [fitted["error"]] if "error" in fitted else []
    found += [one["words"] for one in fitted.get("findings", []) if one["severity"] == "stop"]
    return found + _unchecked(change, curve, today) + _old_lot(change, body, today)


def _unchecked(change: Change, curve: Body, today: date) -> list[str]:
    """Return what the newest standard of another source leaves open, where the programme asks for one."""
    if not change.find("programme")[0][1]["settings"].get("second_source_required"):
        return []
    checks = [check for check in curve["checks"] if check["what"] == "second source"]
    judged = (checks[-1]["judged"] or {}) if checks else {}
    if not judged.get("ok"):
        return ["no standard of another source has confirmed this curve, and the programme asks for one"]
    if judged["due_on"] < today.isoformat():
        return [f"its standard of another source was due again on {judged['due_on']}"]
    return []


def _old_lot(change: Change, body: Body, today: date) -> list[str]:
    lot = change.need("lot", body["lot"])
    if date.fromisoformat(lot["expires_on"]) >= today:
        return []
    return [f"the reagent lot {lot['name']} expired on {lot['expires_on']}"]
