"""Charts: the same bytes each time, legible without colour, and honest about their numbers."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import replace
from itertools import pairwise
from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.documents.charts import (
    Control,
    ControlPoint,
    History,
    HistoryPoint,
    LimitLine,
    RackTube,
    budget_svg,
    calibration_svg,
    control_svg,
    history_svg,
    rack_svg,
    strip_svg,
    tube_svg,
)
from app.documents.charts.calibration import curve_at
from app.documents.charts.scales import Scale, linear_scale, log_ticks, rows_for, tick_words
from app.documents.data import Calibration, Mark, Strip, StripBar
from app.documents.palette import PALETTES, PRINT, Palette
from app.documents.svg import width_of
from app.errors import InputError
from tests.documents.example import CALIBRATION, EXAMPLE, STRIP

HISTORY = History(
    points=(
        HistoryPoint("2031-01-28T09:00:00-07:00", 1100, "ok", 70, "within"),
        HistoryPoint("2031-03-30T09:00:00-06:00", 1850, "ok", 110, "above"),
        HistoryPoint("2031-04-20T09:00:00-06:00", 1490, "ok", 80, "undecided"),
        HistoryPoint("2031-05-02T09:00:00-06:00", 100, "below", None, "within"),
        HistoryPoint("2031-06-20T09:00:00-06:00", 4500, "over", None, "above"),
        HistoryPoint("2031-06-22T09:00:00-06:00", 700),
    ),
    limits=(
        LimitLine(1400, "daily maximum", "2030-01-01", "2031-02-28"),
        LimitLine(1500, "daily maximum", "2031-03-01"),
        LimitLine(1800, "technical review", "2031-03-01", None, "technical review"),
    ),
    zone="America/Denver",
)
CONTROL = Control(
    "Verification 500",
    (ControlPoint("05-01", 99), ControlPoint("05-03", 111, False, "outside"), ControlPoint("05-06", 97)),
    100,
    (90, 110),
    (94, 106),
)
RACK = (
    RackTube(2, "blank", 0.0, "0"),
    RackTube(6, "K7QF3P", 0.43, "431"),
    RackTube(7, "R4CW7D", 1.0, "", "over", stop=True),
)
DRAWN: dict[str, Callable[[str], str]] = {
    "strip": lambda p: strip_svg(STRIP, p),
    "calibration": lambda p: calibration_svg(CALIBRATION, p),
    "budget": lambda p: budget_svg(EXAMPLE.components, p),
    "history": lambda p: history_svg(HISTORY, p),
    "control": lambda p: control_svg(CONTROL, p),
    "rack": lambda p: rack_svg(RACK, 5, p),
    "tube": lambda p: tube_svg(0.5, "in range", p),
}


def texts(svg: str) -> list[str]:
    """Return every text that is drawn."""
    return [e.text or "" for e in ElementTree.fromstring(svg).iter() if e.tag.endswith("}text")]


@pytest.mark.parametrize("palette", PALETTES)
@pytest.mark.parametrize("chart", DRAWN)
def test_a_chart_holds_to_what_the_page_and_the_reader_need(chart: str, palette: str) -> None:
    svg = DRAWN[chart](palette)
    assert svg == DRAWN[chart](palette)
    root = ElementTree.fromstring(svg)
    assert root.get("role") == "img"
    assert [child.tag.rpartition("}")[2] for child in root][:2] == ["title", "desc"]
    assert all((child.text or "").strip() for child in list(root)[:2])
    names = {name for e in root.iter() for name in e.attrib}
    assert names & {"style", "class", "id", "onclick", "href"} == set()
    assert not re.search(r"nan|inf", svg.partition("</desc>")[2])


@pytest.mark.parametrize("palette", PALETTES)
@pytest.mark.parametrize("chart", ["strip", "calibration", "budget", "control"])
def test_no_text_leaves_the_picture(chart: str, palette: str) -> None:
    root = ElementTree.fromstring(DRAWN[chart](palette))
    width = float(root.attrib["width"])
    for e in root.iter():
        if e.tag.endswith("}text") and "transform" not in e.attrib:
            x, length = float(e.attrib["x"]), width_of(e.text or "", float(e.attrib["font-size"])) * 0.85
            anchor = e.get("text-anchor", "start")
            left = x - {"start": 0, "middle": length / 2, "end": length}[anchor]
            assert left >= -1 and left + length <= width + 1, e.text


def luminance(colour: str) -> float:
    """Return WCAG 2.2 relative luminance of a colour (formula of the definition there)."""
    parts = [int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)]
    r, g, b = (c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts)
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def contrast(one: str, other: str) -> float:
    """Return the WCAG 2.2 contrast ratio of two colours."""
    light, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


@pytest.mark.parametrize("palette", PALETTES.values(), ids=PALETTES)
def test_words_have_the_contrast_of_wcag_aa(palette: Palette) -> None:
    """4.5:1 for text, 3:1 for what is drawn (WCAG 2.2, 1.4.3 and 1.4.11)."""
    grounds = {"light": ["#faf7f0", "#fffdf8"], "dark": ["#101418", palette.card], "print": ["#ffffff"]}
    for ground in grounds[palette.name]:
        assert contrast(palette.ink, ground) >= 7
        assert min(contrast(c, ground) for c in (palette.soft, palette.stop, palette.accent)) >= 4.5
    assert contrast(palette.stop, palette.stop_ground) >= 4.5


def test_the_print_ramp_keeps_its_order_in_grey() -> None:
    greys = [luminance(colour) for colour in PRINT.ramp]
    assert greys == sorted(greys, reverse=True)
    assert min(a / b for a, b in pairwise(greys)) > 1.4


def test_verdicts_differ_in_shape_not_only_in_colour() -> None:
    def drawn(verdict: str) -> str:
        point = replace(HISTORY.points[0], verdict=verdict, expanded_u=None)  # type: ignore[arg-type]
        svg = history_svg(replace(HISTORY, points=(point,), limits=()))
        return re.sub(r'(fill|stroke)="[^"]*"|<text.*?</text>|<desc>.*?</desc>', "", svg)

    shapes = {drawn(verdict) for verdict in ("within", "above", "undecided", "no limit")}
    assert len(shapes) == 4


def test_a_bound_is_an_open_arrow_and_carries_no_bar() -> None:
    below = replace(HISTORY.points[3], expanded_u=50.0)
    ok = replace(below, status="ok")
    with_bar, arrow = (history_svg(replace(HISTORY, points=(p,), limits=())) for p in (ok, below))
    assert "below its bound" in texts(arrow) and "below its bound" not in texts(with_bar)
    assert arrow.count('fill="none"') > with_bar.count('fill="none"')


def test_a_limit_line_begins_and_ends_with_its_days() -> None:
    svg = history_svg(HISTORY)
    assert "daily maximum 1400" in texts(svg) and "daily maximum 1500" in texts(svg)
    dashed = [
        (float(e.attrib["x1"]), float(e.attrib["x2"]))
        for e in ElementTree.fromstring(svg).iter()
        if e.get("stroke-dasharray") == "8 4"
    ]
    (later_start, _), (_, earlier_end) = dashed
    assert earlier_end == later_start


def test_a_moment_without_offset_is_refused() -> None:
    with pytest.raises(InputError, match="offset"):
        history_svg(replace(HISTORY, points=(HistoryPoint("2031-01-28T09:00:00", 1100),)))


def test_an_empty_history_says_so() -> None:
    assert texts(history_svg(History(()))) == ["No result yet."]


def test_the_residuals_are_reading_less_curve() -> None:
    """By hand: 0.285 - (0.0003 + 0.0003805 x 750) = -0.000675 AU."""
    assert 0.285 - curve_at((0.0003, 0.0003805), 750) == pytest.approx(-0.000675)
    one = Calibration("c", "2031-05-12T09:30:00Z", "2031-06-12", CALIBRATION.standards, (0.0003, 0.0003805))
    assert "0.00155 AU" in calibration_svg(one)  # the largest: 0.189 - 0.19055 = -0.00155


def test_a_quadratic_curve_is_drawn_bent() -> None:
    bent = calibration_svg(replace(CALIBRATION, coefficients=(0.0, 0.0004, -2e-8)))
    paths = [e.attrib["d"] for e in ElementTree.fromstring(bent).iter() if e.get("stroke-width") == "2"]
    assert max(d.count("L") for d in paths) > 20


@pytest.mark.parametrize(
    ("draw", "field"),
    [
        (lambda: strip_svg(Strip(())), "strip"),
        (lambda: strip_svg(Strip((StripBar("1", 0, 900),))), "strip"),
        (lambda: strip_svg(Strip((), limits=(Mark(-1, "x"),))), "strip"),
        (lambda: calibration_svg(replace(CALIBRATION, standards=())), "calibration"),
        (lambda: calibration_svg(replace(CALIBRATION, coefficients=(1.0,))), "calibration"),
        (lambda: budget_svg(()), "components"),
        (lambda: budget_svg((replace(EXAMPLE.components[0], share=1.2),)), "components"),
        (lambda: rack_svg(()), "tubes"),
        (lambda: rack_svg((RackTube(1, "a"), RackTube(1, "b"))), "tubes"),
        (lambda: control_svg(replace(CONTROL, points=())), "control"),
        (lambda: control_svg(replace(CONTROL, action=(110, 90))), "control"),
        (lambda: tube_svg(0.5, "x", "sepia"), "palette"),
    ],
)
def test_what_cannot_be_drawn_is_named(draw: Callable[[], str], field: str) -> None:
    with pytest.raises(InputError) as refused:
        draw()
    assert list(refused.value.fields) == [field]


def test_the_strip_without_forecast_still_shows_windows_limit_and_result() -> None:
    svg = strip_svg(replace(STRIP, density=()), "print", 344)
    shown = texts(svg)
    assert {"factor 5", "94 %", "daily maximum 1500", "result 2210 ± 130"} <= set(shown)


def test_an_interval_that_reaches_zero_ends_at_the_left_edge() -> None:
    low = replace(STRIP, result=(25, -5, 55))
    assert "result 2210" in strip_svg(low)
    with pytest.raises(InputError):
        strip_svg(replace(STRIP, result=(-25, -55, 5)))


def test_close_limits_do_not_write_over_each_other() -> None:
    marks = (Mark(1500, "daily maximum 1500"), Mark(1400, "monthly average 1400"))
    root = ElementTree.fromstring(strip_svg(replace(STRIP, limits=marks)))
    levels = [e.attrib["y"] for e in root.iter() if e.text in {m.label for m in marks} and "y" in e.attrib]
    assert len(set(levels)) == 2


def test_the_tube_fills_with_the_share_and_is_empty_when_not_read() -> None:
    def level(share: float) -> float:
        found = re.search(r'd="M4 ([\d.]+)', tube_svg(share, "x"))
        assert found
        return float(found[1])

    shares = [0.0, 0.2, 0.5, 0.9, 1.0]
    assert [level(s) for s in shares] == sorted((level(s) for s in shares), reverse=True)
    assert level(1.7) == level(1.0)
    assert tube_svg(None, "x").count("<path") == 1


@given(st.floats(-1e5, 1e5), st.floats(1e-3, 1e5), st.integers(2, 8))
def test_linear_ticks_cover_the_values_and_are_evenly_spaced(low: float, span: float, about: int) -> None:
    scale, ticks = linear_scale(low, low + span, 0, 100, about)
    slack = 1e-8 * (ticks[1] - ticks[0])
    assert ticks[0] <= low + slack and ticks[-1] >= low + span - slack
    assert len(ticks) <= 2.5 * about + 3
    steps = {round((b - a) / (ticks[1] - ticks[0]), 6) for a, b in pairwise(ticks)}
    assert steps == {1.0}
    assert scale.at(ticks[0]) == pytest.approx(0) and scale.at(ticks[-1]) == pytest.approx(100)


@given(st.floats(1e-2, 1e4), st.floats(1.3, 1e5))
def test_log_ticks_lie_inside_and_are_labelled_once(low: float, ratio: float) -> None:
    labelled, minor = log_ticks(low, low * ratio)
    assert all(low <= v <= low * ratio for v in labelled + minor)
    assert not set(labelled) & set(minor)


def test_a_log_scale_gives_decades_equal_lengths() -> None:
    scale = Scale(10, 10000, 0, 300, log=True)
    assert [scale.at(v) for v in (10, 100, 1000, 10000)] == pytest.approx([0, 100, 200, 300])


@given(st.lists(st.tuples(st.floats(0, 500), st.text("abc", min_size=1, max_size=20)), max_size=12))
def test_labels_in_one_row_never_touch(labels: list[tuple[float, str]]) -> None:
    placed = list(zip(rows_for(labels, 12), labels, strict=True))
    for i, (row, (at, words)) in enumerate(placed):
        for other_row, (other_at, other_words) in placed[i + 1 :]:
            if row == other_row:
                assert abs(at - other_at) >= (width_of(words, 12) + width_of(other_words, 12)) / 2


@pytest.mark.parametrize(
    ("value", "words"),
    [
        (0, "0"),
        (1500, "1500"),
        (10000, "10\u202f000"),
        (-2, "\u22122"),
        (0.05, "0.05"),
        (1234567, "1\u202f234\u202f567"),
    ],
)
def test_ticks_read_as_a_person_writes_them(value: float, words: str) -> None:
    assert tick_words(value) == words
