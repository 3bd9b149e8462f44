"""Detection limit studies: what is refused, planned, missing and due."""

from __future__ import annotations

from datetime import date, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.calibration import Standard, fit
from app.chemistry.detection import calibration_limits, detection_limit, minimum_level
from app.chemistry.detection_study import (
    StudyResult,
    counting,
    data_from,
    duties,
    may_stand,
    months_later,
    plan_study,
    quarter_end,
    spike_too_low,
    study_gaps,
)
from app.errors import InputError
from tests.chemistry.bench_run import CURVED, STANDARDS

DAYS = [date(2031, 3, 3), date(2031, 3, 4), date(2031, 3, 10)]


def test_too_few_or_impossible_results_are_named() -> None:
    with pytest.raises(InputError) as refused:
        detection_limit([1.0, 0.0, -2.0], [])
    assert set(refused.value.fields) == {"spikes", "spikes.1", "spikes.2", "blanks"}


@given(
    st.lists(st.floats(1.0, 20.0), min_size=7, max_size=12),
    st.lists(st.none() | st.floats(-3.0, 3.0), min_size=7, max_size=12),
)
def test_the_limit_is_never_under_either_part(spikes, blanks) -> None:
    found = detection_limit(spikes, blanks)
    assert found.mdl >= found.mdl_spikes >= 0
    assert (found.mdl_blanks is None) == all(b is None for b in blanks)
    if found.mdl_blanks is not None:
        assert found.mdl == max(found.mdl_spikes, found.mdl_blanks)


@given(st.floats(1e-4, 1e4))
def test_a_minimum_level_is_one_two_or_five_times_a_power_of_ten(mdl: float) -> None:
    level = minimum_level(mdl)
    assert f"{level:.9e}"[:5] in {"1.000", "2.000", "5.000"}
    # Furthest off between 2 and 5, at 3.5.
    assert 2 / 3.5 - 1e-9 <= level / (3.18 * mdl) <= 5 / 3.5 + 1e-9


def test_a_plan_spreads_over_the_days_given() -> None:
    plan = plan_study(4.0, [*DAYS, DAYS[0]], spikes=7, blanks=8)
    assert (plan.spike_low, plan.spike_high) == (8.0, 40.0)
    assert [d.on for d in plan.days] == DAYS
    assert [d.spikes for d in plan.days] == [3, 2, 2]
    assert [d.blanks for d in plan.days] == [3, 3, 2]


def test_a_plan_of_two_days_is_refused() -> None:
    with pytest.raises(InputError) as refused:
        plan_study(0.0, DAYS[:2], spikes=6)
    assert set(refused.value.fields) == {"estimate", "spikes", "days"}


def test_what_is_missing_is_told_in_words() -> None:
    done = [StudyResult(DAYS[0], "A", "spike")] * 5
    gaps = study_gaps(done)
    assert "spikes still missing: 2 of 7" in gaps
    assert "spikes in at least three batches" in gaps
    assert "blanks on at least three dates" in gaps
    full = [
        StudyResult(DAYS[i % 3], "ABC"[i % 3], kind, mg_l=9.0 + i)
        for kind in ("spike", "blank")
        for i in range(7)
    ]
    assert study_gaps(full) == ()
    same = [StudyResult(one.on, one.batch, one.kind, mg_l=10.0) for one in full]
    assert study_gaps(same) == ("spikes that differ: all gave the same number, so read one digit more",)


def test_several_instruments_and_lost_spikes_are_told() -> None:
    full = [
        StudyResult(DAYS[i % 3], "ABC"[i % 3], kind, "one", 1.0 + i)
        for kind in ("spike", "blank")
        for i in range(21)
    ]
    assert study_gaps(full, {"one": "Photometer 1"}) == ()
    assert "spikes on Photometer 2: 0 of 2 dates" in study_gaps(full, {"one": "1", "two": "Photometer 2"})
    lost = [*full, StudyResult(DAYS[0], "A", "spike", "one", -0.1)]
    assert "1; every one" in study_gaps(lost)[0]
    assert study_gaps(lost, initial=False) == (), "later one in twenty may fail"
    assert study_gaps([*lost, StudyResult(DAYS[0], "A", "spike", "one", None)], initial=False)


def test_only_results_of_the_last_two_years_count() -> None:
    old = StudyResult(date(2029, 3, 2), "A", "spike")
    young = StudyResult(date(2029, 3, 3), "A", "spike")
    assert counting([old, young], date(2031, 3, 3)) == (young,)


def test_a_limit_is_due_again_after_thirteen_months() -> None:
    assert duties(date(2031, 1, 31), date(2031, 2, 1), [date(2031, 1, 5)] * 2)[-1].due == date(2032, 2, 29)
    assert data_from(date(2032, 2, 29)) == date(2030, 2, 28)


def test_spikes_of_the_quarter_that_are_missing() -> None:
    found = duties(
        date(2031, 1, 31), date(2031, 5, 2), [date(2031, 3, 31), date(2031, 4, 1), date(2031, 6, 1)]
    )
    assert (found[0].what, found[0].due) == ("spikes still missing in this quarter: 1", date(2031, 6, 30))
    done = duties(date(2031, 1, 31), date(2031, 5, 2), [date(2031, 4, 1), date(2031, 5, 1)])
    assert len(done) == 1


@given(st.dates(date(2000, 1, 1), date(2090, 1, 1)), st.integers(-60, 60))
def test_months_later_lands_in_the_right_month(on: date, months: int) -> None:
    later = months_later(on, months)
    assert (later.year * 12 + later.month) - (on.year * 12 + on.month) == months
    assert later.day <= on.day


@given(st.dates(date(2000, 1, 1), date(2090, 1, 1)))
def test_a_quarter_ends_on_its_last_day(on: date) -> None:
    end = quarter_end(on)
    assert end >= on
    assert (end + timedelta(days=1)).day == 1
    assert end.month % 3 == 0
    assert (end - on).days < 93


def test_when_a_limit_may_stand() -> None:
    quiet: list[float | None] = [None] * 98
    assert may_stand(4.0, 2.0, [*quiet, 5.0, 6.0])
    assert not may_stand(4.0, 1.9, quiet)
    assert not may_stand(4.0, 8.1, quiet)
    assert not may_stand(4.0, 4.0, [*quiet, 5.0, 6.0, 7.0, 7.0])
    assert not may_stand(4.0, 4.0, [5.0])


def test_spikes_that_vanish_ask_for_a_higher_level() -> None:
    assert spike_too_low([1.0, 2.0, None, 3.0])
    assert not spike_too_low([1.0] * 19 + [-1.0])


def test_limits_of_a_calibration_need_an_equal_weight_line() -> None:
    for curve in (fit(STANDARDS, weights="inverse"), fit(CURVED, "quadratic")):
        with pytest.raises(InputError) as refused:
            calibration_limits(curve)
        assert list(refused.value.fields) == ["curve"]
    found = calibration_limits(fit(STANDARDS), readings=3)
    assert found.decision < found.detection
    assert found.detection == 2 * found.decision


def test_a_scattered_calibration_quantifies_nothing() -> None:
    values = (0.05, 0.12, 0.1, 0.28, 0.2, 0.36)
    curve = fit([Standard(100.0 * i, (v,)) for i, v in enumerate(values)])
    with pytest.raises(InputError) as refused:
        calibration_limits(curve, factor=10.0)
    assert "scatters" in refused.value.fields["curve"][0]
