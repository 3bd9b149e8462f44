"""The laboratory's sums, stated by the server: recipes derived, curves fitted, runs calculated.

A run's answer is the verb ``calculate``'s, for the very input that is kept
beside it: anybody can give that input to ``python -m app calculate`` and get
the same digits.
"""

from __future__ import annotations

import json
from collections.abc import Iterable
from dataclasses import asdict
from datetime import date, datetime
from typing import Any
from zoneinfo import ZoneInfo

from app import __version__, verbs
from app.chemistry import rounding, validity
from app.chemistry.calibration import Standard, fit
from app.chemistry.diagnostics import findings, residuals
from app.chemistry.quality import Event, bracket
from app.chemistry.recipe import Recipe
from app.errors import WeirbookError
from app.journal import measured
from app.journal.entry import digest
from app.records import controls, experience, repeats, verdicts
from app.records.change import Body, Stating
from app.safety import waste

SOFTWARE = f"weirbook {__version__}"
_RECIPE = (
    "sample_ml",
    "digestion_solution_ml",
    "acid_reagent_ml",
    "dichromate_g_per_l",
    "mercury_sulfate_g_per_l",
    "silver_sulfate_g_per_l",
    "wavelength_nm",
)


def inputs_digest(given: Body) -> str:
    """Return the digest of a sum's input, as entries of the server carry it."""
    return digest(json.dumps(given, sort_keys=True, separators=(",", ":")).encode("utf-8"))


def recipe_input(recipe: Body) -> Body:
    """Return a recipe as the sums take it."""
    return {name: recipe[name] for name in _RECIPE}


def derive_recipe(writing: Stating, id_: str) -> None:
    """State what follows from a recipe."""
    recipe = writing.get("recipe", id_) or {}
    given = recipe_input(recipe) | {"working_range": [recipe["working_low"], recipe["working_high"]]}
    derived = verbs.find("recipe")(given)
    writing.state("recipe.derived", id_, {"software": SOFTWARE, "derived": derived})


def fit_curve(writing: Stating, id_: str) -> None:
    """State the curve of a calibration; one that cannot be fitted keeps the reason."""
    calibration = writing.get("calibration", id_) or {}
    given = {
        "standards": standards(calibration),
        "model": calibration["model"],
        "weights": calibration.get("weights", "equal"),
    }
    recipe = writing.get("recipe", calibration["recipe"]) or {}
    try:
        fitted = verbs.find("fit")(given) | _looked_at(given, recipe)
    except WeirbookError as error:
        fitted = error.body()
    body = {"software": SOFTWARE, "inputs_digest": inputs_digest(given), "fitted": fitted}
    writing.state("calibration.fitted", id_, body)


def _looked_at(given: Body, recipe: Body) -> Body:
    """Return what is the matter with a curve, in words, and each reading's residual and leverage."""
    levels = [Standard(one["cod"], tuple(one["absorbance"])) for one in given["standards"]]
    curve = fit(levels, given["model"], given["weights"])
    reach = (recipe["working_low"], recipe["working_high"])
    found = findings(curve, levels, Recipe(**recipe_input(recipe)), reach)
    return {
        "findings": [asdict(one) for one in found],
        "residuals": [asdict(one) for one in residuals(curve, levels)],
    }


def judge_check(writing: Stating, about: str) -> None:
    """State what a check of a curve amounts to; ``about`` names the curve and the check."""
    id_, check_id = about.split(" ")
    curve = writing.get("calibration", id_) or {}
    check = next(one for one in curve["checks"] if one["id"] == check_id)
    settings = writing.find("programme")[0][1]["settings"]
    limit = settings.get("second_source_percent", validity.SECOND_SOURCE_PERCENT)
    cod = _read_back(curve, [measured.read(text).value for text in check["absorbance"]])
    share = None if cod is None else validity.recovery_percent(cod, measured.read(check["expected"]).value)
    judged = {
        "check": check_id,
        "cod": cod,
        "recovery_percent": share,
        "limit_percent": limit,
        "ok": share is not None and validity.holds(share, limit),
        "due_on": validity.due_again(check["what"], date.fromisoformat(check["at"][:10])).isoformat(),
    }
    writing.state("curve.judged", id_, {"software": SOFTWARE} | judged)


def _read_back(curve: Body, absorbance: list[float]) -> float | None:
    given = {"standards": standards(curve), "model": curve["model"], "weights": curve["weights"]}
    try:
        return float(verbs.find("fit")(given | {"read": [absorbance]})["read"][0]["cod"])
    except WeirbookError:  # no curve, or beyond its turning point
        return None


