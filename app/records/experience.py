"""What the laboratory's own runs have taught: the scatter of its tubes.

Until 20 sets of tubes exist the programme's starting value holds; then the
laboratory's own, pooled from the latest runs with its degrees of freedom. A
value whose degrees of freedom the programme has set itself is left as it is.
"""

from __future__ import annotations

from dataclasses import asdict

from app.chemistry.repeatability import Repeatability, TubeSet, pool
from app.records.change import Body, Stating

LATEST_RUNS = 100


def tube_sets(run: Body) -> list[TubeSet]:
    """Return the sets of tubes of a calculated run, those that disagree among them."""
    found: dict[tuple[str, float], list[float]] = {}
    for tube in run["tubes"]:
        if tube["role"] == "sample" and tube["excluded"] is None and tube["in_tube"] is not None:
            found.setdefault((tube["bottle"], tube["dilution"]["factor"]), []).append(tube["in_tube"])
    over = {one["sample"].split(" ")[0] for one in run["answer"]["samples"] if one["status"] == "over"}
    return [TubeSet(tuple(cod)) for (code, _), cod in found.items() if len(cod) >= 2 and code not in over]


def repeatability(writing: Stating, settings: Body) -> Body:
    """Return the repeatability in force as ``calculate`` takes it."""
    given: Body = settings["repeatability"]
    if given["dof"] is not None:
        return given
    runs = [run for run in writing.latest("run", LATEST_RUNS) if run["answer"]]
    history = [one for run in runs for one in tube_sets(run)]
    return asdict(pool(history, Repeatability(given["a"], given["k"])).repeatability)
