"""The strip: what is expected, what the method can see at each dilution, and the limit.

One horizontal log scale in mg/L of the sample. Above it the predictive density,
below it the window of each dilution as a bar (the chosen one filled), the
limits as dashed marks through both, the result as a diamond with its interval.
One glance tells why a factor of 10 and not 5.
"""

from __future__ import annotations

import math

from app.documents.charts.scales import Scale, diamond, log_ticks, rows_for, tick_words
from app.documents.data import Strip
from app.documents.palette import Palette, palette_named
from app.documents.svg import Svg, width_of
from app.errors import InputError

HILL = 84
BAR_STEP = 26
SIZE = 13


def _domain(strip: Strip) -> tuple[float, float]:
    values = [v for bar in strip.bars for v in (bar.low, bar.high)]
    values += [x for x, _ in strip.density] + [m.value for m in strip.limits]
    if strip.result is not None:
        value, low, high = strip.result
        values += [value, high] + ([low] if low > 0 else [])
    if not values or any(not math.isfinite(v) or v <= 0 for v in values):
        raise InputError(
            "The strip needs concentrations above zero.", {"strip": ["every value must be above zero"]}
        )
    return min(values) / 1.3, max(values) * 1.3


def _label_rows(strip: Strip, scale: Scale) -> list[int]:
    return rows_for([(scale.at(m.value), m.label) for m in strip.limits], SIZE)


def _words(strip: Strip) -> str:
    said = []
    if strip.density:
        top = max(strip.density, key=lambda p: p[1])[0]
        said.append(f"expected most often near {tick_words(float(f'{top:.2g}'))} mg/L")
    for bar in strip.bars:
        chosen = ", chosen" if bar.chosen else ""
        said.append(
            f"factor {bar.factor} sees {tick_words(bar.low)} to {tick_words(bar.high)} mg/L"
            + (f" ({bar.share_percent} % in range)" if bar.share_percent else "")
            + chosen
        )
    said += [mark.label for mark in strip.limits]
    if strip.result_label:
        said.append(strip.result_label)
    return "; ".join(said) + "."


def _limits(svg: Svg, strip: Strip, scale: Scale, p: Palette, top: float, bottom: float) -> None:
    rows = _label_rows(strip, scale)
    for mark, row in zip(strip.limits, rows, strict=True):
        x, y = scale.at(mark.value), top - 6 - 16 * row
        svg.line(x, y + 4, x, bottom, p.card, stroke_width=5, stroke_opacity=0.8)
        svg.line(x, y + 4, x, bottom, p.stop, stroke_width=2.2, stroke_dasharray="6 4")
        half = width_of(mark.label, SIZE) / 2
        middle = min(max(x, half), svg.width - half)
        svg.text(middle, y, mark.label, p.stop, SIZE, "middle", bold=True, halo=p.card)


def _axis(svg: Svg, scale: Scale, p: Palette, y: float) -> None:
    labelled, minor = log_ticks(scale.low, scale.high)
    svg.line(scale.start, y, scale.end, y, p.ink, stroke_width=1.6)
    for value in minor:
        svg.line(scale.at(value), y, scale.at(value), y + 3, p.soft, stroke_width=1)
    for value in labelled:
        svg.line(scale.at(value), y, scale.at(value), y + 6, p.ink, stroke_width=1.4)
        svg.text(scale.at(value), y + 20, tick_words(value), p.soft, SIZE, "middle")
    svg.text(4, y + 4, "mg/L", p.soft, SIZE)


def _hill(svg: Svg, strip: Strip, scale: Scale, p: Palette, base: float) -> None:
    peak = max((d for _, d in strip.density), default=0.0)
    if peak <= 0:
        return
    curve = [(scale.at(x), base - HILL * d / peak) for x, d in strip.density]
    svg.path([(curve[0][0], base), *curve, (curve[-1][0], base)], closed=True, fill=p.accent_ground)
    svg.path(curve, fill="none", stroke=p.accent, stroke_width=2, stroke_linejoin="round")


def _bars(svg: Svg, strip: Strip, scale: Scale, p: Palette, top: float) -> None:
    if any(bar.share_percent for bar in strip.bars):
        svg.text(svg.width - 4, top - 8, "in range", p.soft, SIZE - 1, "end")
    for index, bar in enumerate(strip.bars):
        y = top + BAR_STEP * index
        x1, x2 = scale.at(bar.low), scale.at(bar.high)
        fill = p.ink if bar.chosen else p.card
        svg.rect(x1, y, x2 - x1, 14, rx=3, fill=fill, stroke=p.ink, stroke_width=1.5)
        svg.text(4, y + 12, f"factor {bar.factor}", p.ink, SIZE, bold=bar.chosen)
        if bar.share_percent:
            svg.text(svg.width - 4, y + 12, f"{bar.share_percent} %", p.ink, SIZE, "end", bold=bar.chosen)


def _result(svg: Svg, strip: Strip, scale: Scale, p: Palette, y: float) -> None:
    if strip.result is None:
        return
    value, low, high = (scale.held(v) for v in strip.result)
    if strip.result_sign:
        up = strip.result_sign == ">"
        svg.line(value, y - 6, value, y + 6, p.ink, stroke_width=2)
        end = value + (22 if up else -22)
        svg.line(value, y, end, y, p.ink, stroke_width=1.6)
        back = end - (6 if up else -6)
        svg.path([(back, y - 4.5), (end, y), (back, y + 4.5)], fill="none", stroke=p.ink, stroke_width=1.6)
        low, high = min(value, end), max(value, end)
    else:
        for x in (low, high):
            svg.line(x, y - 5, x, y + 5, p.ink, stroke_width=1.6)
        svg.line(low, y, high, y, p.ink, stroke_width=1.6)
        diamond(svg, value, y, 6, p.ink, p.ink)
    right = high + 10 + width_of(strip.result_label, SIZE) < svg.width
    svg.text(
        high + 10 if right else low - 10,
        y + 5,
        strip.result_label,
        p.ink,
        SIZE,
        None if right else "end",
        bold=True,
        halo=p.card,
    )


def strip_svg(strip: Strip, palette: str = "light", width: float = 560) -> str:
    """Draw the strip.

    Parameters
    ----------
    strip : Strip
        At least one bar, mark, result or density; all values above zero, mg/L. Only
        the lower end of the result's interval may reach zero or less: it is then
        drawn at the left edge.
    palette : {"light", "dark", "print"}
        Colours and font.
    width : float
        In its own units, 320 or more.

    Returns
    -------
    str
        SVG.

    Raises
    ------
    InputError
        If nothing is to be shown or a value is not above zero.
    """
    p = palette_named(palette)
    low, high = _domain(strip)
    names = max((width_of(f"factor {bar.factor}", SIZE) for bar in strip.bars), default=0)
    shares = 56 if any(bar.share_percent for bar in strip.bars) else 16
    scale = Scale(low, high, names + 12, width - shares, log=True)
    top = 8 + 16 * (max(_label_rows(strip, scale), default=-1) + 1)
    base = top + (HILL + 4 if strip.density else 14)
    results = base + 42
    bars = results + 28
    bottom = bars + BAR_STEP * len(strip.bars) - 6
    svg = Svg(
        width, bottom + 4, "Strip: expected range, dilutions and limit", _words(strip), p.font, p.ground
    )
    _hill(svg, strip, scale, p, base)
    _axis(svg, scale, p, base)
    _bars(svg, strip, scale, p, bars)
    _limits(svg, strip, scale, p, top, bottom)
    _result(svg, strip, scale, p, results)
    return str(svg)
