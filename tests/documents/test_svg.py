"""The SVG writer: what a strict policy, a screen reader and a digest ask of it."""

from __future__ import annotations

import re
from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.documents.svg import Svg, number

NAMESPACE = "{http://www.w3.org/2000/svg}"


@given(st.floats(-1e6, 1e6))
def test_a_coordinate_has_at_most_two_decimals_and_no_superfluous_zero(value: float) -> None:
    assert re.fullmatch(r"-?(0|[1-9]\d*)(\.\d?[1-9])?", number(value))
    assert number(value) != "-0"
    assert float(number(value)) == pytest.approx(value, abs=0.00501)


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
def test_a_hole_is_never_drawn_in_silence(value: float) -> None:
    with pytest.raises(ValueError, match="finite"):
        number(value)


@given(st.text(), st.text())
def test_any_text_makes_well_formed_xml_and_stays_text(words: str, title: str) -> None:
    svg = Svg(10, 10, title, words, "serif")
    svg.text(1, 2, words, "#000000")
    svg.rect(0, 0, 1, 1, fill=words)
    root = ElementTree.fromstring(str(svg))
    assert [child.tag.removeprefix(NAMESPACE) for child in root] == ["title", "desc", "text", "rect"]


def test_no_style_and_no_script_can_come_in_with_words() -> None:
    svg = Svg(10, 10, "t", "d", "serif")
    svg.text(0, 0, '</text><script>x</script><style>*{}</style>" style="x', "#000000")
    root = ElementTree.fromstring(str(svg))
    assert not [e for e in root.iter() if e.tag.endswith(("script", "style")) or "style" in e.attrib]
