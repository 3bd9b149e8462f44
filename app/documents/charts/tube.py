"""The tube: its fill runs from orange through olive to green as the oxidant is used.

The level and the colour say the same thing; the number and the state stand
beside it in words.
"""

from __future__ import annotations

from app.documents.palette import Palette, palette_named
from app.documents.svg import Svg, number

WIDTH, HEIGHT = 24.0, 62.0
CAP = 9.0
EMPTY_LEVEL = 0.14


def draw_tube(svg: Svg, p: Palette, x: float, y: float, share: float | None) -> None:
    """Draw a tube of 24 by 62 with its upper left corner at a point.

    ``share`` is the oxidant used, from 0 to 1 (held there); None leaves it empty.
    """
    svg.rect(x + 1, y, WIDTH - 2, CAP, rx=2, fill=p.ink)
    left, right, top, bottom = x + 4, x + WIDTH - 4, y + CAP + 1, y + HEIGHT - 1
    radius = (right - left) / 2
    if share is not None:
        held = min(max(share, 0.0), 1.0)
        level = bottom - (bottom - top - 3) * (EMPTY_LEVEL + (1 - EMPTY_LEVEL) * held)
        svg.add("path", d=_bowl(left, right, level, bottom - radius, radius), fill=p.ramp_at(held))
    svg.add(
        "path", d=_bowl(left, right, top, bottom - radius, radius), fill="none", stroke=p.ink, stroke_width=2
    )


def _bowl(left: float, right: float, top: float, bend: float, radius: float) -> str:
    """Return the outline of a tube filled from its round bottom to a level."""
    x1, x2, y1, y2, r = (number(v) for v in (left, right, top, bend, radius))
    return f"M{x1} {y1} L{x1} {y2} A{r} {r} 0 0 0 {x2} {y2} L{x2} {y1} Z"


def share_words(share: float | None) -> str:
    """Return the share of the oxidant used, in words."""
    return "not read" if share is None else f"{share:.0%} of the oxidant used".replace("%", " %")


def tube_svg(share: float | None, state: str, palette: str = "light") -> str:
    """Draw one tube.

    Parameters
    ----------
    share : float or None
        Share of the oxidant used; None for a tube not read.
    state : str
        Its state in words, for those who do not see the picture.
    palette : {"light", "dark", "print"}
        Colours and font.

    Returns
    -------
    str
        SVG of 24 by 62.
    """
    p = palette_named(palette)
    svg = Svg(WIDTH, HEIGHT, f"Tube: {state}", f"{share_words(share)}.", p.font, p.ground)
    draw_tube(svg, p, 0, 0, share)
    return str(svg)
