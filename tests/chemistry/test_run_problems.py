"""Everything that is wrong with a run, at once, by field."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from app.chemistry.calculate import calculate
from app.chemistry.calibration import Standard
from app.chemistry.repeatability import Repeatability
from app.chemistry.run import Exclusion, SampleTubes, Spike, Verification, run_problems
from app.errors import InputError
from tests.chemistry.bench_run import POLICY, STANDARDS, run, tubes


def test_a_sound_run_has_no_problem() -> None:
    assert run_problems(run(tubes("A", 300), tubes("B", 310), duplicates=(("A", "B"),))) == {}


def test_everything_at_once() -> None:
    wrong = run(
        SampleTubes("A", (0.1, math.nan), 0.5, -0.1, None, 1.6, (Exclusion(7, ""), Exclusion(0, "a"))),
        SampleTubes("A", (), 1.0),
        SampleTubes(" ", (0.1,), 1.0, 0.0, None, None, (Exclusion(0, "cap leaked"),)),
        standards=(*STANDARDS[:3], Standard(-1.0, ())),
        standards_relative_u=2.0,
        working_range=(900.0, 20.0),
        blanks=(),
        verifications=(Verification(0.0, ()),),
        duplicates=(("A", "C"), ("A", "A")),
        spikes=(Spike("A", "A", 0.0, -1.0, 100.0), Spike("X", "Y", 1.0, 1.0, 1.0)),
        policy=replace(
            POLICY,
            repeatability=Repeatability(-1.0, 2.0, 0.0),
            bias_relative_u=-1.0,
            bias_dof=0.0,
            verification_percent=0.0,
            duplicate_rpd_percent=-5.0,
            spike_percent=(110.0, 90.0),
        ),
    )
    with pytest.raises(InputError) as refused:
        calculate(wrong)
    assert set(refused.value.fields) == {
        "blanks",
        "calibration.standards",
        "calibration.standards.3.absorbance",
        "calibration.standards.3.cod",
        "calibration.standards_relative_u",
        "duplicates.0",
        "duplicates.1",
        "policy.bias_dof",
        "policy.bias_relative_u",
        "policy.duplicate_rpd_percent",
        "policy.repeatability.a",
        "policy.repeatability.dof",
        "policy.repeatability.k",
        "policy.spike_percent",
        "policy.verification_percent",
        "spikes.0.sample_ml",
        "spikes.0.spike_ml",
        "spikes.0.spiked",
        "spikes.1.spiked",
        "spikes.1.unspiked",
        "tubes.0.absorbance",
        "tubes.0.dilution_factor",
        "tubes.0.dilution_relative_u",
        "tubes.0.excluded.0.index",
        "tubes.0.excluded.0.reason",
        "tubes.0.remaining_oxidant",
        "tubes.1.absorbance",
        "tubes.1.sample",
        "tubes.2.excluded",
        "tubes.2.sample",
        "verifications.0.absorbance",
        "verifications.0.expected",
        "working_range",
    }


@pytest.mark.parametrize(
    ("sample", "field", "word"),
    [
        (tubes("A", 1, 2, excluded=(Exclusion(2, "spilled"),)), "tubes.0.excluded.0.index", "no tube 2"),
        (tubes("A", 1, 2, excluded=(Exclusion(-1, "spilled"),)), "tubes.0.excluded.0.index", "no tube -1"),
        (
            tubes("A", 1, 2, 3, excluded=(Exclusion(1, "spilled"), Exclusion(1, "spilled"))),
            "tubes.0.excluded.1.index",
            "twice",
        ),
        (tubes("A", 1, excluded=(Exclusion(0, "spilled"),)), "tubes.0.excluded", "nothing is left"),
        (tubes("A", 1, 2, excluded=(Exclusion(0, "  "),)), "tubes.0.excluded.0.reason", "cause"),
        (tubes("A", *range(11)), "tubes.0.absorbance", "more than 10"),
        (tubes("A", 1, dilution_factor=0.999), "tubes.0.dilution_factor", "1 or more"),
        (tubes("A", 1e17), "tubes.0.absorbance", "larger"),
    ],
)
def test_one_problem_is_told_in_words(sample: SampleTubes, field: str, word: str) -> None:
    found = run_problems(run(sample))
    assert list(found) == [field]
    assert word in found[field][0]


def test_eleven_tubes_of_which_one_is_excluded_can_be_screened() -> None:
    sample = tubes("A", *([300.0] * 11), excluded=(Exclusion(3, "spilled"),))
    assert calculate(run(sample)).samples[0].status == "ok"
