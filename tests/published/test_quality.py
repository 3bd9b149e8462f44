"""Checks, schedules and charts against worked examples and tabulated run lengths."""

from __future__ import annotations

import numpy as np
import pytest

from app.chemistry.control_charts import (
    D2_OF_TWO,
    RANGE_ACTION,
    RANGE_WARNING,
    cusum,
    ewma,
    freeze,
    individuals_limits,
    range_limits,
)
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


def test_the_constants_of_ranges_of_two_follow_from_the_normal_distribution() -> None:
    """Source: |N(0, 2)| has mean 2 / sqrt(pi) and variance 2 - 4 / pi: d2, d3; D4 = 1 + 3 d3 / d2."""
    d2, d3 = 2 / np.sqrt(np.pi), np.sqrt(2 - 4 / np.pi)
    assert pytest.approx(d2, abs=5e-5) == D2_OF_TWO
    assert pytest.approx(2.66, abs=0.002) == 3 / D2_OF_TWO
    assert pytest.approx(1 + 3 * d3 / d2, abs=6e-4) == RANGE_ACTION
    # the tables' 2.512 is made of d2 1.128 and d3 0.853; the exact value is 2.511
    assert pytest.approx(1 + 2 * 0.853 / 1.128, abs=6e-4) == RANGE_WARNING


FLOW = [49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1]


def test_the_handbooks_individuals_chart() -> None:
    """Source: NIST/SEMATECH e-Handbook 6.3.2.2, ten batches: mean 50.81, mean moving range 1.8778.

    Limits 55.8041 and 45.8159 with d2 1.128; mean, range and limits through a
    public copy, the ten values from memory.
    """
    baseline = freeze("ten batches", FLOW, fewest=10)
    assert (baseline.mean, baseline.mean_moving_range) == (
        pytest.approx(50.81),
        pytest.approx(1.8778, abs=5e-5),
    )
    limits = individuals_limits(baseline, "moving range")
    assert limits.upper_action == pytest.approx(55.8041, abs=0.002)  # d2 1.1284 here, 1.128 there
    assert limits.lower_action == pytest.approx(45.8159, abs=0.002)


MOVING = [52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5, *FLOW]


def test_the_handbooks_moving_average_by_the_bench() -> None:
    """Source: NIST/SEMATECH 6.3.2.4: weight 0.3, s 2.0539; limits 52.5884 and 47.4115, no signal."""
    found = ewma(MOVING, 50.0, 2.0539, weight=0.3, width=3.0)
    assert (found.upper, found.lower) == (pytest.approx(52.5884, abs=2e-4), pytest.approx(47.4115, abs=2e-4))
    assert found.values[:5] == pytest.approx((50.60, 49.52, 50.56, 50.18, 50.16), abs=0.0051)
    assert found.values[-3:] == pytest.approx((51.23, 51.94, 51.99), abs=0.0051)
    assert found.signals == ()


GROUPS = [324.925, 324.675, 324.725, 324.350, 325.350, 325.225, 324.125, 324.525, 325.225, 324.600]
GROUPS += [324.625, 325.150, 328.325, 327.250, 327.825, 328.500, 326.675, 327.775, 326.875, 328.350]


def test_the_handbooks_cumulative_sum() -> None:
    """Source: NIST/SEMATECH e-Handbook 6.3.2.3, all from memory: target 325, k 0.3175, h 4.1959.

    The upper sum is 3.01 at the thirteenth group and 4.94 at the fourteenth,
    which signals, as does every one after it; it ends at 19.04.
    """
    found = cusum(GROUPS, 325.0, 1.0, k=0.3175, h=4.1959)
    assert found.upper[12:16] == pytest.approx((3.01, 4.94, 7.45, 10.63), abs=0.011)
    assert found.upper[-1] == pytest.approx(19.04, abs=0.011)
    assert found.lower[6:11] == pytest.approx((0.56, 0.72, 0.17, 0.25, 0.31), abs=0.011)
    assert found.signals == tuple(range(13, 20))


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
