"""Control charts: frozen baselines, and the rule that fired in words."""

from __future__ import annotations

import pytest

from app.chemistry.control_charts import (
    Limits,
    cusum,
    ewma,
    freeze,
    individuals_limits,
    no_wider_than,
    range_limits,
    rules_fired,
)
from app.errors import InputError

ALTERNATING = [99.0, 101.0] * 10
LIMITS = Limits(100.0, 2.0, 94.0, 96.0, 104.0, 106.0, "spring")


def words(*values: float) -> list[tuple[int, bool, str]]:
    return [(f.index, f.stops, f.words) for f in rules_fired(values, LIMITS)]


def test_quiet_results_fire_nothing() -> None:
    assert words(*ALTERNATING) == []


@pytest.mark.parametrize("value", [106.01, 93.99])
def test_beyond_three_stops_and_names_the_baseline(value: float) -> None:
    assert words(100.0, value) == [(1, True, "beyond the action limit of 'spring'")]


def test_the_action_limit_itself_is_inside() -> None:
    assert words(106.0, 100.0, 94.0) == []


@pytest.mark.parametrize(("sign", "side"), [(1, "above"), (-1, "below")])
def test_patterns_on_one_side(sign: int, side: str) -> None:
    two_of_three = [100 + sign * z for z in (5, 0, 5)]
    assert words(*two_of_three) == [
        (2, False, f"two of three beyond the warning limit, all {side} the centre")
    ]
    four_of_five = [100 + sign * z for z in (3, 3, 0, 3, 3)]
    assert words(*four_of_five) == [
        (4, False, f"four of five more than one standard deviation {side} the centre")
    ]
    seven = [100 + sign * z for z in (1, 2, 1, 2, 1, 2, 1)]
    assert words(*seven) == [(6, False, f"7 in a row {side} the centre")]


def test_a_drift_is_seen_before_it_is_far() -> None:
    assert words(97.5, 98.5, 99.0, 99.5, 100.5, 101.0, 101.5) == [(6, False, "7 in a row rising")]


def test_two_of_three_on_different_sides_is_no_pattern() -> None:
    assert words(105.0, 100.0, 95.0) == []


def test_a_failure_never_enters_its_own_limits() -> None:
    values = [*ALTERNATING, 140.0]
    kept_out = freeze("spring", values, {20: "wrong standard digested"})
    assert individuals_limits(kept_out).upper_action == pytest.approx(103.08, abs=0.01)
    assert kept_out.left_out == ((20, "wrong standard digested"),)
    assert individuals_limits(freeze("spring", values)).upper_action > 125


def test_later_results_do_not_move_frozen_limits() -> None:
    baseline = freeze("spring", ALTERNATING)
    before = individuals_limits(baseline)
    rules_fired([150.0] * 30, before)
    assert individuals_limits(baseline) == before


def test_own_limits_serve_only_where_they_are_as_tight_as_the_methods() -> None:
    wide = Limits(100.0, 5.0, 85.0, 90.0, 110.0, 115.0, "spring")
    found = no_wider_than(wide, 90.0, 110.0)
    assert (found.lower_action, found.upper_action) == (90.0, 110.0)
    assert no_wider_than(LIMITS, 90.0, 110.0) == LIMITS


def test_a_range_chart_has_no_lower_line() -> None:
    limits = range_limits(freeze("spring", [2.0] * 20))
    assert (limits.lower_action, limits.lower_warning, limits.centre) == (0.0, 0.0, 2.0)


def test_a_baseline_needs_a_name_enough_results_and_reasons() -> None:
    with pytest.raises(InputError) as refused:
        freeze(" ", [1.0, float("inf")], {0: "", 5: "gone"})
    assert set(refused.value.fields) == {"name", "values", "values.1", "left_out.0", "left_out.5"}


def test_a_small_shift_is_found_by_ewma_and_cusum_before_single_points_do() -> None:
    shifted = [101.5 + (0.5 if i % 2 else -0.5) for i in range(30)]
    assert not any(f.stops for f in rules_fired(shifted, LIMITS))
    assert ewma(shifted, 100.0, 1.0).signals[0] < 10
    assert cusum(shifted, 100.0, 1.0).signals[0] < 10
    down = cusum([98.5] * 10, 100.0, 1.0)
    assert down.lower[-1] == pytest.approx(10.0)
    assert set(down.upper) == {0.0}


def test_a_cusum_without_scatter_is_refused() -> None:
    with pytest.raises(InputError) as refused:
        cusum([1.0], 0.0, 0.0)
    assert list(refused.value.fields) == ["sigma"]
