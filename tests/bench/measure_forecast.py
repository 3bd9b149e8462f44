"""The forecast: plans a second on the command line, and packs for a large programme."""

from __future__ import annotations

import math
import time
from collections.abc import Iterator
from datetime import UTC, datetime, timedelta
from typing import Any

from app.forecast import Observation, Programme, Range, posterior
from app.forecast.learning import Point
from app.forecast.trust import backtest_each
from tests.bench.measure import Measure
from tests.bench.measure_sums import lines_a_second

POINTS, RESULTS = 1000, 24
BEGAN = datetime(2029, 1, 9, 15, 0, tzinfo=UTC)


def result(i: int, level: float) -> dict[str, Any]:
    """Return one invented result: a slow wave, readings that follow it, every twentieth over range."""
    swing = math.exp(0.5 * math.sin(i / 5.0) + 0.3 * math.cos(i * 2.4))
    salt, solids = round(1500 * swing**0.5), round(80 * swing)
    return {
        "at": (BEGAN + timedelta(days=11 * i)).isoformat(),
        "cod": round(level * swing, 1),
        "state": "over" if i % 20 == 19 else "ok",
        "field": {"conductivity_us_cm": salt, "turbidity_ntu": solids, "ph": 7.1},
        "activity": "production",
    }


def plan_line(results: int = 100) -> dict[str, Any]:
    """Return one request with a long history, two readings and two recipes."""
    return {
        "sector": "dairy",
        "history": [result(i, 2300.0) for i in range(results)],
        "now": {
            "at": (BEGAN + timedelta(days=11 * results)).isoformat(),
            "field": {"conductivity_us_cm": 1700, "turbidity_ntu": 95},
            "activity": "cleaning",
            "chloride": 900,
            "volume_ml": 250,
        },
        "ranges": [
            {"name": "high", "low": 50, "high": 900, "chloride_limit": 1998, "reporting": 50},
            {"name": "low", "low": 10, "high": 150, "chloride_limit": 1998, "reporting": 10},
        ],
        "dilutions": [1, 2, 4, 5, 10, 20, 25, 50, 100],
        "decision_limit": 1500,
        "replicates": 3,
    }


def history(level: float) -> list[Observation]:
    """Return two years of an invented point, sampled monthly."""
    told = [result(i, level) for i in range(RESULTS)]
    return [
        Observation(20000.0 + 30 * i, one["cod"], one["state"], one["field"], one["activity"])
        for i, one in enumerate(told)
    ]


def packs() -> float:
    """Return the seconds that the packs of a large programme take."""
    histories = [history(200.0 + 10 * i) for i in range(POINTS)]
    programme = Programme.default()
    began = time.perf_counter()
    for one in histories:
        posterior(programme, "dairy", one).to_json()
    return time.perf_counter() - began


def judged() -> float:
    """Return the seconds that the back-test of a large programme takes, point by point and in all."""
    points = [Point("dairy", history(200.0 + 10 * i)) for i in range(POINTS)]
    ranges = (Range("high", 50, 900), Range("low", 10, 150))
    began = time.perf_counter()
    backtest_each(Programme.default(), points, ranges, (1, 2, 4, 5, 10, 20, 25, 50, 100))
    return time.perf_counter() - began


def measures() -> Iterator[Measure]:
    """Time plans with histories of 100 results, packs and the back-test for 1,000 points of 24."""
    pace = lines_a_second("plan", plan_line())
    yield Measure("plan, a history of 100 results, one core", pace, 200, "lines/s")
    yield Measure("packs for 1,000 points of 24 results", packs(), 5, "s", more_is_better=False)
    yield Measure("back-test of 1,000 points of 24 results", judged(), 15, "s", more_is_better=False)
