"""What the server answers: results, fitted curves, expectations, as entries of its own.

A handler only records; a reaction computes. What the next entry may build on
(a recipe's limits, a curve, a run's results) is stated at once; expectations
wait for the end of the transaction, so that a hundred results of one point
lead to one new expectation. A rebuild replays the
server's entries and never comes here.
"""

from __future__ import annotations

import logging
from collections.abc import Callable, Iterator
from typing import Any

from app.errors import WeirbookError
from app.records import interferences, laboratory, outlooks, studies, trust
from app.records.change import Change, Stating

Due = tuple[int, str]

DERIVE_RECIPE, FIT_CURVE, CALCULATE_RUN, TAKE_TUBE, COMPUTE_LIMIT, QUALIFY, LEARN, LOOK_AHEAD, JUDGE = range(
    9
)
AT_ONCE = (DERIVE_RECIPE, FIT_CURVE, CALCULATE_RUN, TAKE_TUBE, COMPUTE_LIMIT, QUALIFY)
ALL = (*AT_ONCE, LEARN, LOOK_AHEAD, JUDGE)
NAMES = (
    "derive",
    "fit",
    "calculate",
    "take",
    "detection limit",
    "qualify",
    "learn",
    "look ahead",
    "back-test",
)

log = logging.getLogger("weirbook")

_REACTIONS: dict[int, Callable[[Stating, str], None]] = {
    DERIVE_RECIPE: laboratory.derive_recipe,
    FIT_CURVE: laboratory.fit_curve,
    CALCULATE_RUN: laboratory.calculate_run,
    TAKE_TUBE: studies.take_tube,
    COMPUTE_LIMIT: studies.compute_limit,
    QUALIFY: interferences.qualify,
    LEARN: outlooks.learn_again,
    LOOK_AHEAD: outlooks.look_ahead,
    JUDGE: trust.judge_again,
}


def due(change: Change) -> Iterator[Due]:
    """Yield what an entry makes due, in the order of the sums."""
    kind, about = change.entry.kind, change.entry.about
    if kind == "recipe.adopted":
        yield DERIVE_RECIPE, about
        yield JUDGE, "programme"
    elif kind == "calibration.made":
        yield FIT_CURVE, about
    elif kind == "readings.finished" or (kind == "tube.excluded" and _calculated(change)):
        yield CALCULATE_RUN, about
    elif kind == "study.result" and change.body["run"] is not None:
        yield TAKE_TUBE, f"{about} {change.body['row']}"
    elif kind == "study.finished":
        yield COMPUTE_LIMIT, about
    elif kind in ("bottle.measured", "sample.taken"):
        yield from ((QUALIFY, id_) for id_ in interferences.of_bottle(change, change.body["bottle"]))
    elif kind in ("point.registered", "result.recorded", "result.reviewed", "run.calculated"):
        yield LEARN, "programme"
        yield JUDGE, "programme"
        yield from ((LOOK_AHEAD, point) for point in _points(change))
        yield from ((QUALIFY, one["id"]) for one in change.body.get("results", []))


def failure(what: Due, error: Exception) -> dict[str, Any]:
    """Return what is stated of a sum that could not be done."""
    if not isinstance(error, WeirbookError):
        log.exception("a sum failed", exc_info=error)
        error = WeirbookError(
            "The server failed at this sum. What was stated is kept; tell the administrator."
        )
    named = {"software": laboratory.SOFTWARE, "what": NAMES[what[0]]}
    return named | {"error": error.message, "fields": error.fields}


def run(what: Due, writing: Stating) -> None:
    """Do what is due."""
    _REACTIONS[what[0]](writing, what[1])


def _calculated(change: Change) -> bool:
    body = change.get("run", change.entry.about)
    return body is not None and body["state"] == "calculated"


def _points(change: Change) -> Iterator[str]:
    kind = change.entry.kind
    if kind == "point.registered":
        yield change.entry.about
    elif kind == "result.recorded":
        yield change.body["point"]
    elif kind == "result.reviewed":
        yield change.need("result", change.entry.about)["point"]
    else:
        yield from sorted({one["point"] for one in change.body["results"] if one["point"]})
