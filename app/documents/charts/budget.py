"""The uncertainty budget: each source as a bar, so that one sees what would help."""

from __future__ import annotations

from app.documents.data import Component
from app.documents.palette import palette_named
from app.documents.svg import Svg, width_of
from app.errors import InputError

STEP, TOP, SIZE = 30, 4, 14


def budget_words(components: tuple[Component, ...]) -> str:
    """Return which component carries the variance, and each one's share, as a text for the picture."""
    most = max(components, key=lambda one: one.share)
    parts = "; ".join(f"{c.name} {c.u} mg/L, {c.share_percent} % of the variance" for c in components)
    return f"Most of it is {most.name}. {parts}."


def budget_svg(components: tuple[Component, ...], palette: str = "light", width: float = 560) -> str:
    """Draw the share of the variance that each component carries.

    Parameters
    ----------
    components : tuple of Component
        In the order to be shown; shares between 0 and 1.
    palette : {"light", "dark", "print"}
        Colours and font.
    width : float
        In its own units.

    Returns
    -------
    str
        SVG; each bar carries its size and its share as text.

    Raises
    ------
    InputError
        If there is none, or a share lies outside 0 to 1.
    """
    p = palette_named(palette)
    if not components or any(not 0 <= c.share <= 1 for c in components):
        raise InputError("This budget cannot be drawn.", {"components": ["need shares between 0 and 1"]})
    height, said = TOP + STEP * len(components), budget_words(components)
    svg = Svg(width, height, "Uncertainty budget", said, p.font, p.ground)
    words = [f"{c.u} mg/L, {c.share_percent} %" for c in components]
    left = max(width_of(c.name, SIZE) for c in components) + 10
    room = width - left - max(width_of(w, SIZE) for w in words) - 12
    for index, (component, sizes) in enumerate(zip(components, words, strict=True)):
        y = TOP + STEP * index
        svg.text(left - 10, y + 17, component.name, p.ink, SIZE, "end")
        svg.rect(left, y + 3, room, 18, fill="none", stroke=p.rule, stroke_width=1)
        svg.rect(left, y + 3, max(room * component.share, 1), 18, fill=p.accent)
        svg.text(left + room + 8, y + 17, sizes, p.ink, SIZE)
    return str(svg)
