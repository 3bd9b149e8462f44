"""The colours of charts: light, dark, and print (legible in black and white).

No state is told by colour alone: every chart adds a shape and a word. The
print colours keep their order of lightness when the page is copied in grey.
"""

from __future__ import annotations

from dataclasses import dataclass

from app.errors import InputError

SCREEN_FONT = "system-ui, sans-serif"
PAPER_FONT = "Libertinus Serif"

# Share of the oxidant used from which the next colour of the ramp begins.
RAMP_FROM = (0.0, 0.35, 0.60, 0.85)


@dataclass(frozen=True)
class Palette:
    """Colours by their use, and the font of the same medium."""

    name: str
    ground: str | None
    card: str
    ink: str
    soft: str
    rule: str
    accent: str
    accent_ground: str
    stop: str
    stop_ground: str
    ramp: tuple[str, str, str, str]
    font: str

    def ramp_at(self, share: float) -> str:
        """Return the tube's colour at a share of the oxidant used."""
        return self.ramp[sum(share >= start for start in RAMP_FROM[1:])]


LIGHT = Palette(
    name="light",
    ground=None,
    card="#fffdf8",
    ink="#1b2026",
    soft="#55606b",
    rule="#d8d0bf",
    accent="#0e5a6b",
    accent_ground="#dcebec",
    stop="#a3262a",
    stop_ground="#f7e3df",
    ramp=("#e07a1f", "#c99a1e", "#8a9a3b", "#2f7a4d"),
    font=SCREEN_FONT,
)
DARK = Palette(
    name="dark",
    ground=None,
    card="#171c21",
    ink="#f1ede2",
    soft="#aeb7bf",
    rule="#434c55",
    accent="#6fc3d4",
    accent_ground="#143a43",
    stop="#ff9a8f",
    stop_ground="#47201f",
    ramp=("#f08a35", "#d9ac38", "#a5b552", "#52a873"),
    font=SCREEN_FONT,
)
PRINT = Palette(
    name="print",
    ground=None,
    card="#ffffff",
    ink="#000000",
    soft="#3c444c",
    rule="#c2c7cc",
    accent="#0e5a6b",
    accent_ground="#e3eff0",
    stop="#8c1d21",
    stop_ground="#f4e4e2",
    ramp=("#f4c795", "#cfa83a", "#7c8c33", "#1d5435"),
    font=PAPER_FONT,
)
PALETTES = {p.name: p for p in (LIGHT, DARK, PRINT)}


def palette_named(name: str) -> Palette:
    """Return a palette by its name.

    Parameters
    ----------
    name : {"light", "dark", "print"}

    Raises
    ------
    InputError
        If there is none of that name.
    """
    if name not in PALETTES:
        raise InputError("This palette is not known.", {"palette": [f"one of {', '.join(PALETTES)}"]})
    return PALETTES[name]
