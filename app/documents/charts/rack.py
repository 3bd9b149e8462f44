"""The rack: every tube in its block position, with its number and its state in words."""

from __future__ import annotations

from dataclasses import dataclass

from app.documents.charts.tube import HEIGHT, WIDTH, draw_tube, share_words
from app.documents.palette import Palette, palette_named
from app.documents.svg import Svg
from app.errors import InputError

CELL_W, CELL_H, EDGE = 104, 122, 14
SIZE = 13


@dataclass(frozen=True)
class RackTube:
    """One block position.

    Parameters
    ----------
    position : int
        From 1, by rows from the upper left.
    label : str
        Bottle code or role.
    share : float or None
        Share of the oxidant used; None when not read.
    number : str
        COD in the tube as reported, or empty.
    state : str
        In words, e.g. "over"; shown in place of an absent number.
    stop : bool
        Framed and marked when it cannot be used.
    """

    position: int
    label: str
    share: float | None = None
    number: str = ""
    state: str = ""
    stop: bool = False


def _cell(svg: Svg, p: Palette, tube: RackTube, x: float, y: float) -> None:
    if tube.stop:
        svg.rect(
            x + 3, y + 2, CELL_W - 6, CELL_H - 4, rx=8, fill=p.stop_ground, stroke=p.stop, stroke_width=2.5
        )
    middle = x + CELL_W / 2
    svg.text(x + 10, y + 20, str(tube.position), p.soft, SIZE - 2)
    draw_tube(svg, p, middle - WIDTH / 2, y + 12, tube.share)
    svg.text(middle, y + HEIGHT + 31, tube.label, p.ink, SIZE, "middle")
    below = tube.number or tube.state
    svg.text(middle, y + HEIGHT + 49, below, p.stop if tube.stop else p.soft, SIZE, "middle", bold=tube.stop)


def rack_svg(tubes: tuple[RackTube, ...], columns: int = 5, palette: str = "light") -> str:
    """Draw the rack.

    Parameters
    ----------
    tubes : tuple of RackTube
        Positions from 1, each at most once; positions not named stay empty.
    columns : int
        Positions in a row of the block.
    palette : {"light", "dark", "print"}
        Colours and font.

    Returns
    -------
    str
        SVG.

    Raises
    ------
    InputError
        If there is no tube, a position is below 1 or stands twice.
    """
    p = palette_named(palette)
    by_position = {t.position: t for t in tubes}
    if not tubes or columns < 1 or min(by_position) < 1 or len(by_position) != len(tubes):
        raise InputError("This rack cannot be drawn.", {"tubes": ["positions go from 1, each once"]})
    rows = -(-max(by_position) // columns)
    said = "; ".join(f"{t.position} {t.label} {t.number or t.state or share_words(t.share)}" for t in tubes)
    width, height = columns * CELL_W + 2 * EDGE, rows * CELL_H + 2 * EDGE
    svg = Svg(width, height, f"Rack of {len(tubes)} tubes", f"{said}.", p.font, p.ground)
    svg.rect(1, 1, width - 2, height - 2, rx=14, fill=p.card, stroke=p.ink, stroke_width=2)
    for position in range(1, rows * columns + 1):
        row, column = divmod(position - 1, columns)
        tube = by_position.get(position, RackTube(position, "empty"))
        _cell(svg, p, tube, EDGE + column * CELL_W, EDGE + row * CELL_H)
    return str(svg)
