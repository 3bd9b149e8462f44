"""Scales, ticks and the few shapes that all charts share."""

from __future__ import annotations

import math
from dataclasses import dataclass

from app.documents.svg import Svg, width_of

NARROW_SPACE = "\u202f"
MINUS = "\u2212"


@dataclass(frozen=True)
class Scale:
    """A linear or logarithmic scale from values to coordinates."""

    low: float
    high: float
    start: float
    end: float
    log: bool = False

    def at(self, value: float) -> float:
        """Return the coordinate of a value."""
        a, b, v = self.low, self.high, value
        if self.log:
            a, b, v = math.log10(a), math.log10(b), math.log10(v)
        return self.start + (v - a) / (b - a) * (self.end - self.start)

    def held(self, value: float) -> float:
        """Return the coordinate of a value, held inside the scale."""
        return self.at(min(max(value, self.low), self.high))


def nice_step(span: float, about: int) -> float:
    """Return the step of 1, 2 or 5 times a power of ten that gives about so many ticks."""
    raw = span / max(about, 1)
    power = 10.0 ** math.floor(math.log10(raw))
    return next(m for m in (1, 2, 5, 10) if raw <= m * power * (1 + 1e-9)) * power


def linear_scale(low: float, high: float, start: float, end: float, about: int) -> tuple[Scale, list[float]]:
    """Return a scale widened to whole ticks, and its ticks."""
    if high <= low:
        low, high = low - 1, high + 1
    step = nice_step(high - low, about)
    first, last = math.floor(low / step + 1e-9), math.ceil(high / step - 1e-9)
    ticks = [float(f"{i * step:.12g}") for i in range(first, last + 1)]
    return Scale(ticks[0], ticks[-1], start, end), ticks


def log_ticks(low: float, high: float) -> tuple[list[float], list[float]]:
    """Return the labelled and the unlabelled ticks of a logarithmic scale.

    Decades are labelled; on less than a decade and a half also 2 and 5.
    """
    exponents = range(math.floor(math.log10(low)), math.ceil(math.log10(high)) + 1)
    wide = math.log10(high / low) >= 1.5
    labelled = [m * 10.0**e for e in exponents for m in ((1,) if wide else (1, 2, 5))]
    minor = [m * 10.0**e for e in exponents for m in range(2, 10)]

    def inside(values: list[float]) -> list[float]:
        return [v for v in values if low <= v <= high]

    return inside(labelled), [v for v in inside(minor) if v not in labelled]


def tick_words(value: float) -> str:
    """Return a tick's number: a true minus, and five digits or more in groups of three."""
    text = f"{abs(value):.10g}"
    whole, _, part = text.partition(".")
    if len(whole) > 4 and whole.isdigit():
        whole = f"{int(whole):,}".replace(",", NARROW_SPACE)
    sign = MINUS if value < 0 else ""
    return f"{sign}{whole}.{part}" if part else f"{sign}{whole}"


def rows_for(labels: list[tuple[float, str]], size: float, gap: float = 8) -> list[int]:
    """Return a row for each (centre, text) so that no two texts of a row touch."""
    ends: list[float] = []
    rows: dict[int, int] = {}
    for index in sorted(range(len(labels)), key=lambda i: labels[i][0]):
        centre, words = labels[index]
        half = width_of(words, size) / 2
        row = next((r for r, end in enumerate(ends) if centre - half >= end + gap), len(ends))
        if row == len(ends):
            ends.append(0.0)
        ends[row] = centre + half
        rows[index] = row
    return [rows[i] for i in range(len(labels))]


def triangle(svg: Svg, x: float, y: float, r: float, fill: str, stroke: str, down: bool = False) -> None:
    """Draw a triangle about a point."""
    s = -1 if down else 1
    corners = [(x, y - s * r * 1.15), (x + r, y + s * r * 0.75), (x - r, y + s * r * 0.75)]
    svg.path(corners, closed=True, fill=fill, stroke=stroke, stroke_width=1.5, stroke_linejoin="round")


def diamond(svg: Svg, x: float, y: float, r: float, fill: str, stroke: str) -> None:
    """Draw a diamond about a point."""
    corners = [(x, y - r), (x + r, y), (x, y + r), (x - r, y)]
    svg.path(corners, closed=True, fill=fill, stroke=stroke, stroke_width=1.5, stroke_linejoin="round")


def open_arrow(svg: Svg, x: float, y: float, colour: str, up: bool, length: float = 16) -> None:
    """Draw an open arrow from a bound towards where the value must lie."""
    s = -1 if up else 1
    tip = y + s * length
    svg.line(x - 5, y, x + 5, y, colour, stroke_width=2)
    svg.line(x, y, x, tip, colour, stroke_width=1.6)
    head = min(5.5, length * 0.6)
    svg.path(
        [(x - 4.5, tip - s * head), (x, tip), (x + 4.5, tip - s * head)],
        fill="none",
        stroke=colour,
        stroke_width=1.6,
    )
