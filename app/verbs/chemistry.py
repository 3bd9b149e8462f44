"""The verbs of chemistry: oxygen-demand, recipe, fit, calculate, detection-limit."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from marshmallow import Schema, ValidationError

from app.chemistry.advice import Advice
from app.chemistry.calculate import Checks, Reported, RunResult, SampleResult, calculate
from app.chemistry.calibration import fit
from app.chemistry.curve import Curve, FTest, Reading
from app.chemistry.detection import detection_limit
from app.chemistry.oxygen_demand import oxygen_demand
from app.chemistry.problems import Problems
from app.chemistry.recipe import Recipe, derive
from app.errors import InputError, flatten
from app.verbs.chemistry_run import load_run, standards_from
from app.verbs.chemistry_schemas import (
    DetectionLimitInput,
    FitInput,
    OxygenDemandInput,
    RecipeAndRangeInput,
)

Json = dict[str, Any]

_OXYGEN_DEMAND = OxygenDemandInput()
_RECIPE = RecipeAndRangeInput()
_FIT = FitInput()
_DETECTION_LIMIT = DetectionLimitInput()


def _load(schema: Schema, value: Any, message: str) -> Json:
    try:
        data: Json = schema.load(value)
    except ValidationError as error:
        raise InputError(message, flatten(error.messages)) from None
    return data


def oxygen_demand_verb(value: Any) -> Json:
    """Answer ``oxygen-demand``."""
    data = _load(_OXYGEN_DEMAND, value, "No oxygen demand can be calculated from this.")
    return asdict(oxygen_demand(data["formula"]))


def recipe_verb(value: Any) -> Json:
    """Answer ``recipe``."""
    data = _load(_RECIPE, value, "This is no recipe yet.")
    working_range = data.pop("working_range", None)
    sums = asdict(derive(Recipe(**data), working_range))
    sums["warnings"] = list(sums["warnings"])
    return sums


def fit_verb(value: Any) -> Json:
    """Answer ``fit``."""
    data = _load(_FIT, value, "No curve can be made from this.")
    curve = fit(standards_from(data["standards"]), data["model"], data["weights"])
    wrong, confidence = Problems(), data["confidence"]
    wrong.number("confidence", confidence, above=0, most=0.9999)
    wrong.stop("No interval can be given at this confidence.")
    found: list[Reading] = []
    for i, absorbance in enumerate(data["read"]):
        wrong.readings(f"read.{i}", absorbance)
        reading = curve.read(absorbance, confidence) if absorbance else None
        if reading is not None:
            found.append(reading)
        elif absorbance:
            wrong.add(f"read.{i}", "lies beyond the turning point of the curve: no COD belongs to it")
    wrong.stop("Some readings cannot be turned into a COD.")
    return {**curve_json(curve), "read": [asdict(reading) for reading in found]}


def calculate_verb(value: Any) -> Json:
    """Answer ``calculate``."""
    return result_json(calculate(load_run(value)))


def detection_limit_verb(value: Any) -> Json:
    """Answer ``detection-limit``."""
    data = _load(_DETECTION_LIMIT, value, "No detection limit can be calculated from this.")
    found = detection_limit(data["spikes"], data["blanks"])
    return {"mdl_spikes": found.mdl_spikes, "mdl_blanks": found.mdl_blanks, "mdl": found.mdl}


def _test_json(test: FTest | None) -> Json | None:
    return None if test is None else {"f": test.f, "p": test.p}


def curve_json(curve: Curve) -> Json:
    """Return a curve as the contract of ``fit`` writes it."""
    return {
        "model": curve.model,
        "weights": curve.weights,
        "n": curve.n,
        "dof": curve.dof,
        "coefficients": list(curve.coefficients),
        "standard_errors": list(curve.standard_errors),
        "residual_sd": curve.residual_sd,
        "r_squared": curve.r_squared,
        "lack_of_fit": _test_json(curve.lack_of_fit),
        "mandel": _test_json(curve.mandel),
        "relative_standard_error_percent": curve.relative_standard_error_percent,
        "standards": [
            {
                "cod": row.cod,
                "absorbance": row.absorbance,
                "back_calculated": row.back_calculated,
                "recovery_percent": row.recovery_percent,
            }
            for row in curve.standards
        ],
    }


def _reported_json(reported: Reported | None) -> Json | None:
    if reported is None:
        return None
    cod = reported.text if reported.cod is None else reported.cod
    return {"cod": cod, "expanded_u": reported.expanded_u}


def _advice_json(advice: Advice | None) -> Json | None:
    if advice is None:
        return None
    return {"action": advice.action, "dilution_factor": advice.dilution_factor, "why": advice.why}


def _sample_json(result: SampleResult) -> Json:
    budget = result.budget
    return {
        "sample": result.sample,
        "used": list(result.used),
        "excluded": [{"index": e.index, "by": e.by, "reason": e.reason} for e in result.excluded],
        "suspect": result.suspect,
        "absorbance": result.absorbance,
        "in_tube": result.in_tube,
        "cod": result.cod,
        "u": budget and budget.u,
        "dof": budget and budget.dof,
        "expanded_u": budget and budget.expanded_u,
        "components": budget and {part.name: part.u for part in budget.components},
        "status": result.status,
        "reported": _reported_json(result.reported),
        "advice": _advice_json(result.advice),
    }


def _checks_json(checks: Checks) -> Json:
    blank = checks.blank
    return {
        "verifications": [
            {"expected": v.expected, "found": v.found, "recovery_percent": v.recovery_percent, "ok": v.ok}
            for v in checks.verifications
        ],
        "duplicates": [
            {"samples": list(d.samples), "rpd_percent": d.rpd_percent, "ok": d.ok} for d in checks.duplicates
        ],
        "spikes": [
            {
                "unspiked": s.unspiked,
                "spiked": s.spiked,
                "recovery_percent": s.recovery_percent,
                "ok": s.ok,
            }
            for s in checks.spikes
        ],
        "blank": None if blank is None else {"mean": blank.mean, "sd": blank.sd},
    }


def result_json(result: RunResult) -> Json:
    """Return a run's results as the contract of ``calculate`` writes them."""
    return {
        "samples": [_sample_json(sample) for sample in result.samples],
        "checks": _checks_json(result.checks),
        "ok": result.ok,
        "calibration": curve_json(result.curve),
        "warnings": list(result.warnings),
    }


VERBS = {
    "oxygen-demand": oxygen_demand_verb,
    "recipe": recipe_verb,
    "fit": fit_verb,
    "calculate": calculate_verb,
    "detection-limit": detection_limit_verb,
}
