"""The chloride gate and the corrections beside a result."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.interferences import (
    chloride_bound,
    chloride_gate,
    chloride_qualifier,
    corrected_beside,
)
from app.errors import InputError


@pytest.mark.parametrize(
    ("chloride", "factor", "verdict", "needed"),
    [
        (500, 1, "open", 1.0),
        (1500, 1, "flagged", 1.0),
        (1998, 1, "flagged", 1.0),
        (3000, 1, "closed", 3000 / 1998),
        (3000, 2, "flagged", 1.0),
        (3000, 5, "open", 1.0),
        (0, 1, "open", 1.0),
    ],
)
def test_chloride_is_judged_after_dilution(chloride, factor, verdict, needed) -> None:
    gate = chloride_gate(1998, factor, chloride=chloride)
    assert (gate.basis, gate.verdict) == ("recorded", verdict)
    assert gate.after_dilution == chloride / factor
    assert gate.needed_factor == pytest.approx(needed)


@pytest.mark.parametrize(
    ("sign", "chloride", "verdict", "words"),
    [
        ("<", 500, "open", "At most 500"),
        ("<", 1998, "flagged", "At most 1998"),
        ("<", 3000, "unknown", "less than 3000"),
        (">", 3000, "closed", "Over 3000"),
        (">", 1500, "unknown", "more than 1500"),
    ],
)
def test_a_strips_bound_opens_or_closes_only_from_its_own_side(sign, chloride, verdict, words) -> None:
    gate = chloride_gate(1998, 1, chloride=chloride, sign=sign)
    assert gate.verdict == verdict
    assert words in gate.words


def test_every_verdict_but_an_open_one_carries_a_letter() -> None:
    letters = {
        verdict: chloride_qualifier(chloride_gate(1998, chloride=chloride))
        for verdict, chloride in (("open", 500), ("flagged", 1500), ("closed", 2500), ("unknown", None))
    }
    assert letters.pop("open") is None
    assert {verdict: one.letter for verdict, one in letters.items()} == {
        "flagged": "C",
        "closed": "CX",
        "unknown": "CU",
    }


def test_without_mercury_no_dilution_opens_the_gate() -> None:
    gate = chloride_gate(0.0, 10, chloride=100)
    assert (gate.verdict, gate.needed_factor) == ("closed", None)
    assert chloride_gate(0.0, 10, chloride=0).verdict == "open"


def test_low_conductivity_opens_the_gate_and_high_conductivity_proves_nothing() -> None:
    assert chloride_gate(1998, conductivity_us_cm=1800).basis == "bounded by conductivity"
    assert chloride_gate(1998, conductivity_us_cm=1800).verdict == "open"
    high = chloride_gate(1998, conductivity_us_cm=12000)
    assert (high.basis, high.verdict, high.needed_factor) == ("unknown", "unknown", 1.0)
    assert chloride_gate(1998, 10, conductivity_us_cm=12000).verdict == "open"
    assert chloride_gate(1998, conductivity_us_cm=500_000).after_dilution is None


def test_nothing_known_is_said_to_be_unknown() -> None:
    gate = chloride_gate(1998)
    assert (gate.basis, gate.verdict, gate.after_dilution) == ("unknown", "unknown", None)


def test_a_measured_chloride_goes_before_conductivity() -> None:
    assert chloride_gate(1998, chloride=3000, conductivity_us_cm=100).verdict == "closed"


@given(st.floats(0, 80_000), st.floats(0, 80_000))
def test_more_conductivity_allows_more_chloride(one: float, other: float) -> None:
    low, high = sorted((one, other))
    assert chloride_bound(low) <= chloride_bound(high)
    assert chloride_bound(high) >= high / 1000 * 35.45 / 126.45 * 1000


def test_chloride_is_never_subtracted() -> None:
    with pytest.raises(InputError, match="corrected") as refused:
        corrected_beside(500, {"chloride": 1000, "manganese": 1, "nitrite": -1})
    assert set(refused.value.fields) == {"chloride", "manganese", "nitrite"}
    assert "never subtracted" in refused.value.fields["chloride"][0]


def test_the_uncorrected_value_stays() -> None:
    found = corrected_beside(500, {"ferrous": 50})
    assert found.uncorrected == 500
    assert found.corrected < 500
    assert corrected_beside(500, {}).corrected == 500


def test_wrong_numbers_are_named() -> None:
    with pytest.raises(InputError) as refused:
        chloride_gate(-1, 0.5, chloride=float("nan"))
    assert set(refused.value.fields) == {"limit", "dilution_factor", "chloride"}
    with pytest.raises(InputError):
        chloride_bound(-1)
