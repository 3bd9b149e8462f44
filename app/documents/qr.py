"""QR codes as pictures of our own writer: black on white, quiet zone included."""

from __future__ import annotations

import segno

from app.documents.svg import Svg

QUIET = 4


def qr_svg(content: str, what: str) -> str:
    """Return a QR code as SVG.

    Parameters
    ----------
    content : str
        What a reader gets.
    what : str
        What it is for, for those who do not see it.

    Returns
    -------
    str
        SVG, one unit a module, error correction M.
    """
    rows = segno.make(content, error="m", micro=False, boost_error=False).matrix
    side = len(rows) + 2 * QUIET
    svg = Svg(side, side, what, content, "Libertinus Serif", "#ffffff")
    steps = []
    for y, row in enumerate(rows):
        for x, dark in enumerate(row):
            if dark:
                steps.append(f"M{x + QUIET} {y + QUIET}h1v1h-1z")
    svg.add("path", d="".join(steps), fill="#000000", shape_rendering="crispEdges")
    return str(svg)
