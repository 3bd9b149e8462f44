"""The next dilution of a sample whose tubes gave no number, stated beside its result.

What the point's past and the readings let expect is cut at what the tube has
shown, and planned anew. Where that leaves nothing (no point, or a tube that
nobody expected) the run's own advice stands, which knows only this tube.
"""

from __future__ import annotations

from app.forecast import Now, Range, Sample, Shelf, expected, posterior
from app.forecast.glass import chains_for
from app.forecast.planning import Plan
from app.forecast.worth import next_dilution
from app.records.change import Body, Stating
from app.records.outlooks import chloride_known, days, observation, programme, readings


def _percent(share: float) -> str:
    """Return a share as a whole percentage that never says 0 or 100 when it is neither."""
    whole = round(100 * share)
    return "over 99 %" if whole == 100 and share < 1 else "under 1 %" if whole == 0 else f"{whole} %"


def _steps(factor: float, solids: bool) -> list[Body]:
    chains = chains_for(factor, solids=solids)
    steps = chains[0].steps if chains else ()
    return [{"pipette_ml": step.pipette_ml, "flask_ml": step.flask_ml} for step in steps]


def _planned(writing: Stating, result: Body, sample: Body, settings: Body) -> Plan | None:
    point = writing.get("point", result["point"]) or {}
    now = Now(days(result["collected_at"]), readings(result["field"]), result["activity"])
    others = [one for _, one in writing.find("result", result["point"]) if one["bottle"] != result["bottle"]]
    past = [one for one in map(observation, others) if one is not None and one.days <= now.days]
    known = posterior(programme(writing), point["sector"], past)
    ranges = [
        Range(
            id_,
            recipe["working_low"],
            recipe["working_high"],
            (recipe["derived"] or {}).get("chloride_limit"),
            recipe["working_low"],
        )
        for id_, recipe in writing.find("recipe")
    ]
    limits = [one["limit"] for one in result["verdicts"] if one["basis"] == "daily_maximum"]
    chloride = chloride_known(writing.get("interferents", result["bottle"]) or {}, result["field"])
    needs = Sample(
        chloride["mg_l"] if chloride else None,
        decision_limit=limits[0] if limits else None,
        replicates=settings["replicates"],
        solids=sample.get("solids", False),
    )
    bound = result["top"] if result["status"] == "over" else result["reporting_level"]
    return next_dilution(
        expected(known, now), bound, result["status"], ranges, settings["dilutions"], needs, Shelf()
    )


def _better(plan: Plan, result: Body, recipe: str) -> bool:
    """Tell whether a plan is on the side that the tube has shown."""
    if plan.range != recipe:
        return True
    over = result["status"] == "over"
    return (
        plan.dilution_factor > result["dilution_factor"]
        if over
        else (plan.dilution_factor < result["dilution_factor"])
    )


def next_of(writing: Stating, result: Body, recipe: str, sample: Body, settings: Body) -> Body | None:
    """Return the dilution for the repeat of a sample, or None where none helps.

    ``recipe`` is the id of the run's; ``sample`` what was stated at the point,
    empty where that is not known.
    """
    solids = sample.get("solids", False)
    if result["status"] in ("over", "below") and result["point"] and result["collected_at"]:
        plan = _planned(writing, result, sample, settings)
        if plan is not None and _better(plan, result, recipe):
            share = _percent(plan.p_in_range)
            rest = f"{_percent(plan.p_over)} would go over, {_percent(plan.p_below)} under"
            return {
                "recipe": plan.range,
                "dilution_factor": plan.dilution_factor,
                "steps": _steps(plan.dilution_factor, solids),
                "p_in_range": plan.p_in_range,
                "why": f"By this tube and the point's past {share} fall in range; {rest}.",
                "from": "forecast",
            }
    advice = result["advice"]
    if advice is None or advice["dilution_factor"] is None:
        return None
    factor = advice["dilution_factor"]
    stated = {"recipe": recipe, "dilution_factor": factor, "steps": _steps(factor, solids)}
    return stated | {"p_in_range": None, "why": advice["why"], "from": "tube"}
