"""Checks, schedules and charts against worked examples and tabulated run lengths."""

from __future__ import annotations

import numpy as np
import pytest

from app.chemistry.control_charts import cusum, ewma, freeze, individuals_limits, range_limits
from app.chemistry.quality import duplicate_check, spike_check, spike_recovery, verifications_needed

pytestmark = pytest.mark.published


def test_spike_recovery_counts_the_added_volume() -> None:
    """Source: worked by hand: 300 mg/L, 50 mL and 1.00 mL of 10 000, found 478.0: 93.78 %, not 89.0 %."""
    assert spike_recovery(300, 478.0, 50, 1.0, 10_000) == pytest.approx(93.78, abs=0.005)
    assert spike_check(("P", "PS"), (300, 478.0), (50, 1.0), 10_000, (90, 110)).ok


def test_relative_percent_difference() -> None:
    """Source: Standard Methods 1020: 480 and 512 differ by 6.452 % of their mean."""
    assert duplicate_check(("A", "B"), 480, 512, 20, 10).rpd_percent == pytest.approx(6.452, abs=0.0005)


@pytest.mark.parametrize(
    ("analyses", "needed"), [(0, 0), (1, 2), (10, 2), (11, 3), (20, 3), (21, 4), (30, 4)]
)
def test_verifications_bracket_every_ten(analyses: int, needed: int) -> None:
    """Source: EPA 410.4 rev. 2.0, 9.3.4: after calibration, after every ten, at the end (not doubled)."""
    assert verifications_needed(analyses) == needed


CONTROLS = [97, 102, 99, 104, 96, 101, 98, 103, 100, 95, 105, 99, 101, 98, 102, 100, 97, 103, 99, 101]


def test_limits_of_individuals() -> None:
    """Source: worked by hand: mean 100.0, s 2.7145, mean moving range 4.42105, UCL 108.14 or 111.75."""
    baseline = freeze("twenty controls", CONTROLS)
    assert baseline.mean == pytest.approx(100.0)
    assert baseline.sd == pytest.approx(2.7145, abs=5e-5)
    assert baseline.mean_moving_range == pytest.approx(4.42105, abs=5e-6)
    assert individuals_limits(baseline).upper_action == pytest.approx(108.14, abs=0.005)
    assert individuals_limits(baseline, "moving range").upper_action == pytest.approx(111.75, abs=0.01)


def test_range_chart_factors() -> None:
    """Source: tables of control chart constants, ranges of two: D4 3.267; warning at 2.512."""
    limits = range_limits(freeze("ranges", [1.0, 3.0] * 10))
    assert (limits.upper_action, limits.upper_warning) == (pytest.approx(6.534), pytest.approx(5.024))


def test_ewma_by_hand() -> None:
    """Source: worked by hand: start 100, weight 0.2: 100.4, 99.92, 100.936, 102.1488."""
    found = ewma([102, 98, 105, 107], 100, 1.0)
    assert found.values == pytest.approx((100.4, 99.92, 100.936, 102.1488))


def test_upper_cusum_by_hand() -> None:
    """Source: worked by hand: k 0.5: 0, 0.6, 1.5, 1.9, 3.0, 4.5, which signals at h 4."""
    found = cusum([0.2, 1.1, 1.4, 0.9, 1.6, 2.0], 0.0, 1.0, h=4.0)
    assert found.upper == pytest.approx((0, 0.6, 1.5, 1.9, 3.0, 4.5))
    assert found.signals == (5,)


@pytest.mark.parametrize(("shift", "expected"), [(0.0, 500), (1.0, 10.5)])
def test_ewma_average_run_length(shift: float, expected: float) -> None:
    """Source: tables of EWMA charts (weight 0.2, width 2.962): 500 in control, 10.5 at one sigma."""
    rng = np.random.default_rng(1)
    lengths = [_first(ewma(rng.normal(shift, 1, 4000).tolist(), 0.0, 1.0).signals) for _ in range(500)]
    assert np.mean(lengths) == pytest.approx(expected, rel=0.12)


@pytest.mark.parametrize(("shift", "expected"), [(0.0, 465), (1.0, 10.38)])
def test_cusum_average_run_length(shift: float, expected: float) -> None:
    """Source: tables of CUSUM charts (k 0.5, h 5): 465 in control, 10.38 at one sigma."""
    rng = np.random.default_rng(2)
    lengths = [_first(cusum(rng.normal(shift, 1, 4000).tolist(), 0.0, 1.0).signals) for _ in range(500)]
    assert np.mean(lengths) == pytest.approx(expected, rel=0.12)


def _first(signals: tuple[int, ...]) -> int:
    return signals[0] + 1 if signals else 4000
