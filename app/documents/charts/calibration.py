"""The calibration picture: the standards, the curve through them, and what it leaves over.

Absorbance stands on COD as it was fitted. The lower panel shows each reading
less the curve: a bend or a funnel there is seen by eye before any statistic.
"""

from __future__ import annotations

from app.documents.charts.scales import Scale, diamond, linear_scale, tick_words
from app.documents.data import Calibration
from app.documents.palette import Palette, palette_named
from app.documents.svg import Svg
from app.errors import InputError

LEFT, RIGHT, TOP = 66, 24, 12
MAIN, GAP, REST, FOOT = 196, 26, 84, 44
SIZE = 13


def curve_at(coefficients: tuple[float, ...], cod: float) -> float:
    """Return the absorbance of the curve at a COD."""
    return sum(b * cod**power for power, b in enumerate(coefficients))


def _readings(calibration: Calibration) -> list[tuple[float, float]]:
    return [(s.cod, a) for s in calibration.standards for a in s.absorbance]


def _words(calibration: Calibration, residuals: list[float]) -> str:
    levels = ", ".join(tick_words(s.cod) for s in calibration.standards)
    said = f"Standards of {levels} mg/L; the largest distance of a reading from the curve is "
    said += f"{max(abs(r) for r in residuals):.5f} AU."
    if calibration.read is not None:
        said += " The mean reading of this sample is marked with a diamond."
    return said


def _frame(
    svg: Svg, p: Palette, x: Scale, y: Scale, ticks: tuple[list[float], list[float]], axis: bool
) -> None:
    for value in ticks[1]:
        svg.line(x.start, y.at(value), x.end, y.at(value), p.rule, stroke_width=0.8)
        svg.text(x.start - 8, y.at(value) + 4.5, tick_words(value), p.soft, SIZE, "end")
    svg.line(x.start, y.start, x.end, y.start, p.ink, stroke_width=1.4)
    for value in ticks[0]:
        svg.line(x.at(value), y.start, x.at(value), y.start + 5, p.ink, stroke_width=1.2)
        if axis:
            svg.text(x.at(value), y.start + 19, tick_words(value), p.soft, SIZE, "middle")


def _turned(svg: Svg, p: Palette, y: Scale, words: str) -> None:
    middle = (y.start + y.end) / 2
    svg.text(14, middle, words, p.soft, SIZE, "middle", transform=f"rotate(-90 14 {middle:g})")


def _curve(svg: Svg, c: Calibration, x: Scale, y: Scale, p: Palette) -> None:
    top = max(s.cod for s in c.standards)
    low = min(s.cod for s in c.standards)
    steps = 1 if len(c.coefficients) == 2 else 48
    points = [low + (top - low) * i / steps for i in range(steps + 1)]
    path = [(x.at(v), y.at(curve_at(c.coefficients, v))) for v in points]
    svg.path(path, fill="none", stroke=p.accent, stroke_width=2)
    if c.read is not None:
        at = (x.held(c.read[0]), y.held(c.read[1]))
        corner = [(x.start, at[1]), at, (at[0], y.start)]
        svg.path(corner, fill="none", stroke=p.ink, stroke_width=1.2, stroke_dasharray="2 4")
    for cod, absorbance in _readings(c):
        svg.circle(x.at(cod), y.at(absorbance), 4.5, fill=p.card, stroke=p.ink, stroke_width=1.8)
    if c.read is not None:
        diamond(svg, *at, 6.5, p.ink, p.card)


def calibration_svg(calibration: Calibration, palette: str = "light", width: float = 560) -> str:
    """Draw the curve with its standards, and the residuals under it.

    Parameters
    ----------
    calibration : Calibration
        Standards with absorbances, and two or three coefficients.
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
        If there are no readings or no curve.
    """
    p = palette_named(palette)
    readings = _readings(calibration)
    if not readings or len(calibration.coefficients) not in (2, 3):
        raise InputError(
            "This calibration cannot be drawn.",
            {"calibration": ["needs readings and two or three coefficients"]},
        )
    residuals = [a - curve_at(calibration.coefficients, cod) for cod, a in readings]
    seen = readings + ([calibration.read] if calibration.read else [])
    codes, values = [r[0] for r in seen], [r[1] for r in seen]
    x, x_ticks = linear_scale(min(0, *codes), max(codes), LEFT, width - RIGHT, 6)
    y, y_ticks = linear_scale(min(0, *values), max(values), TOP + MAIN, TOP, 5)
    reach = max(max(abs(r) for r in residuals), 1e-6) * 1000
    rest = TOP + MAIN + GAP
    ry, r_ticks = linear_scale(-reach, reach, rest + REST, rest, 3)
    svg = Svg(
        width,
        rest + REST + FOOT,
        "Calibration curve with residuals",
        _words(calibration, residuals),
        p.font,
        p.ground,
    )
    _frame(svg, p, x, y, (x_ticks, y_ticks), axis=False)
    _curve(svg, calibration, x, y, p)
    _turned(svg, p, y, "absorbance, AU")
    _frame(svg, p, x, ry, (x_ticks, r_ticks), axis=True)
    svg.line(x.start, ry.at(0), x.end, ry.at(0), p.accent, stroke_width=1.6)
    for (cod, _), residual in zip(readings, residuals, strict=True):
        svg.line(x.at(cod), ry.at(0), x.at(cod), ry.at(residual * 1000), p.ink, stroke_width=1.4)
        svg.circle(x.at(cod), ry.at(residual * 1000), 3.5, fill=p.card, stroke=p.ink, stroke_width=1.6)
    _turned(svg, p, ry, "residual, mAU")
    svg.text(x.end, ry.start + 38, "COD of the standard, mg/L", p.soft, SIZE, "end")
    return str(svg)
