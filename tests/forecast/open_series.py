"""Open series as points, for the tests that judge the forecast and for the long table of the bench.

Hong Kong rivers: Environmental Protection Department, Hong Kong SAR (DATA.GOV.HK
terms). Storm water: National Stormwater Quality Database (Pitt and Maestre).
Urban works: UCI Water Treatment Plant (Poch, Bejar, Cortes 1993; CC BY 4.0).
Values are taken 20 times, so that a river stands in for a strong point.
"""

from __future__ import annotations

import csv
from collections import defaultdict
from collections.abc import Sequence
from datetime import date
from functools import lru_cache
from pathlib import Path

import numpy as np

from app.forecast import Observation, Predictive, Programme, plan
from app.forecast.learning import Point, learn
from app.forecast.trust import Trust, backtest, one_step_ahead
from tests.forecast.made import HIGH, LADDER

Series = tuple[tuple[Observation, ...], ...]
TIMES = 20.0
RIVERS, STORMS, WORKS = "hk_rivers_strong.open.csv", "nsqd_stormwater.open.csv", "uci_wwtp_daily.open.csv"
READINGS = {"conductivity_us_cm": "cond_uS_cm", "turbidity_ntu": "turb_NTU", "ph": "ph"}


def _days(text: str) -> int:
    return date.fromisoformat(text).toordinal() - date(1970, 1, 1).toordinal()


def readings_of(row: dict[str, str]) -> dict[str, float]:
    """Return the readings of a row; a missing one, or a pH that is none, is left out."""
    told = {name: float(row[column]) for name, column in READINGS.items() if row[column]}
    return {name: value for name, value in told.items() if value > 0 and (name != "ph" or value < 14)}


def _rows(path: Path) -> list[dict[str, str]]:
    with path.open(encoding="utf-8", newline="") as source:
        return list(csv.DictReader(source))


@lru_cache(maxsize=4)
def points_of(path: Path, readings: bool = True, bounds: bool = False) -> Series:
    """Return the stations of a file.

    A value under the detection limit is taken as its limit, or with ``bounds`` as less than it.
    """
    state = {"<": "below", ">": "over"} if bounds else {}
    found: dict[str, list[Observation]] = defaultdict(list)
    for row in _rows(path):
        if row["cod_mg_L"] and float(row["cod_mg_L"]) > 0:
            found[row["site"]].append(
                Observation(
                    _days(row["date"]),
                    TIMES * float(row["cod_mg_L"]),
                    state.get(row["cod_qual"], "ok"),  # type: ignore[arg-type]
                    readings_of(row) if readings else {},
                )
            )
    return tuple(tuple(sorted(one, key=lambda each: each.days)) for one in found.values())


def works_of(path: Path, stage: str = "inlet", salt: str = "inlet") -> Series:
    """Return one stage of the urban works, day by day, with its conductivity."""
    found = [
        Observation(
            _days(row["date"]),
            TIMES * float(row[f"{stage}_COD_mg_L"]),
            "ok",
            {"conductivity_us_cm": float(row[f"{salt}_COND_uS_cm"])} if row[f"{salt}_COND_uS_cm"] else {},
        )
        for row in _rows(path)
        if row[f"{stage}_COD_mg_L"]
    ]
    return (tuple(found),)


def judged(points: Series, programme: Programme | None = None, first: int = 5) -> Trust:
    """Return the back-test, from each station's sixth sample unless told otherwise."""
    told = [Point(None, one) for one in points]
    return backtest(programme or Programme.default(), told, (HIGH,), LADDER, first)


def _right(expected: Predictive, one: Observation) -> bool:
    choice = plan(expected, (HIGH,), LADDER).choice
    return choice is not None and HIGH.low <= one.cod / choice.dilution_factor <= HIGH.high


def first_five(points: Series) -> list[int]:
    """Return how many stations were right at their first to fifth sample, each left out of the learning."""
    right = [0] * 5
    for i, own in enumerate(points):
        programme = learn([Point(None, one) for j, one in enumerate(points) if j != i])
        for t, expected in enumerate(one_step_ahead(programme, None, own[:5])):
            right[t] += _right(expected, own[t])
    return right


def integral_transform(points: Series) -> np.ndarray:
    """Return where each value fell in what was expected of it, 0 to 1, from the sixth on, rising."""
    found = []
    for own in points:
        ahead = one_step_ahead(Programme.default(), None, own)
        told = zip(ahead[5:], own[5:], strict=True)
        found += [expected.cdf(one.cod) for expected, one in told if one.state == "ok"]
    return np.sort(found)


def off_uniform(places: Sequence[float] | np.ndarray) -> float:
    """Return the largest distance of the integral transform from an even one (Dawid 1984)."""
    even = (np.arange(len(places)) + 0.5) / len(places)
    return float(np.abs(np.asarray(places) - even).max())
