"""What the laboratory's own runs have taught: the scatter of its tubes and its bias, recipe by recipe.

Until 20 sets of tubes exist the programme's starting value of the
repeatability holds; then the laboratory's own, pooled from the latest runs
with its degrees of freedom. Until 20 control samples exist the programme's
setting of the bias holds; then the root mean square of their deviations with
the standard uncertainty of their known value (Nordtest TR 537). A value whose
degrees of freedom the programme has set itself is left as it is.
"""

from __future__ import annotations

from dataclasses import asdict

from app.chemistry.repeatability import ENOUGH_SETS, LabRepeatability, Repeatability, TubeSet, pool
from app.chemistry.uncertainty import ENOUGH_CONTROLS, Bias, bias_from_controls
from app.records import controls
from app.records.change import Body, Stating

LATEST_RUNS = 100


def tube_sets(run: Body) -> list[TubeSet]:
    """Return the sets of tubes of a calculated run, those that disagree among them."""
    found: dict[tuple[str, float], list[float]] = {}
    for tube in run["tubes"]:
        if tube["role"] == "sample" and tube["excluded"] is None and tube["in_tube"] is not None:
            found.setdefault((tube["bottle"], tube["dilution"]["factor"]), []).append(tube["in_tube"])
    answers = [one for one in run["answer"]["samples"] if not controls.is_extra(one["sample"])]
    over = {one["sample"].split(" ")[0] for one in answers if one["status"] == "over"}
    return [TubeSet(tuple(cod)) for (code, _), cod in found.items() if len(cod) >= 2 and code not in over]


def in_force(writing: Stating, settings: Body, recipe: str) -> Body:
    """Return the repeatability and the bias in force: what ``calculate`` takes, and where they come from."""
    latest = writing.latest("run", LATEST_RUNS)
    runs = [run for run in latest if run["answer"] and run["recipe"] == recipe]
    scatter, bias = _scatter(runs, settings), _bias(runs, settings)
    policy = {
        "repeatability": {name: scatter[name] for name in ("a", "k", "dof")},
        "bias_relative_u": bias["relative_u"],
        "bias_dof": bias["dof"],
    }
    return {"policy": policy, "repeatability": scatter, "bias": bias}


def _scatter(runs: list[Body], settings: Body) -> Body:
    given: Body = settings["repeatability"]
    if given["dof"] is not None:
        return given | {"sets": None, "own": False, "words": "set by the programme"}
    found = pool([one for run in runs for one in tube_sets(run)], Repeatability(given["a"], given["k"]))
    told = {"sets": found.sets, "own": found.own, "words": _scatter_words(found)}
    return asdict(found.repeatability) | told


def _scatter_words(found: LabRepeatability) -> str:
    if found.own:
        return f"the laboratory's own, pooled from its latest {found.sets} sets of tubes"
    return f"start values until {ENOUGH_SETS} own sets exist; {found.sets} so far"


def _recoveries(run: Body) -> list[float]:
    """Return the recoveries of a run's controls; one with a found cause says nothing of the bias."""
    unused = controls.unused(run)
    return [
        one["value"]
        for one in run.get("checks") or []
        if one["what"] == "control" and not one["left_out"] and one["value"] is not None
        if (one["what"], one["subject"]) not in unused
    ]


def _bias(runs: list[Body], settings: Body) -> Body:
    given = {"relative_u": settings["bias_relative_u"], "dof": settings["bias_dof"], "own": False}
    if settings["bias_dof"] is not None:
        return given | {"n": None, "words": "set by the programme"}
    recoveries = [value for run in runs for value in _recoveries(run)]
    n = len(recoveries)
    if n < ENOUGH_CONTROLS:
        return given | {
            "n": n,
            "words": f"the setting until {ENOUGH_CONTROLS} own controls exist; {n} so far",
        }
    found = bias_from_controls(recoveries, settings["standards_relative_u"])
    own = {"relative_u": found.relative_u, "dof": found.dof, "own": True, "n": n}
    return own | {"words": _bias_words(found, settings["standards_relative_u"])}


def _bias_words(found: Bias, known_u: float) -> str:
    return (
        f"root mean square deviation of the laboratory's {found.n} latest controls, their known value "
        f"uncertain by {100 * known_u:.2g} % (Nordtest TR 537); "
        f"mean recovery {found.mean_recovery_percent:.1f} %"
    )
