"""The vectors that the tablet's twin is held to, made by the server's side."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import asdict, replace
from typing import Any

from app.forecast import (
    Now,
    Observation,
    Plan,
    Planned,
    Posterior,
    Predictive,
    Programme,
    Range,
    Sample,
    Shelf,
    bounded_readings,
    expected,
    plan,
    posterior,
)
from app.forecast.predictive import Beyond
from app.forecast.worth import worth_measuring
from tests.forecast.made import LADDER, walk

DILUTIONS = (*LADDER, 7.0)

HIGH = Range("high", 20.0, 900.0, 1998.0, 20.0, 33.8)
LOW = Range("low", 5.0, 150.0, 1998.0, 5.0)
NARROW = Range("narrow", 100.0, 250.0)
SAMPLES = (
    Sample(),
    Sample(3000.0, decision_limit=1500.0),
    Sample(decision_limit=60.0, replicates=4),
    Sample(2001.0, 12.0, 400.0, 2, solids=True),
    Sample(volume_ml=6.5, replicates=3),
    Sample(4001.0, 3.0, solids=True),
)
READINGS: tuple[dict[str, float], ...] = (
    {},
    {"conductivity_us_cm": 1500.0, "ph": 6.1},
    {"turbidity_ntu": 90000.0, "temperature_c": 31.0},
)


def history(n: int, level: float) -> list[Observation]:
    """Return a plausible past: a slow wave, readings that follow it, a bound now and then."""
    found = []
    for i in range(n):
        swing = 1.0 + 0.4 * ((i * 7) % 5 - 2) / 2
        state = "over" if i % 9 == 8 else "below" if i % 11 == 10 else "ok"
        readings = {
            "conductivity_us_cm": 900.0 * swing,
            "turbidity_ntu": 120.0 * swing**1.5,
            "ph": 7 + i % 3 / 5,
        }
        found.append(Observation(20000.0 + 17.3 * i, level * swing, state, readings if i % 4 else {}))
    return found


def pasts() -> Iterator[tuple[str | None, list[Observation]]]:
    """Yield a sector and a past: none, short, long, with bounds, ruled by conductivity."""
    yield "dairy", []
    yield None, history(1, 800.0)
    yield "dairy", history(6, 2300.0)
    yield "textile", history(40, 310.0)
    yield None, walk(60, slope=1.2, noise=0.1)


def _plan(one: Plan) -> dict[str, Any]:
    chain = one.chain
    steps = [] if chain is None else [asdict(step) for step in chain.steps]
    numbers = {name: value for name, value in asdict(one).items() if name != "chain"}
    return {
        **numbers,
        "objections": list(one.objections),
        "steps": steps,
        "relative_u": None if chain is None else chain.relative_u,
    }


def _planned(given: Planned) -> dict[str, Any]:
    split = given.split and {**asdict(given.split), "plans": list(given.split.plans)}
    place = None if given.choice is None else given.plans.index(given.choice)
    return {"plans": [_plan(one) for one in given.plans], "choice": place, "split": split}


def _distribution(predictive: Predictive) -> dict[str, Any]:
    return {
        "quantiles": {p: predictive.quantile(float(p)) for p in ("0.05", "0.25", "0.5", "0.95")},
        "cdf": {c: predictive.cdf(float(c)) for c in ("20", "900", "4500")},
        "density": {x: predictive.density(float(x)) for x in ("4", "6.5", "9")},
    }


def _case(pack: dict[str, Any], now: Now, ranges: tuple[Range, ...], sample: Sample) -> dict[str, Any]:
    known = Posterior.from_json(pack)
    predictive = expected(known, now)
    planned = plan(predictive, ranges, DILUTIONS, sample, Shelf())
    after = [
        {
            "bound": bound,
            "above": above,
            **_planned(plan(Beyond(predictive, bound, above), ranges, DILUTIONS, shelf=Shelf())),
        }
        for bound, above in ((900.0, True), (400.0, False))
    ]
    return {
        "pack": pack,
        "now": asdict(now),
        "ranges": [asdict(one) for one in ranges],
        "dilutions": DILUTIONS,
        "sample": asdict(sample),
        "bounded": list(bounded_readings(known, now)),
        **_distribution(predictive),
        **_planned(planned),
        "worth": [asdict(one) for one in worth_measuring(known, now, planned, ranges)],
        "after": after,
    }


def cases() -> list[dict[str, Any]]:
    """Return packs with the moment's readings, a sample and recipes, and what Python makes of them."""
    found = []
    for sector, past in pasts():
        pack = posterior(Programme.default(), sector, past).to_json()
        for i, readings in enumerate(READINGS):
            now = Now(22000.0, readings, ("production", None, "cleaning")[i])
            found += [_case(pack, now, (HIGH, LOW), one) for one in SAMPLES]
            found += [_case(pack, now, (NARROW,), replace(SAMPLES[0], replicates=r)) for r in (1, 3)]
    return found
