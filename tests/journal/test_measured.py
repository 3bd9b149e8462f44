"""A typed number is read by one explicit rule; what is ambiguous is refused, never guessed.

The vectors were written from the rule (a decimal mark is a point or a comma,
never both; groups of three set apart by spaces; a sign for a bound) and hold
the tablet as well, in ``tests/client/measured.test.mjs``.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.errors import InputError
from app.journal import measured

VECTORS: list[dict[str, Any]] = json.loads(
    Path(__file__).with_name("measured_vectors.json").read_text(encoding="utf-8")
)
READ = [one for one in VECTORS if one["sign"]]
REFUSED = [one["text"] for one in VECTORS if not one["sign"]]


@pytest.mark.parametrize("vector", READ, ids=lambda one: repr(one["text"]))
def test_a_number_is_read_as_the_rule_says(vector: dict[str, Any]) -> None:
    assert measured.read(vector["text"]) == measured.Reading(vector["sign"], vector["value"])


@pytest.mark.parametrize("text", REFUSED, ids=repr)
def test_what_the_rule_does_not_cover_is_refused(text: str) -> None:
    with pytest.raises(InputError):
        measured.read(text)


@given(st.integers(-(10**9), 10**9), st.integers(0, 9999), st.sampled_from(".,"))
def test_point_and_comma_mean_the_same(whole: int, rest: int, mark: str) -> None:
    assert measured.read(f"{whole}{mark}{rest:04d}").value == float(f"{whole}.{rest:04d}")


@given(st.text(max_size=12))
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        reading = measured.read(text)
    except InputError:
        return
    assert reading.sign in "=<>"
    assert abs(reading.value) < float("inf")


def test_a_value_is_converted_within_its_quantity() -> None:
    """1 g/L is 1000 mg/L and 50 °F is 10 °C by definition of the units."""
    assert measured.value({"text": "1,5", "unit": "g/L"}, "mg/L") == 1500
    assert measured.value({"text": "50", "unit": "degF"}, "Cel") == pytest.approx(10)
    assert measured.value(None, "mg/L") is None
