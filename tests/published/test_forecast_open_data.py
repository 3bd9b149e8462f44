"""The forecast on open series: the share right at the first digestion, and its calibration.

Hong Kong rivers: Environmental Protection Department, Hong Kong SAR (DATA.GOV.HK
terms). Storm water: National Stormwater Quality Database (Pitt and Maestre).
Urban works: UCI Water Treatment Plant (Poch, Bejar, Cortes 1993; CC BY 4.0).
Values are taken 20 times, so that a river stands in for a strong point. The
figures to reach were set before the model was made.
"""

from __future__ import annotations

import csv
import math
from collections import defaultdict
from datetime import date
from functools import lru_cache
from pathlib import Path

import numpy as np
import pytest

from app.forecast import Observation, Programme
from app.forecast.learning import Point, learn
from app.forecast.trust import Trust, backtest, one_step_ahead
from tests.forecast.made import HIGH, LADDER

pytestmark = [pytest.mark.published, pytest.mark.slow]

TIMES = 20.0
READINGS = {"conductivity_us_cm": "cond_uS_cm", "turbidity_ntu": "turb_NTU", "ph": "ph"}


def readings_of(row: dict[str, str]) -> dict[str, float]:
    """Return the readings of a row; a missing one, or a pH that is none, is left out."""
    told = {name: float(row[column]) for name, column in READINGS.items() if row[column]}
    return {name: value for name, value in told.items() if value > 0 and (name != "ph" or value < 14)}


@lru_cache(maxsize=2)
def points_of(path: Path) -> tuple[tuple[Observation, ...], ...]:
    """Return the stations of a file; a value under the detection limit is taken as its limit."""
    found: dict[str, list[Observation]] = defaultdict(list)
    with path.open(encoding="utf-8", newline="") as source:
        for row in csv.DictReader(source):
            if row["cod_mg_L"] and float(row["cod_mg_L"]) > 0:
                days = date.fromisoformat(row["date"]).toordinal() - date(1970, 1, 1).toordinal()
                found[row["site"]].append(
                    Observation(days, TIMES * float(row["cod_mg_L"]), "ok", readings_of(row))
                )
    return tuple(tuple(sorted(one, key=lambda each: each.days)) for one in found.values())


def judged(points: tuple[tuple[Observation, ...], ...]) -> Trust:
    """Return the back-test with the starting programme, from each station's sixth sample."""
    return backtest(Programme.default(), [Point(None, one) for one in points], (HIGH,), LADDER)


def test_polluted_rivers_with_readings(shared: Path) -> None:
    found = judged(points_of(shared / "data" / "hk_rivers_strong.open.csv"))
    assert found.forecast.n == 5274
    assert (found.forecast.right or 0) >= 0.953
    assert (found.forecast.over or 1) <= 0.017
    assert 0.88 <= (found.inside_90 or 0) <= 0.93
    assert (found.log_density or -9) >= -0.95
    assert found.last_value.right == pytest.approx(0.903, abs=0.001)
    assert found.median_of_five.right == pytest.approx(0.909, abs=0.001)
    assert found.oracle.right == pytest.approx(0.993, abs=0.001)


def test_storm_water_with_many_short_histories(shared: Path) -> None:
    found = judged(points_of(shared / "data" / "nsqd_stormwater.open.csv"))
    assert (found.forecast.right or 0) >= 0.925
    assert (found.forecast.right or 0) > (found.median_of_five.right or 1)
    assert 0.88 <= (found.inside_90 or 0) <= 0.93


def test_the_first_five_samples_of_a_new_station(shared: Path) -> None:
    """Each station left out of the learning in turn."""
    points = points_of(shared / "data" / "hk_rivers_strong.open.csv")
    right = n = 0.0
    for i, own in enumerate(points):
        programme = learn([Point(None, one) for j, one in enumerate(points) if j != i])
        found = backtest(programme, [Point(None, own[:5])], (HIGH,), LADDER, first=1).forecast
        right, n = right + (found.right or 0) * found.n, n + found.n
    assert n == 52
    assert right / n >= 0.75


def integral_transform(points: tuple[tuple[Observation, ...], ...]) -> np.ndarray:
    """Return where each result fell in what was expected of it, 0 to 1, from the sixth on."""
    found = []
    for own in points:
        ahead = one_step_ahead(Programme.default(), None, own)
        found += [e.cdf(one.cod) for e, one in zip(ahead[5:], own[5:], strict=True)]
    return np.array(found)


@pytest.mark.parametrize("name", ["hk_rivers_strong.open.csv", "nsqd_stormwater.open.csv"])
def test_the_probability_integral_transform_is_near_uniform(shared: Path, name: str) -> None:
    """Dawid 1984: a share p of results lies below the p quantile; here within 7 % everywhere."""
    places = np.sort(integral_transform(points_of(shared / "data" / name)))
    assert np.abs(places - (np.arange(len(places)) + 0.5) / len(places)).max() < 0.07


def test_the_inlet_of_an_urban_works_day_by_day(shared: Path) -> None:
    history = []
    with (shared / "data" / "uci_wwtp_daily.open.csv").open(encoding="utf-8", newline="") as source:
        for row in csv.DictReader(source):
            if row["inlet_COD_mg_L"]:
                days = date.fromisoformat(row["date"]).toordinal()
                salt = {"conductivity_us_cm": float(row["inlet_COND_uS_cm"])}
                history.append(Observation(days, TIMES * float(row["inlet_COD_mg_L"]), "ok", salt))
    found = judged((tuple(history),))
    assert found.forecast.right == 1.0
    assert 0.88 <= (found.inside_90 or 0) <= 0.93
    assert math.isfinite(found.log_density or math.nan)