def standards(calibration: Body) -> list[Body]:
    """Return a calibration's standards as numbers."""
    return [
        {
            "cod": measured.read(one["cod"]).value,
            "absorbance": [measured.read(text).value for text in one["absorbance"]],
        }
        for one in calibration["standards"]
    ]


def _absorbance(tube: Body) -> float | None:
    return measured.value(tube["absorbance"], "AU")


def sample_names(run: Body) -> dict[str, list[Body]]:
    """Return the read tubes by sample: the bottle's code, and its dilution where it has several."""
    factors: dict[str, set[float]] = {}
    for tube in controls.read_tubes(run, "sample"):
        factors.setdefault(tube["bottle"], set()).add(tube["dilution"]["factor"])
    found: dict[str, list[Body]] = {}
    for tube in controls.read_tubes(run, "sample"):
        code, factor = tube["bottle"], tube["dilution"]["factor"]
        name = code if len(factors[code]) == 1 else f"{code} 1:{factor:g}"
        found.setdefault(name, []).append(tube)
    return found


def _worst_colour(tubes: Iterable[Body]) -> str | None:
    seen = {tube["colour"] for tube in tubes if tube["excluded"] is None}
    return next((colour for colour in ("green", "olive", "orange") if colour in seen), None)


def _sample_input(name: str, tubes: list[Body]) -> Body:
    kept = [tube for tube in tubes if tube["excluded"] is None]
    oxidant = [measured.value(tube["remaining_oxidant"], "1") for tube in kept if tube["remaining_oxidant"]]
    return {
        "sample": name,
        "absorbance": [_absorbance(tube) for tube in tubes],
        "dilution_factor": tubes[0]["dilution"]["factor"],
        "dilution_relative_u": tubes[0]["dilution"]["relative_u"],
        "colour": _worst_colour(tubes),
        "remaining_oxidant": min((one for one in oxidant if one is not None), default=None),
        "excluded": [
            {"index": index, "reason": tube["excluded"]["cause"]}
            for index, tube in enumerate(tubes)
            if tube["excluded"] is not None
        ],
    }


def run_input(run: Body, recipe: Body, calibration: Body, settings: Body) -> Body:
    """Return what the verb ``calculate`` is given for a run."""
    blanks = [_absorbance(tube) for tube in controls.kept(run, "blank")]
    checks = [*controls.kept(run, "verification"), *controls.kept(run, "control")]
    samples = sample_names(run)
    extra = controls.pairs(run, samples)
    return {
        "recipe": recipe_input(recipe),
        "calibration": {
            "standards": standards(calibration),
            "model": calibration["model"],
            "weights": calibration.get("weights", "equal"),
            "standards_relative_u": settings["standards_relative_u"],
        },
        "working_range": [recipe["working_low"], recipe["working_high"]],
        "blanks": blanks or None,
        "tubes": [
            _sample_input(name, tubes)
            for name, tubes in samples.items()
            if any(tube["excluded"] is None for tube in tubes)
        ]
        + [_sample_input(name, [tube]) for _, name, tube in extra],
        "verifications": [
            {"expected": measured.read(tube["expected"]).value, "absorbance": [_absorbance(tube)]}
            for tube in checks
        ],
        "duplicates": controls.duplicates(extra),
        "spikes": controls.spikes(extra),
        "policy": {
            name: settings[name]
            for name in (
                "repeatability",
                "bias_relative_u",
                "bias_dof",
                "verification_percent",
                "duplicate_rpd_percent",
                "spike_percent",
            )
        },
    }


def _tubes_found(run: Body, given: Body, answer: Body, capacity: float) -> list[Body]:
    """Return each read tube's COD in the tube and the share of the oxidant that it used."""
    blank = answer["checks"]["blank"]
    zero = blank["mean"] if blank else 0.0
    curve = {name: given["calibration"][name] for name in ("standards", "model", "weights")}
    read = [tube for tube in run["tubes"] if tube["absorbance"] is not None]
    cods = _turned_back(curve, [(_absorbance(tube) or 0.0) - zero for tube in read])
    return [
        {
            "position": tube["position"],
            "in_tube": cod,
            "share": None if cod is None else max(0.0, cod / capacity),
        }
        for tube, cod in zip(read, cods, strict=True)
    ]


def _turned_back(curve: Body, absorbance: list[float]) -> list[float | None]:
    """Return the COD of each reading; beyond the curve's turning point there is no number."""
    try:
        given = curve | {"read": [[one] for one in absorbance]}
        return [one["cod"] for one in verbs.find("fit")(given)["read"]]
    except WeirbookError:
        if len(absorbance) == 1:
            return [None]
    return [cod for one in absorbance for cod in _turned_back(curve, [one])]


