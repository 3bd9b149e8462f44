"""One run: blank, status, uncertainty, checks and advice, as the contract of ``calculate`` has them."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.advice import NextDilution, Seen
from app.chemistry.calculate import calculate
from app.chemistry.calibration import fit
from app.chemistry.quality import Event, bracket, verifications_needed
from app.chemistry.repeatability import Repeatability
from app.chemistry.run import Exclusion, SampleTubes, Spike, Verification
from tests.chemistry.bench_run import CURVED, HIGH, POLICY, STANDARDS, run, tubes


def one(sample: SampleTubes, **changes):
    return calculate(run(sample, **changes)).samples[0]


def test_the_blank_is_subtracted_once() -> None:
    """Zeroed on the blank, or the blank read and subtracted: the same result, never twice."""
    zeroed = one(tubes("S", 400, 405, 395))
    read = one(tubes("S", 400, 405, 395, blank=0.012), blanks=(0.011, 0.013))
    assert read.cod == pytest.approx(zeroed.cod, rel=1e-12)
    assert read.absorbance == pytest.approx(zeroed.absorbance)


@given(st.floats(-0.05, 0.05), st.floats(30.0, 800.0))
def test_a_common_shift_of_blank_tubes_and_verification_changes_nothing(shift: float, cod: float) -> None:
    plain = run(tubes("S", cod, cod + 3), verifications=(Verification(500.0, (0.19,)),), blanks=(0.01,))
    moved = run(
        tubes("S", cod, cod + 3, blank=shift),
        verifications=(Verification(500.0, (0.19 + shift,)),),
        blanks=(0.01 + shift,),
    )
    a, b = calculate(plain), calculate(moved)
    assert b.samples[0].cod == pytest.approx(a.samples[0].cod, rel=1e-9)
    assert b.checks.verifications[0].found == pytest.approx(a.checks.verifications[0].found, rel=1e-9)


def test_components_are_those_of_the_contract() -> None:
    sample = tubes("S", 400, 405, 395, dilution_factor=10.0, dilution_relative_u=0.004)
    found, curve, scatter = one(sample), fit(STANDARDS), POLICY.repeatability
    x, part = found.in_tube, {c.name: c for c in found.budget.components}
    assert found.cod == 10.0 * x
    assert part["line"].u == pytest.approx(10.0 * curve.line_u(x))
    assert part["repeatability"].u == pytest.approx(10.0 * math.hypot(4.0, 0.025 * x) / math.sqrt(3))
    assert part["dilution"].u == pytest.approx(10.0 * x * 0.004)
    assert part["standards"].u == pytest.approx(10.0 * x * 0.005)
    assert part["bias"].u == pytest.approx(10.0 * x * 0.02)
    assert [part[n].dof for n in ("line", "repeatability", "dilution", "standards", "bias")] == [
        curve.dof, scatter.dof, None, None, 11,
    ]  # fmt: skip
    assert found.budget.u == pytest.approx(math.hypot(*(c.u for c in found.budget.components)))


def test_nothing_finite_gives_the_normal_factor() -> None:
    perfect = tuple(replace(s, absorbance=(3.8e-4 * s.cod,)) for s in STANDARDS)
    policy = replace(POLICY, repeatability=Repeatability(4.0, 0.025, None), bias_dof=None)
    budget = one(tubes("S", 400), standards=perfect, policy=policy).budget
    assert budget.dof is None
    assert budget.expanded_u == pytest.approx(1.959964 * budget.u, rel=1e-7)


@pytest.mark.parametrize(
    ("sample", "status"),
    [
        (tubes("S", 400, 402), "ok"),
        (tubes("S", 10, 11), "below"),
        (tubes("S", 400, 500), "disagree"),
        (tubes("S", 10, 60), "disagree"),
        (tubes("S", 880, 890), "ok"),
        (tubes("S", 905, 906), "over"),
        (tubes("S", 905, 400, 1300), "over"),
        (tubes("S", 400, 402, colour="green"), "over"),
        (tubes("S", 400, 402, colour="olive"), "ok"),
        (tubes("S", 400, 500, colour="green"), "over"),
        (tubes("S", 400, 402, remaining_oxidant=0.0999), "over"),
        (tubes("S", 400, 402, remaining_oxidant=0.10), "ok"),
        (tubes("S", -5, -6), "below"),
    ],
)
def test_the_first_status_that_holds(sample: SampleTubes, status: str) -> None:
    assert one(sample).status == status


def test_a_range_beyond_the_capacity_does_not_move_the_top() -> None:
    """Plateau: every sample beyond the capacity reads about 1000 mg/L; 0.9 of it is the end."""
    found = calculate(run(tubes("S", 930, 932), working_range=(20.0, 1500.0)))
    assert found.samples[0].status == "over"
    assert found.samples[0].reported.text == "> 900"
    assert any("500 mL" in w for w in found.warnings)
    assert any("guess" in w for w in found.warnings)


@pytest.mark.parametrize(
    ("sample", "text"),
    [
        (tubes("S", 10, 11, dilution_factor=50.0), "< 1000"),
        (tubes("S", 950, 951, dilution_factor=10.0), "> 9000"),
        (tubes("S", 10, 11, dilution_factor=100.0 / 6.0), "< 334"),
        (tubes("S", 950, 951, dilution_factor=100.0 / 6.0), "> 15000"),
    ],
)
def test_a_bound_is_the_samples_and_stays_true_when_rounded(sample: SampleTubes, text: str) -> None:
    reported = one(sample).reported
    assert (reported.text, reported.cod, reported.expanded_u) == (text, None, None)


def test_disagreeing_tubes_report_nothing_and_show_the_median() -> None:
    found = one(tubes("S", 300, 305, 500))
    assert (found.reported, found.suspect, found.used) == (None, 2, (0, 1, 2))
    assert found.in_tube == pytest.approx(305, abs=2)
    assert found.advice.action == "digest again"


def test_who_set_a_tube_aside_is_told() -> None:
    sample = tubes("S", 300, 301, 302, 500, 900, excluded=(Exclusion(4, "cap leaked"),))
    found = one(sample)
    assert [(e.index, e.by) for e in found.excluded] == [(4, "person"), (3, "rule")]
    assert found.excluded[0].reason == "cap leaked"
    assert "Dixon" in found.excluded[1].reason
    assert found.used == (0, 1, 2)


def test_a_reading_beyond_the_turning_point_is_over_and_has_no_number() -> None:
    found = one(SampleTubes("S", (0.6, 0.61)), standards=CURVED, model="quadratic")
    assert (found.status, found.in_tube, found.cod, found.budget) == ("over", None, None, None)
    assert found.reported.text == "> 900"
    assert found.advice.dilution_factor == 10.0


def test_one_tube_beyond_the_turning_point_does_not_drag_the_others_along() -> None:
    found = one(SampleTubes("S", (0.15, 0.151, 0.149, 0.9)), standards=CURVED, model="quadratic")
    assert (found.status, found.used) == ("ok", (0, 1, 2))


def test_the_wrong_sign_stops_and_a_strange_slope_warns() -> None:
    falling = tuple(replace(s, absorbance=tuple(-a for a in s.absorbance)) for s in STANDARDS)
    with pytest.raises(ValueError, match="wrong way") as refused:
        calculate(run(tubes("S", 400), standards=falling))
    assert list(refused.value.fields) == ["calibration.standards"]
    steep = tuple(replace(s, absorbance=tuple(3 * a for a in s.absorbance)) for s in STANDARDS)
    assert any("slope" in w for w in calculate(run(tubes("S", 100), standards=steep)).warnings)
    assert calculate(run(tubes("S", 400))).warnings == ()


def test_low_range_at_420_nm_falls_and_is_calculated_like_the_other() -> None:
    low = replace(HIGH, dichromate_g_per_l=1.022, wavelength_nm=420.0)
    falling = tuple(replace(s, cod=s.cod / 10, absorbance=tuple(-a for a in s.absorbance)) for s in STANDARDS)
    sample = SampleTubes("S", (-0.15, -0.152))
    found = calculate(run(sample, recipe=low, standards=falling, working_range=(2.0, 90.0)))
    mirror = calculate(run(SampleTubes("S", (0.15, 0.152))))
    assert found.samples[0].cod == pytest.approx(mirror.samples[0].cod / 10, rel=1e-9)


def test_checks_and_their_verdict() -> None:
    whole = run(
        tubes("A", 300, 301),
        tubes("B", 360, 361),
        tubes("P", 220, 221),
        tubes("PS", 240, 241),
        verifications=(Verification(500.0, (0.19,)), Verification(500.0, (0.25,))),
        duplicates=(("A", "B"),),
        spikes=(Spike("P", "PS", 50.0, 1.0, 500.0), Spike("P", "PS", 50.0, 1.0, 5000.0)),
    )
    checks = calculate(whole).checks
    assert [v.ok for v in checks.verifications] == [True, False]
    assert checks.duplicates[0].rpd_percent == pytest.approx(18.1, abs=0.1)
    assert [s.ok for s in checks.spikes] == [None, False]
    assert not checks.ok
    assert calculate(run(tubes("A", 300))).ok


def test_duplicates_near_the_reporting_level_are_judged_by_difference() -> None:
    near = run(tubes("A", 30, 30), tubes("B", 45, 45), duplicates=(("A", "B"),))
    check = calculate(near).checks.duplicates[0]
    assert check.rpd_percent > 20
    assert check.ok
    diluted = run(
        tubes("A", 30, 30, dilution_factor=5.0),
        tubes("B", 300, 300, dilution_factor=1.0),
        duplicates=(("A", "B"),),
    )
    check = calculate(diluted).checks.duplicates[0]
    assert (check.rpd_percent > 60, check.ok) == (True, False)


def test_a_verification_beyond_the_turning_point_fails_and_a_duplicate_is_not_judged() -> None:
    whole = run(
        SampleTubes("A", (0.6,)),
        tubes("B", 300),
        standards=CURVED,
        model="quadratic",
        verifications=(Verification(500.0, (0.9,)),),
        duplicates=(("A", "B"),),
        spikes=(Spike("A", "B", 50.0, 1.0, 500.0),),
    )
    checks = calculate(whole).checks
    assert (checks.verifications[0].ok, checks.verifications[0].found) == (False, None)
    assert (checks.duplicates[0].ok, checks.spikes[0].ok) == (None, None)


def test_a_better_rule_for_the_next_dilution_is_asked_and_told_what_was_seen() -> None:
    asked: list[Seen] = []

    def rule(seen: Seen) -> NextDilution:
        asked.append(seen)
        return NextDilution(25.0, "by its history")

    found = calculate(run(tubes("S", 950, 951, dilution_factor=10.0)), next_dilution=rule).samples[0]
    assert (found.advice.dilution_factor, found.advice.why) == (25.0, "by its history")
    assert (asked[0].status, asked[0].dilution_factor, asked[0].exhausted) == ("over", 10.0, True)
    assert (asked[0].low, asked[0].top) == (20.0, 900.0)


@given(st.lists(st.booleans(), min_size=2, max_size=6))
def test_every_analysis_lies_in_exactly_one_bracket(held: list[bool]) -> None:
    sequence: list[Event] = []
    for i, ok in enumerate(held):
        sequence += [Event(f"V{i}", ok), *(Event(f"S{i}.{j}") for j in range(3))]
    found = bracket(sequence)
    names = [*found.good, *found.held, *found.open]
    assert sorted(names) == sorted(e.name for e in sequence if e.verified is None)
    for i, ok in enumerate(held):
        after = held[i + 1] if i + 1 < len(held) else None
        expected = found.held if not ok or after is False else found.open if after is None else found.good
        assert f"S{i}.0" in expected


def test_a_failed_verification_holds_everything_since_the_last_good_one() -> None:
    sequence = [
        Event("V0", True),
        Event("S1"),
        Event("S2"),
        Event("V1", False),
        Event("V2", True),
        Event("S3"),
    ]
    found = bracket([*sequence, Event("V3", True)])
    assert (found.held, found.good, found.open) == (("S1", "S2"), ("S3",), ())


def test_more_than_ten_in_a_bracket_are_told() -> None:
    sequence = [Event("V0", True), *(Event(f"S{i}") for i in range(12)), Event("V1", True)]
    found = bracket(sequence)
    assert found.too_long == ("S10", "S11")
    assert verifications_needed(12) == 3
