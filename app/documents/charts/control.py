"""The control chart: checks of the method in order, with centre, warning and action lines."""

from __future__ import annotations

from dataclasses import dataclass

from app.documents.charts.scales import linear_scale, tick_words, triangle
from app.documents.palette import Palette, palette_named
from app.documents.svg import Svg, width_of
from app.errors import InputError

LEFT, RIGHT, TOP, HEIGHT, FOOT = 62, 118, 14, 200, 50
SIZE = 13


@dataclass(frozen=True)
class ControlPoint:
    """One check: its place in the order, its value, and whether the rules are kept."""

    label: str
    value: float
    ok: bool = True
    note: str = ""


@dataclass(frozen=True)
class Control:
    """What the chart shows: limits come from history before these points."""

    title: str
    points: tuple[ControlPoint, ...]
    centre: float
    action: tuple[float, float]
    warning: tuple[float, float] | None = None
    unit: str = "%"


def _lines(control: Control) -> list[tuple[float, str, str | None, float]]:
    lines: list[tuple[float, str, str | None, float]] = [(control.centre, "centre", None, 1.4)]
    lines += [(v, "warning", "7 4", 1.2) for v in control.warning or ()]
    return lines + [(v, "action", None, 2.2) for v in control.action]


def _draw_lines(svg: Svg, control: Control, y: object, p: Palette, end: float) -> None:
    for value, words, dash, stroke in _lines(control):
        at = y.at(value)  # type: ignore[attr-defined]
        colour = p.stop if words == "action" else p.soft
        svg.line(LEFT, at, end, at, colour, stroke_width=stroke, stroke_dasharray=dash)
        svg.text(end + 8, at + 4.5, f"{words} {tick_words(value)}", colour, SIZE, bold=words == "action")


def control_svg(control: Control, palette: str = "light", width: float = 760) -> str:
    """Draw a control chart.

    Parameters
    ----------
    control : Control
        At least one point; action limits in rising order.
    palette : {"light", "dark", "print"}
        Colours and font.
    width : float
        In its own units.

    Returns
    -------
    str
        SVG; a point that breaks a rule is a triangle with its note.

    Raises
    ------
    InputError
        If there is no point or the limits are out of order.
    """
    p = palette_named(palette)
    if not control.points or not control.action[0] < control.centre < control.action[1]:
        raise InputError(
            "This control chart cannot be drawn.", {"control": ["needs points and ordered limits"]}
        )
    broken = [q for q in control.points if not q.ok]
    said = f"{len(control.points)} checks, {len(broken)} outside the rules"
    said += "".join(f"; {q.label} {tick_words(q.value)} {q.note}".rstrip() for q in broken) + "."
    svg = Svg(width, TOP + HEIGHT + FOOT, control.title, said, p.font, p.ground)
    values = [q.value for q in control.points] + list(control.action)
    y, ticks = linear_scale(min(values), max(values), TOP + HEIGHT, TOP, 5)
    end = width - RIGHT
    for value in ticks:
        svg.text(LEFT - 8, y.at(value) + 4.5, tick_words(value), p.soft, SIZE, "end")
    svg.line(LEFT, TOP, LEFT, TOP + HEIGHT, p.ink, stroke_width=1.4)
    middle = TOP + HEIGHT / 2
    svg.text(14, middle, control.unit, p.soft, SIZE, "middle", transform=f"rotate(-90 14 {middle:g})")
    _draw_lines(svg, control, y, p, end)
    step = (end - LEFT) / len(control.points)
    places = [LEFT + step * (i + 0.5) for i in range(len(control.points))]
    trace = [(x, y.at(q.value)) for x, q in zip(places, control.points, strict=True)]
    svg.path(trace, fill="none", stroke=p.accent, stroke_width=1.2)
    every = max(1, round((max(width_of(q.label, SIZE) for q in control.points) + 10) / step + 0.49))
    for index, (q, (x, at)) in enumerate(zip(control.points, trace, strict=True)):
        if q.ok:
            svg.circle(x, at, 4.5, fill=p.accent, stroke=p.card, stroke_width=1.2)
        else:
            triangle(svg, x, at, 7, p.stop, p.card)
            svg.text(x, at - 13, q.note, p.stop, SIZE, "middle", bold=True, halo=p.card)
        if index % every == 0:
            svg.text(x, TOP + HEIGHT + 22, q.label, p.soft, SIZE, "middle")
    return str(svg)
