"""A point's results in time beside its limits.

Shapes tell the verdict, not only colours: circle within, triangle above,
diamond undecided, square where no limit was in force; a bound is an open arrow
towards where the value must lie. Vertical bars are the expanded uncertainty.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, datetime
from typing import Literal
from zoneinfo import ZoneInfo

from app.documents.charts.scales import (
    Scale,
    diamond,
    linear_scale,
    open_arrow,
    tick_words,
    triangle,
)
from app.documents.palette import Palette, palette_named
from app.documents.svg import Svg, width_of
from app.errors import InputError

LEFT, TOP, HEIGHT, FOOT = 62, 14, 230, 58
SIZE = 13
MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")
WORDS = {"within": "within", "above": "above the limit", "undecided": "undecided", "": "no limit judged"}


@dataclass(frozen=True)
class HistoryPoint:
    """One result; ``value`` is the bound where the status is below or over."""

    at: str
    value: float
    status: Literal["ok", "below", "over"] = "ok"
    expanded_u: float | None = None
    verdict: Literal["within", "above", "undecided", "no limit", ""] = ""


@dataclass(frozen=True)
class LimitLine:
    """A limit from a day to a day (both included, None is open), as ISO dates."""

    value: float
    label: str
    from_day: str
    until_day: str | None = None
    kind: Literal["limit", "technical review"] = "limit"


@dataclass(frozen=True)
class History:
    """What the chart shows; ``zone`` is the programme's."""

    points: tuple[HistoryPoint, ...]
    limits: tuple[LimitLine, ...] = ()
    zone: str = "UTC"
    unit: str = "mg/L"
    title: str = "Results and limits"


def _days(moment: str, zone: ZoneInfo) -> float:
    at = datetime.fromisoformat(moment)
    if at.tzinfo is None:
        raise InputError("A moment needs its offset.", {"at": ["needs an offset, e.g. -06:00"]})
    local = at.astimezone(zone)
    return local.toordinal() + (local.hour + local.minute / 60) / 24


