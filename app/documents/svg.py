"""A small SVG writer: presentation attributes only, the same input gives the same bytes.

No ``style`` attribute or element, so that a picture may stand inline under a
strict content security policy; a title and a description for screen readers;
coordinates written with at most two decimals. Text is escaped here and nowhere
else.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field
from xml.sax.saxutils import escape, quoteattr

# XML 1.0, production Char.
NOT_XML = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")

Value = str | float | int | None

# Mean width of a character in em, wide enough for the widest of the system sans fonts.
CHARACTER_EM = 0.62


def number(value: float) -> str:
    """Return a coordinate with at most two decimals, without trailing zeros.

    Parameters
    ----------
    value : float
        A finite number.

    Returns
    -------
    str
        Never "-0".

    Raises
    ------
    ValueError
        If it is not finite: a picture with a hole is not drawn in silence.
    """
    if value != value or value in (float("inf"), float("-inf")):
        raise ValueError("a coordinate must be a finite number")
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def width_of(text: str, size: float) -> float:
    """Return about how wide a text is drawn, in the units of ``size``."""
    return len(text) * size * CHARACTER_EM


def _safe(text: str) -> str:
    """Leave out characters that XML 1.0 cannot carry."""
    return NOT_XML.sub("", text)


def _attributes(given: dict[str, Value]) -> str:
    parts = []
    for name, value in given.items():
        if value is not None:
            text = value if isinstance(value, str) else number(value)
            parts.append(f" {name.rstrip('_').replace('_', '-')}={quoteattr(_safe(text))}")
    return "".join(parts)


@dataclass
class Svg:
    """One picture in the making.

    Parameters
    ----------
    width, height : float
        Size in its own units; also its natural size in pixels.
    title, description : str
        What a screen reader says: the subject, then what is to be seen.
    font : str
        Font family of all text.
    ground : str or None
        Colour behind everything; None leaves it clear.
    """

    width: float
    height: float
    title: str
    description: str
    font: str
    ground: str | None = None
    parts: list[str] = field(default_factory=list)

    def add(self, tag: str, **attributes: Value) -> None:
        """Add an empty element; underscores in names become hyphens."""
        self.parts.append(f"<{tag}{_attributes(attributes)}/>")

    def line(self, x1: float, y1: float, x2: float, y2: float, stroke: str, **more: Value) -> None:
        """Add a straight line."""
        self.add("line", x1=x1, y1=y1, x2=x2, y2=y2, stroke=stroke, **more)

    def rect(self, x: float, y: float, width: float, height: float, **more: Value) -> None:
        """Add a rectangle."""
        self.add("rect", x=x, y=y, width=width, height=height, **more)

    def circle(self, x: float, y: float, r: float, **more: Value) -> None:
        """Add a circle."""
        self.add("circle", cx=x, cy=y, r=r, **more)

    def path(self, points: Iterable[tuple[float, float]], closed: bool = False, **more: Value) -> None:
        """Add a path through points."""
        steps = " L".join(f"{number(x)} {number(y)}" for x, y in points)
        self.add("path", d=f"M{steps}{' Z' if closed else ''}", **more)

    def text(
        self,
        x: float,
        y: float,
        words: str,
        fill: str,
        size: float = 12,
        anchor: str | None = None,
        bold: bool = False,
        halo: str | None = None,
        transform: str | None = None,
    ) -> None:
        """Add text; ``halo`` is the colour of an edge that keeps it legible over lines."""
        edge: dict[str, Value] = {}
        if halo is not None:
            edge = {"stroke": halo, "stroke_width": 3, "stroke_linejoin": "round", "paint_order": "stroke"}
        given: dict[str, Value] = {
            "x": x,
            "y": y,
            "fill": fill,
            "font_size": size,
            "text_anchor": anchor,
            "font_weight": "bold" if bold else None,
            "transform": transform,
        }
        self.parts.append(f"<text{_attributes(given | edge)}>{escape(_safe(words))}</text>")

    def __str__(self) -> str:
        """Return the whole document."""
        head: dict[str, Value] = {
            "xmlns": "http://www.w3.org/2000/svg",
            "viewBox": f"0 0 {number(self.width)} {number(self.height)}",
            "width": self.width,
            "height": self.height,
            "role": "img",
            "font_family": self.font,
        }
        ground = (
            []
            if self.ground is None
            else [f"<rect{_attributes({'width': self.width, 'height': self.height, 'fill': self.ground})}/>"]
        )
        said = f"<title>{escape(_safe(self.title))}</title><desc>{escape(_safe(self.description))}</desc>"
        return f"<svg{_attributes(head)}>{said}{''.join(ground + self.parts)}</svg>"
