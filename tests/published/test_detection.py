"""Detection limits against the federal procedure's t values, worked sets and DIN 32645."""

from __future__ import annotations

import pytest

from app.chemistry.calibration import Standard, fit
from app.chemistry.detection import calibration_limits, detection_limit, minimum_level, t_99, workings
from app.chemistry.detection_study import blank_alone, level_fits

pytestmark = pytest.mark.published

SPIKES = [9.2, 10.8, 8.7, 11.1, 9.9, 10.4, 8.5]


@pytest.mark.parametrize(
    ("n", "t"),
    [
        (7, 3.143), (8, 2.998), (9, 2.896), (10, 2.821), (11, 2.764), (12, 2.718),
        (13, 2.681), (14, 2.650), (16, 2.602), (20, 2.539), (31, 2.457),
    ],
)  # fmt: skip
def test_t_values_of_the_procedure(n: int, t: float) -> None:
    """Source: the table of 40 CFR 136 Appendix B, one-sided 99 %, n - 1 degrees of freedom."""
    assert t_99(n) == pytest.approx(t, abs=0.0006)


def test_seven_spikes_and_seven_blanks() -> None:
    """Source: worked by hand: s 1.0263 gives 3.225; blanks mean 0.3143, s 0.8668 give 3.039."""
    found = detection_limit(SPIKES, [0.3, -1.1, 0.8, 1.5, -0.4, 0.9, 0.2])
    assert found.mdl_spikes == pytest.approx(3.225, abs=0.01)
    assert found.mdl_blanks == pytest.approx(3.039, abs=0.01)
    assert found.mdl == found.mdl_spikes


def test_a_negative_mean_of_blanks_counts_as_zero() -> None:
    """Source: 40 CFR 136 App. B, rev. 2: a negative mean is replaced by zero; 2.188 (1.874 is the error)."""
    found = detection_limit(SPIKES, [-0.3, -1.1, 0.2, 0.5, -1.4, 0.1, -0.2])
    assert found.mdl_blanks == pytest.approx(2.188, abs=0.001)


def test_some_blanks_without_a_number_give_the_highest() -> None:
    """Source: 40 CFR 136 App. B, rev. 2, 4(c): some but not all blanks give a number: the highest."""
    assert detection_limit(SPIKES, [None, 1.2, None, 0.4, None, None, None]).mdl_blanks == 1.2


def test_no_blank_with_a_number_leaves_the_spikes() -> None:
    """Source: 40 CFR 136 App. B, rev. 2, 4(c): no blank gives a number: the limit is that of the spikes."""
    found = detection_limit(SPIKES, [None] * 7)
    assert found.mdl_blanks is None
    assert found.mdl == found.mdl_spikes


def test_the_interval_of_a_limit_from_seven_spikes() -> None:
    """Source: 40 CFR 136 App. B prints 0.64 and 2.20 times the limit (95 %, chi square of 6)."""
    found = detection_limit(SPIKES, [None] * 7)
    assert found.low / found.mdl_spikes == pytest.approx(0.64, abs=0.005)
    assert found.high / found.mdl_spikes == pytest.approx(2.20, abs=0.005)


def test_the_workings_of_both_parts() -> None:
    """Source: worked by hand from 40 CFR 136 App. B: t(0.99, 6) 3.143 twice, s 1.0263 and 0.8668."""
    how = workings(SPIKES, [0.3, -1.1, 0.8, 1.5, -0.4, 0.9, 0.2])
    assert (how.spikes_t, how.blanks_t) == pytest.approx((3.143, 3.143), abs=5e-4)
    assert (how.spikes_sd, how.blanks_sd, how.blanks_mean) == pytest.approx(
        (1.0263, 0.8668, 0.3143), abs=5e-5
    )
    assert (how.spikes_dof, how.blanks_dof, how.blanks_rule) == (6, 6, "mean")
    some = workings(SPIKES, [None, 1.2, None, 0.4, None, None, None])
    assert (some.blanks_rule, some.blanks_with_number, some.blanks_t) == ("highest", 2, None)


@pytest.mark.parametrize(("level", "fits"), [(7.9, False), (8, True), (40, True), (40.1, False)])
def test_a_spike_lies_at_two_to_ten_times_the_estimate(level: float, fits: bool) -> None:
    """Source: 40 CFR 136 App. B, rev. 2, 2(a): for an estimate of 4 mg/L, 8 to 40 mg/L."""
    assert level_fits(4.0, level) == fits


def test_a_blank_is_read_against_the_others_of_its_run() -> None:
    """Source: arithmetic: against the mean of all three it would be two thirds as far off."""
    blanks = [0.011, 0.010, 0.015]
    alone = blank_alone(blanks, 2)
    assert alone == pytest.approx(0.0045)
    assert blanks[2] - sum(blanks) / 3 == pytest.approx(alone * 2 / 3)


@pytest.mark.parametrize(
    ("mdl", "level"), [(0.2, 0.5), (0.17, 0.5), (3.2, 10.0), (1.0, 2.0), (0.63, 2.0), (10, 20)]
)
def test_minimum_level_goes_to_the_nearest_of_one_two_five(mdl: float, level: float) -> None:
    """Source: EPA 1631E: 0.2 ng/L gives 0.5; 3.18 times the limit to the nearest 1, 2 or 5 x 10^n."""
    assert minimum_level(mdl) == pytest.approx(level)


def test_din_32645_limits() -> None:
    """Source: DIN 32645 example: decision 0.0698, detection 0.14, quantification 0.212 (k 3, 99 %)."""
    points = [
        (0.05, 3060), (0.10, 3522), (0.15, 3707), (0.20, 4280), (0.25, 5058),
        (0.30, 5510), (0.35, 5703), (0.40, 6205), (0.45, 7156), (0.50, 7178),
    ]  # fmt: skip
    found = calibration_limits(fit([Standard(x, (float(y),)) for x, y in points]))
    assert found.decision == pytest.approx(0.0698, abs=5e-5)
    assert found.detection == pytest.approx(0.14, abs=5e-4)
    assert found.quantification == pytest.approx(0.212, abs=5e-4)