def _month_starts(low: float, high: float) -> Iterator[date]:
    day = date.fromordinal(int(low)).replace(day=1)
    while day.toordinal() <= high:
        if day.toordinal() >= low:
            yield day
        day = date(day.year + day.month // 12, day.month % 12 + 1, 1)


def _months(svg: Svg, x: Scale, p: Palette, y: float) -> None:
    starts = list(_month_starts(x.low, x.high))
    every = next(n for n in (1, 2, 3, 6, 12, 60, 10**6) if len(starts) / n * 44 <= x.end - x.start)
    shown_year: int | None = None
    for day in starts:
        if (day.month - 1) % min(every, 12) or (every > 12 and day.year % (every // 12)):
            continue
        at = x.at(day.toordinal())
        svg.line(at, y, at, y + 5, p.ink, stroke_width=1.2)
        svg.text(at, y + 19, MONTHS[day.month - 1], p.soft, SIZE, "middle")
        if day.year != shown_year:
            svg.text(at, y + 34, str(day.year), p.soft, SIZE, "middle")
            shown_year = day.year


def _limit_lines(svg: Svg, h: History, x: Scale, y: Scale, p: Palette) -> None:
    taken: list[float] = []
    for line in sorted(h.limits, key=lambda one: -one.value):
        start = x.held(date.fromisoformat(line.from_day).toordinal())
        last = None if line.until_day is None else date.fromisoformat(line.until_day).toordinal() + 1
        end = x.end if last is None else x.held(last)
        if end <= start:
            continue
        at, main = y.at(line.value), line.kind == "limit"
        dash, stroke = ("8 4", 2.2) if main else ("2 4", 1.4)
        svg.line(start, at, end, at, p.stop, stroke_width=stroke, stroke_dasharray=dash)
        if end < x.end:
            svg.text(start, at - 6, _limit_words(line), p.stop, SIZE, bold=main, halo=p.card)
            continue
        level = max([at + 4.5, *(other + SIZE + 2 for other in taken)])
        taken.append(level)
        svg.text(x.end + 8, level, _limit_words(line), p.stop, SIZE, bold=main)


def _limit_words(line: LimitLine) -> str:
    return f"{line.label} {tick_words(line.value)}"


def _point(svg: Svg, point: HistoryPoint, at: float, y: Scale, p: Palette) -> None:
    colour = p.stop if point.verdict == "above" else p.accent
    level = y.at(point.value)
    if point.status != "ok":
        up = point.status == "over"
        length = 16 if up else min(16, max(8, y.start - level))
        open_arrow(svg, at, level, colour, up, length)
        return
    if point.expanded_u is not None:
        low, high = y.held(point.value - point.expanded_u), y.held(point.value + point.expanded_u)
        svg.line(at, low, at, high, p.ink, stroke_width=1.5)
        for end in (low, high):
            svg.line(at - 3, end, at + 3, end, p.ink, stroke_width=1.5)
    _shape_at(svg, point.verdict, at, level, p)


def _shape_at(svg: Svg, verdict: str, x: float, y: float, p: Palette) -> None:
    if verdict == "above":
        triangle(svg, x, y, 7, p.stop, p.card)
    elif verdict == "undecided":
        diamond(svg, x, y, 7, p.card, p.ink)
    elif verdict == "within":
        svg.circle(x, y, 5.5, fill=p.accent, stroke=p.card, stroke_width=1.2)
    else:
        svg.rect(x - 4.5, y - 4.5, 9, 9, fill=p.card, stroke=p.ink, stroke_width=1.8)


def _key(svg: Svg, h: History, p: Palette, y: float) -> None:
    x = float(LEFT)
    for verdict in ("within", "above", "undecided", ""):
        if any(_shape(q) == verdict for q in h.points):
            _shape_at(svg, verdict, x + 6, y, p)
            svg.text(x + 18, y + 4.5, WORDS[verdict], p.soft, SIZE)
            x += 34 + width_of(WORDS[verdict], SIZE)
    for status, words in (("below", "below its bound"), ("over", "over its bound")):
        if any(q.status == status for q in h.points):
            open_arrow(svg, x + 6, y + (8 if status == "over" else -8), p.accent, up=status == "over")
            svg.text(x + 18, y + 4.5, words, p.soft, SIZE)
            x += 34 + width_of(words, SIZE)


def _shape(point: HistoryPoint) -> str:
    if point.status != "ok":
        return "bound"
    return point.verdict if point.verdict in ("within", "above", "undecided") else ""


def _words(h: History) -> str:
    counts = {word: sum(q.verdict == word for q in h.points) for word in ("within", "above", "undecided")}
    judged = ", ".join(f"{n} {word}" for word, n in counts.items() if n)
    limits = "; ".join(f"{line.label} {tick_words(line.value)} {h.unit}" for line in h.limits)
    return (
        f"{len(h.points)} results" + (f": {judged}" if judged else "") + (f"; {limits}." if limits else ".")
    )


def history_svg(history: History, palette: str = "light", width: float = 760) -> str:
    """Draw a point's history.

    Parameters
    ----------
    history : History
        Results and limits in one unit; none is allowed and says so.
    palette : {"light", "dark", "print"}
        Colours and font.
    width : float
        In its own units.

    Returns
    -------
    str
        SVG.

    Raises
    ------
    InputError
        If a moment has no offset.
    """
    p = palette_named(palette)
    height = TOP + HEIGHT + FOOT + 24
    svg = Svg(width, height, history.title, _words(history), p.font, p.ground)
    if not history.points:
        svg.text(width / 2, height / 2, "No result yet.", p.soft, SIZE + 3, "middle")
        return str(svg)
    zone = ZoneInfo(history.zone)
    days = [_days(q.at, zone) for q in history.points]
    room = max((max(days) - min(days)) * 0.03, 3)
    right = max((width_of(_limit_words(q), SIZE) for q in history.limits if q.until_day is None), default=6)
    x = Scale(min(days) - room, max(days) + room, LEFT, width - right - 12)
    tops = [q.value + (q.expanded_u or 0) for q in history.points] + [line.value for line in history.limits]
    y, ticks = linear_scale(0, max(tops) * 1.08, TOP + HEIGHT, TOP, 5)
    for value in ticks:
        svg.line(x.start, y.at(value), x.end, y.at(value), p.rule, stroke_width=0.8)
        svg.text(LEFT - 8, y.at(value) + 4.5, tick_words(value), p.soft, SIZE, "end")
    svg.text(
        14,
        TOP + HEIGHT / 2,
        history.unit,
        p.soft,
        SIZE,
        "middle",
        transform=f"rotate(-90 14 {TOP + HEIGHT / 2:g})",
    )
    svg.line(x.start, y.start, x.end, y.start, p.ink, stroke_width=1.5)
    _months(svg, x, p, y.start)
    _limit_lines(svg, history, x, y, p)
    for point, day in zip(history.points, days, strict=True):
        _point(svg, point, x.at(day), y, p)
    _key(svg, history, p, height - 14)
    return str(svg)
