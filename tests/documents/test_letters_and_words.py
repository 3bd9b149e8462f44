"""Text on paper: nothing missing, nothing that reads otherwise, no number parted from its sign or unit."""

from __future__ import annotations

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.documents.data import Dilution, Measured, Step
from app.documents.letters import held_together, missing_glyphs, printable, without
from app.documents.words import (
    NOT_RECORDED,
    coverage_words,
    dilution_words,
    duration_words,
    listed,
    moment,
    number_with_unit,
    period,
    reading,
    said,
)
from app.errors import InputError
from tests.documents.example import EXAMPLE

NBSP = "\u00a0"


def plain(text: str) -> str:
    """Return words with ordinary spaces."""
    return text.replace(NBSP, " ").replace("\u200b", "")


@pytest.mark.parametrize(
    "hidden", ["\u202e", "\u2066", "\u200d", "\x00", "\x1b", "\ue000", "\ufeff", "\ud800"]
)
def test_a_hidden_character_is_shown_as_its_code(hidden: str) -> None:
    assert printable(f"Mill{hidden}Lane") == f"Mill\u27e8U+{ord(hidden):04X}\u27e9Lane"


@given(st.text())
def test_no_hidden_character_and_no_line_break_is_left(text: str) -> None:
    shown = printable(text).replace("\u200b", "")
    assert not any(c in shown for c in "\n\r\t\u2028\u2029\u202a\u202e\u2066\u200f")


def test_a_name_is_in_one_normal_form() -> None:
    assert printable("Łódz\u0301") == "Łódź"


def test_a_long_word_may_break_and_loses_no_letter() -> None:
    word = "Abwasseraufbereitungsanlagenbetreiber" * 3
    shown = printable(word)
    assert shown.replace("\u200b", "") == word
    assert max(map(len, shown.split("\u200b"))) <= 12


def test_a_letter_keeps_its_marks_at_a_break() -> None:
    word = "x\u0323\u0307" * 40
    assert not any(piece.startswith(("\u0323", "\u0307")) for piece in printable(word).split("\u200b"))


@pytest.mark.parametrize(
    "text", ["< 100 mg/L", "> 4500 mg/L", "± 130", "2210 mg/L", "98.2 %", "150 °C", "20 mL"]
)
def test_a_number_never_leaves_its_sign_or_its_unit(text: str) -> None:
    assert " " not in printable(text)
    assert plain(printable(f"about {text} here")) == f"about {text} here"
    assert printable(f"about {text} here").split(" ") == ["about", text.replace(" ", NBSP), "here"]


def test_held_together_has_no_place_to_break() -> None:
    assert set(" \u200b") & set(held_together("2031-06-01 14:05 -06:00 " + "x" * 60)) == set()


def test_the_diagnostic_of_the_typesetter_is_understood() -> None:
    told = (
        'error: PDF/A-3a error: the text `"中"` could not be displayed with font `"Libertinus Serif"`\n'
        'error: PDF/A-3a error: the text `"\\u{eba}a"` could not be displayed with font `"x"`'
    )
    assert missing_glyphs(told) == {"中", "\u0eba"}
    assert missing_glyphs("error: unknown variable") == frozenset()


def test_only_the_named_characters_become_codes() -> None:
    view = {"a": ["x中y", {"b": "中"}], "n": 5, "none": None}
    assert without(view, frozenset("中")) == {"a": ["x⟨U+4E2D⟩y", {"b": "⟨U+4E2D⟩"}], "n": 5, "none": None}
    assert without(view, frozenset()) == view


@pytest.mark.parametrize(
    ("text", "zone", "shown"),
    [
        ("2031-06-01T20:05:00Z", "America/Denver", "2031-06-01 14:05 -06:00"),
        ("2031-01-01T20:05:00Z", "America/Denver", "2031-01-01 13:05 -07:00"),
        ("2031-06-01T20:05:59+02:00", "UTC", "2031-06-01 18:05 +00:00"),
        ("2031-06-01T20:05:00Z", "Asia/Kolkata", "2031-06-02 01:35 +05:30"),
    ],
)
def test_a_moment_is_shown_in_the_programmes_zone_of_that_day(text: str, zone: str, shown: str) -> None:
    assert plain(moment(text, zone)) == shown
    assert " " not in moment(text, zone)


@pytest.mark.parametrize("hour", ["2031-11-02T01:30:00-06:00", "2031-11-02T01:30:00-07:00"])
def test_the_hour_that_comes_twice_is_told_apart_by_its_offset(hour: str) -> None:
    """Clocks go back in Denver on the first Sunday of November (2031-11-02)."""
    assert plain(moment(hour, "America/Denver")) == hour[:16].replace("T", " ") + " " + hour[-6:]


@pytest.mark.parametrize(
    ("text", "zone", "field"),
    [
        ("2031-06-01T20:05:00", "UTC", "at"),
        ("yesterday", "UTC", "at"),
        ("2031-06-01T20:05:00Z", "Mars/Base", "zone"),
    ],
)
def test_a_moment_that_is_none_is_refused(text: str, zone: str, field: str) -> None:
    with pytest.raises(InputError) as refused:
        moment(text, zone)
    assert list(refused.value.fields) == [field]


def test_what_is_not_known_is_said() -> None:
    assert moment(None, "UTC") == said("") == said("  ") == said(None) == listed(()) == NOT_RECORDED


def test_a_composite_shows_both_ends_of_its_period() -> None:
    assert plain(period(EXAMPLE.sample, "America/Denver")) == (
        "composite, 2031-05-28 08:00 -06:00 to 2031-05-29 08:00 -06:00"
    )
    grab = replace(EXAMPLE.sample, kind="grab")
    assert plain(period(grab, "America/Denver")) == "grab, 2031-05-29 08:00 -06:00"


@pytest.mark.parametrize(
    ("dilution", "words"),
    [
        (Dilution("10", (Step("10", "100"),)), "10 mL made up to 100 mL, factor 10"),
        (
            Dilution("50", (Step("10", "100"), Step("20", "100"))),
            "10 mL made up to 100 mL, of that 20 mL made up to 100 mL, factor 50",
        ),
        (Dilution("1"), "none (factor 1)"),
    ],
)
def test_a_dilution_is_told_by_its_glassware_never_as_a_ratio(dilution: Dilution, words: str) -> None:
    assert plain(dilution_words(dilution)) == words


@pytest.mark.parametrize(("minutes", "words"), [(120, "2 h"), (60, "1 h"), (90, "90 min"), (0, "0 min")])
def test_a_duration_is_told_in_whole_hours_or_minutes(minutes: int, words: str) -> None:
    assert plain(duration_words(minutes)) == words


def test_the_coverage_factor_names_its_source() -> None:
    assert plain(coverage_words("2.20", "11", "95")) == (
        "k = 2.20 (Student's t, 11 effective degrees of freedom, 95 %)"
    )
    assert plain(coverage_words("1.96", None, "95")) == "k = 1.96 (normal distribution, 95 %)"


def test_a_long_unit_may_break_but_not_from_its_number() -> None:
    shown = number_with_unit("0.0003805", "AU per mg/L")
    assert shown.split(" ") == [f"0.0003805{NBSP}AU", "per", "mg/L"]


def test_a_reading_keeps_the_text_that_was_typed() -> None:
    assert plain(reading(Measured("temperature", "6,40", "°C"))) == "temperature 6,40 °C"
