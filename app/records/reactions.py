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
from enum import IntEnum, auto
from typing import Any

from app.errors import WeirbookError
from app.records import charts, interferences, laboratory, outlooks, studies, trust
from app.records.change import Change, Stating

Due = tuple[int, str]


class Sum(IntEnum):
    """The sums, in the order in which they are done."""

    DERIVE_RECIPE = auto()
    FIT_CURVE = auto()
    JUDGE_CHECK = auto()
    CALCULATE_RUN = auto()
    JUDGE_RUN = auto()
    FREEZE = auto()
    TAKE_TUBE = auto()
    COMPUTE_LIMIT = auto()
    QUALIFY = auto()
    LEARN = auto()
    LOOK_AHEAD = auto()
    JUDGE = auto()


ALL = tuple(Sum)
LATE = (Sum.LEARN, Sum.LOOK_AHEAD, Sum.JUDGE)
AT_ONCE = tuple(one for one in Sum if one not in LATE)
#: How a failed sum is named in the journal: never renamed.
NAMES = {
    Sum.DERIVE_RECIPE: "derive",
    Sum.FIT_CURVE: "fit",
    Sum.JUDGE_CHECK: "check",
    Sum.CALCULATE_RUN: "calculate",
    Sum.JUDGE_RUN: "control charts",
    Sum.FREEZE: "freeze",
    Sum.TAKE_TUBE: "take",
    Sum.COMPUTE_LIMIT: "detection limit",
    Sum.QUALIFY: "qualify",
    Sum.LEARN: "learn",
    Sum.LOOK_AHEAD: "look ahead",
    Sum.JUDGE: "back-test",
}

log = logging.getLogger("weirbook")

_REACTIONS: dict[int, Callable[[Stating, str], None]] = {
    Sum.DERIVE_RECIPE: laboratory.derive_recipe,
    Sum.FIT_CURVE: laboratory.fit_curve,
    Sum.JUDGE_CHECK: laboratory.judge_check,
    Sum.CALCULATE_RUN: laboratory.calculate_run,
    Sum.JUDGE_RUN: charts.judge_run,
    Sum.FREEZE: charts.freeze_baseline,
    Sum.TAKE_TUBE: studies.take_tube,
    Sum.COMPUTE_LIMIT: studies.compute_limit,
    Sum.QUALIFY: interferences.qualify,
    Sum.LEARN: outlooks.learn_again,
    Sum.LOOK_AHEAD: outlooks.look_ahead,
    Sum.JUDGE: trust.judge_again,
}


def due(change: Change) -> Iterator[Due]:
    """Yield what an entry makes due, in the order of the sums."""
    kind, about = change.entry.kind, change.entry.about
    if kind == "recipe.adopted":
        yield Sum.DERIVE_RECIPE, about
        yield Sum.JUDGE, "programme"
    elif kind == "calibration.made":
        yield Sum.FIT_CURVE, about
    elif kind == "curve.checked":
        yield Sum.JUDGE_CHECK, f"{about} {change.entry.id}"
    elif kind == "readings.finished" or (kind == "tube.excluded" and _calculated(change)):
        yield Sum.CALCULATE_RUN, about
    elif kind == "run.closed" and change.body["decisions"]:
        yield Sum.JUDGE_RUN, about
    elif kind == "baseline.frozen":
        yield Sum.FREEZE, about
    elif kind == "study.result" and change.body["run"] is not None:
        yield Sum.TAKE_TUBE, f"{about} {change.body['row']}"
    elif kind == "study.finished":
        yield Sum.COMPUTE_LIMIT, about
    elif kind == "meter.checked":
        yield from ((Sum.QUALIFY, id_) for id_ in interferences.of_meter(change, about))
    elif kind in ("bottle.measured", "sample.taken"):
        yield from ((Sum.QUALIFY, id_) for id_ in interferences.of_bottle(change, change.body["bottle"]))
    elif kind in ("point.registered", "result.recorded", "result.reviewed", "run.calculated"):
        if kind == "run.calculated":
            yield Sum.JUDGE_RUN, about
        yield Sum.LEARN, "programme"
        yield Sum.JUDGE, "programme"
        yield from ((Sum.LOOK_AHEAD, point) for point in _points(change))
        yield from ((Sum.QUALIFY, one["id"]) for one in change.body.get("results", []))


def failure(what: Due, error: Exception) -> dict[str, Any]:
    """Return what is stated of a sum that could not be done."""
    if not isinstance(error, WeirbookError):
        log.exception("a sum failed", exc_info=error)
        error = WeirbookError(
            "The server failed at this sum. What was stated is kept; tell the administrator."
        )
    named = {"software": laboratory.SOFTWARE, "what": NAMES[Sum(what[0])]}
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
        point = change.need("result", change.entry.about)["point"]
        yield from [point] if point else []
    else:
        yield from sorted({one["point"] for one in change.body["results"] if one["point"]})
