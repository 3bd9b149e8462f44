"""The forecast on open series: the share right at the first digestion, and its calibration.

The series and their sources: ``tests/forecast/open_series.py``; the long table
is ``python -m tests.bench forecast FOLDER``. The figures to reach were set
before the model was made; the series are absent from the project, and without
them these tests are skipped and say so.
"""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from tests.forecast.open_series import (
    RIVERS,
    STORMS,
    WORKS,
    first_five,
    integral_transform,
    judged,
    off_uniform,
    points_of,
    works_of,
)

pytestmark = [pytest.mark.published, pytest.mark.slow]


def test_polluted_rivers_with_readings(shared: Path) -> None:
    found = judged(points_of(shared / "data" / RIVERS))
    assert found.forecast.n == 5274
    assert (found.forecast.right or 0) >= 0.953
    assert (found.forecast.over or 1) <= 0.017
    assert 0.88 <= (found.inside_90 or 0) <= 0.93
    assert (found.log_density or -9) >= -0.95
    assert found.last_value.right == pytest.approx(0.903, abs=0.001)
    assert found.median_of_five.right == pytest.approx(0.909, abs=0.001)
    assert found.oracle.right == pytest.approx(0.993, abs=0.001)


def test_storm_water_with_many_short_histories(shared: Path) -> None:
    found = judged(points_of(shared / "data" / STORMS))
    assert (found.forecast.right or 0) >= 0.925
    assert (found.forecast.right or 0) > (found.median_of_five.right or 1)
    assert 0.88 <= (found.inside_90 or 0) <= 0.93


def test_the_first_five_samples_of_a_new_station(shared: Path) -> None:
    """Each station left out of the learning in turn; the very first sample is counted too."""
    points = points_of(shared / "data" / RIVERS)
    assert len(points) == 13
    assert sum(first_five(points)) / (5 * len(points)) >= 0.75


@pytest.mark.parametrize("name", [RIVERS, STORMS, WORKS])
def test_the_probability_integral_transform_is_near_uniform(shared: Path, name: str) -> None:
    """Dawid 1984: a share p of results lies below the p quantile; here within 7 % everywhere."""
    points = works_of(shared / "data" / name) if name == WORKS else points_of(shared / "data" / name)
    places = integral_transform(points)
    assert len(places) >= 300
    assert off_uniform(places) < 0.07


def test_the_inlet_of_an_urban_works_day_by_day(shared: Path) -> None:
    found = judged(works_of(shared / "data" / WORKS))
    assert found.forecast.right == 1.0
    assert 0.88 <= (found.inside_90 or 0) <= 0.93
    assert math.isfinite(found.log_density or math.nan)
