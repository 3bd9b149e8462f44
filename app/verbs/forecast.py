"""The verbs ``plan``, ``learn`` and ``backtest``."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from app.errors import InputError
from app.forecast import (
    Now,
    Plan,
    Planned,
    Posterior,
    Programme,
    Sample,
    Shelf,
    bounded_readings,
    expected,
    plan,
    posterior,
)
from app.forecast.learning import Point, learn
from app.forecast.trust import Shares, backtest
from app.forecast.worth import worth_measuring
from app.verbs.fields import load
from app.verbs.forecast_fields import BacktestSchema, LearnSchema, PlanSchema, days_of

QUANTILES = ("0.05", "0.25", "0.5", "0.75", "0.95")
FEW = 5
SCHEMAS = {"plan": PlanSchema(), "learn": LearnSchema(), "backtest": BacktestSchema()}


def _plan(one: Plan) -> dict[str, Any]:
    steps = one.chain.steps if one.chain else ()
    return {
        "range": one.range,
        "dilution_factor": one.dilution_factor,
        "steps": [{"pipette_ml": s.pipette_ml, "flask_ml": s.flask_ml} for s in steps],
        "relative_u": one.chain.relative_u if one.chain else None,
        "p_in_range": one.p_in_range,
        "p_over": one.p_over,
        "p_below": one.p_below,
        "chloride_after": one.chloride_after,
        "reporting_after": one.reporting_after,
        "usable": one.usable,
        "objections": list(one.objections),
        "expected_tubes": one.expected_tubes,
        "expected_mercury_mg": one.expected_mercury_mg,
    }


def _shelf(given: dict[str, Any]) -> Shelf | None:
    told = given["glassware"]
    if given["dilutions"] is None and told is None:
        words = "give dilutions, or glassware to find steps from"
        raise InputError("Nothing was planned.", {"dilutions": [words]})
    return Shelf(tuple(told["pipettes_ml"]), tuple(told["flasks_ml"])) if told else None


def _programme(told: Any) -> Programme:
    return Programme.default() if told is None else Programme.from_json(told)


def _basis(known: Posterior, now: Now, sector: str | None) -> str:
    """Say what the expectation rests on."""
    if known.n == 0:
        rests = f"what is usual for the sector {sector}" if sector else "nothing but what is usual anywhere"
    elif known.n < FEW:
        count = f"{known.n} result{'s' if known.n > 1 else ''} of this point"
        rests = f"only {count} and on {f'its sector {sector}' if sector else 'what is usual anywhere'}"
    else:
        rests = f"{known.n} results of this point"
    readings = " and today's field readings" if now.field else ""
    far = bounded_readings(known, now)
    words = ", ".join(name.replace("_us_cm", "").replace("_ntu", "").replace("_c", "") for name in far)
    odd = f" Far outside its past, check the reading: {words}; its pull is bounded." if far else ""
    return f" It rests on {rests}{readings}.{odd}"


def _answer(known: Posterior, now: Now, given: dict[str, Any], planned: Planned) -> dict[str, Any]:
    predictive = expected(known, now)
    quantiles = {name: predictive.quantile(float(name)) for name in QUANTILES}
    return {
        "expected": {"median": quantiles["0.5"], "quantiles": quantiles},
        "plans": [_plan(one) for one in planned.plans],
        "choice": planned.choice and _plan(planned.choice),
        "split": planned.split and {**asdict(planned.split), "plans": list(planned.split.plans)},
        "worth_measuring": [
            {
                "field": one.field,
                "p_in_range_now": one.p_in_range_now,
                "p_in_range_expected": one.p_in_range_expected,
            }
            for one in worth_measuring(known, now, planned, given["ranges"])
        ],
        "bounded": list(bounded_readings(known, now)),
        "why": planned.why + _basis(known, now, given["sector"]),
    }


def _after(given: dict[str, Any], days: float) -> dict[str, list[str]]:
    late = [i for i, one in enumerate(given["history"]) if one.days > days]
    return {f"history.{i}.at": ["is later than now"] for i in late}


def plan_verb(value: Any) -> dict[str, Any]:
    """Answer what to expect and how to dilute."""
    given = load(SCHEMAS["plan"], value)
    told = given["now"]
    now = Now(days_of(told["at"]), told["field"] or {}, told["activity"])
    late = _after(given, now.days)
    if late:
        raise InputError("A result cannot be later than the sample it helps to plan.", late)
    shelf = _shelf(given)
    sample = Sample(
        told["chloride"], told["volume_ml"], given["decision_limit"], given["replicates"], told["solids"]
    )
    known = posterior(_programme(given["programme"]), given["sector"], given["history"])
    planned = plan(expected(known, now), given["ranges"], given["dilutions"], sample, shelf)
    return _answer(known, now, given, planned)


def learn_verb(value: Any) -> dict[str, Any]:
    """Answer what the programme's points have in common."""
    given = load(SCHEMAS["learn"], value)
    return {"programme": learn([Point(p["sector"], p["history"]) for p in given["points"]]).to_json()}


def _shares(found: Shares) -> dict[str, Any]:
    return {
        "n": found.n,
        "right": found.right,
        "over": found.over,
        "below": found.below,
        "unknown": found.unknown,
    }


def backtest_verb(value: Any) -> dict[str, Any]:
    """Answer how the forecast would have done, beside rules of thumb and an oracle."""
    given = load(SCHEMAS["backtest"], value)
    points = [Point(p["sector"], p["history"]) for p in given["points"]]
    found = backtest(
        _programme(given["programme"]), points, given["ranges"], given["dilutions"], given["first"]
    )
    return {
        **_shares(found.forecast),
        "measured": found.measured,
        "coverage_50": found.inside_50,
        "coverage_90": found.inside_90,
        "mean_log_density": found.log_density,
        "rules": {
            "last_value": _shares(found.last_value),
            "median_of_five": _shares(found.median_of_five),
            "same_dilution": _shares(found.same_dilution),
        },
        "oracle": _shares(found.oracle),
        "settings": {"first": given["first"]},
    }


VERBS = {"plan": plan_verb, "learn": learn_verb, "backtest": backtest_verb}
