"""A calibration serves only what it was made for."""

from __future__ import annotations

from dataclasses import replace
from datetime import date

import pytest

from app.chemistry.validity import Conditions, Validity, refusals, require_valid
from app.errors import InputError

MADE = Conditions("high range", 600.0, "photometer 1", "16 x 100 mm", "lot 7")
VALID = Validity(MADE, date(2031, 3, 1), date(2031, 5, 31))


@pytest.mark.parametrize("on", [date(2031, 3, 1), date(2031, 4, 15), date(2031, 5, 31)])
def test_the_same_conditions_within_its_days_are_served(on: date) -> None:
    assert refusals(VALID, MADE, on) == {}
    require_valid(VALID, MADE, on)


@pytest.mark.parametrize(
    ("field", "value"),
    [
        ("recipe", "low range"),
        ("wavelength_nm", 620.0),
        ("instrument", "photometer 2"),
        ("tube", "20 x 150 mm"),
        ("reagent_lot", "lot 8"),
    ],
)
def test_any_other_condition_is_refused_by_name(field: str, value) -> None:
    with pytest.raises(InputError) as refused:
        require_valid(VALID, replace(MADE, **{field: value}), date(2031, 4, 1))
    assert list(refused.value.fields) == [field]
    assert str(value) in refused.value.fields[field][0]


@pytest.mark.parametrize("on", [date(2031, 2, 28), date(2031, 6, 1)])
def test_before_and_after_its_days_it_is_refused(on: date) -> None:
    assert list(refusals(VALID, MADE, on)) == ["on"]


def test_everything_that_differs_is_named_at_once() -> None:
    other = Conditions("low range", 420.0, "photometer 2", "ampoule", "lot 8")
    assert len(refusals(VALID, other, date(2032, 1, 1))) == 6