def calculate_run(writing: Stating, id_: str) -> None:
    """State a run's answer and the result of each of its samples."""
    run = writing.get("run", id_) or {}
    recipe = writing.get("recipe", run["recipe"]) or {}
    calibration = writing.get("calibration", run["calibration"]) or {}
    settings = writing.find("programme")[0][1]["settings"]
    learned = experience.in_force(writing, settings, run["recipe"])
    given = run_input(run, recipe, calibration, settings | learned["policy"])
    answer = verbs.find("calculate")(given)
    found = _tubes_found(run, given, answer, recipe["derived"]["oxidant_capacity"])
    in_tube = {one["position"]: one["in_tube"] for one in found}
    checks = controls.rows(run, given, answer, sample_names(run))
    body = {
        "software": SOFTWARE,
        "inputs_digest": inputs_digest(given),
        "input": given,
        "answer": answer,
        "tubes": found,
        "results": [
            _result(writing, id_, run, recipe, settings, one, answer)
            for one in answer["samples"]
            if not controls.is_extra(one["sample"])
        ],
        "waste": waste_of(run, recipe),
        "bracketing": _bracketing(run, answer),
        "checks": controls.with_left_out(checks, run, in_tube),
        "experience": {name: learned[name] for name in ("repeatability", "bias")},
    }
    writing.state("run.calculated", id_, body)


def _bracketing(run: Body, answer: Body) -> Body:
    """Return which samples stand between verifications that held; a failed one holds what touches it."""
    judged = iter(check["ok"] for check in answer["checks"]["verifications"])
    events = [
        Event(
            tube["bottle"] or "the laboratory control",
            next(judged) if tube["role"] == "verification" else None,
        )
        for tube in run["tubes"]
        if tube["role"] != "blank" and tube["absorbance"] is not None and tube["excluded"] is None
    ]
    found = asdict(bracket(events))
    return {name: list(dict.fromkeys(codes)) for name, codes in found.items()}


def waste_of(run: Body, recipe: Body) -> Body:
    """Return what a run's tubes add to their container, from recipe x tubes."""
    total = waste.totals(waste.per_tube(Recipe(**recipe_input(recipe))), len(run["tubes"]))
    return asdict(total)


def _result(
    writing: Stating, run_id: str, run: Body, recipe: Body, settings: Body, one: Body, answer: Body
) -> Body:
    tubes = sample_names(run)[one["sample"]]
    code, factor = tubes[0]["bottle"], tubes[0]["dilution"]["factor"]
    known = writing.get("bottle", code) or {}
    sample: Body = (known.get("sample") and writing.get("sample", known["sample"])) or {}
    result: dict[str, Any] = {
        name: one[name]
        for name in ("cod", "u", "expanded_u", "dof", "status", "reported", "components", "advice")
    }
    result |= {
        "id": f"{run_id}:{one['sample'].replace(' ', ':')}",
        "run": run_id,
        "bottle": code,
        "sample": known.get("sample"),
        "point": known.get("point"),
        "collected_at": sample.get("collected_at"),
        "field": sample.get("field", {}),
        "activity": sample.get("activity"),
        "dilution": tubes[0]["dilution"],
        "dilution_factor": factor,
        "reporting_level": recipe["working_low"] * factor,
        "top": recipe["working_high"] * factor,
        **_shown(one),
        "checks_ok": answer["ok"],
        "source": "run",
    }
    result["verdicts"] = _verdicts(writing, result, settings)
    return result | {"next_dilution": repeats.next_of(writing, result, run["recipe"], sample, settings)}


def _shown(one: Body) -> Body:
    """Return a result's texts as they are printed, rounded once by the reporting rule."""
    if one["status"] == "ok":
        u = one["expanded_u"]
        return {
            "shown": rounding.plain(rounding.reported_cod(one["cod"])),
            "shown_u": None if u is None else rounding.plain(rounding.reported_u(u)),
        }
    return {"shown": (one["reported"] or {}).get("cod"), "shown_u": None}


def _verdicts(writing: Stating, result: Body, settings: Body) -> list[Body]:
    point = result["point"] and writing.get("point", result["point"])
    if not point or not result["collected_at"]:
        return []
    zone = ZoneInfo(writing.find("programme")[0][1]["zone"])
    day = datetime.fromisoformat(result["collected_at"]).astimezone(zone).date()
    return verdicts.beside_limits(result, point["limits"], day, settings["decision_rule"])
