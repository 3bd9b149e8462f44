"""Bottle labels: the code large, the same code as QR, and lines for a pencil.

The QR code holds the bottle code and nothing else, so that it is read without
a network. Each label is framed: on plain paper the frame is the line to cut.
"""

from __future__ import annotations

from dataclasses import asdict, dataclass

from app.documents.letters import held_together, printable
from app.documents.qr import qr_svg
from app.documents.typeset import paper_named, typeset
from app.documents.words import instant
from app.errors import InputError

LINES = 3


@dataclass(frozen=True)
class Label:
    """One bottle: its code, and what is known of point, time and sampler, in this order."""

    code: str
    lines: tuple[str, ...] = ()


@dataclass(frozen=True)
class Sheet:
    """The places of labels on a page, in millimetres."""

    columns: int
    rows: int
    width: float
    height: float
    left: float
    top: float
    gap_x: float = 0.0
    gap_y: float = 0.0


# Common label stock (common practice; measure yours): 21 on A4, 10 on Letter.
SHEETS = {
    "a4": Sheet(3, 7, 63.5, 38.1, 7.25, 15.15, 2.5),
    "letter": Sheet(2, 5, 101.6, 50.8, 4.0, 12.7, 4.7),
}


def render_labels(
    labels: tuple[Label, ...], programme: str, made_at: str, paper: str = "a4", sheet: Sheet | None = None
) -> bytes:
    """Return sheets of bottle labels.

    Parameters
    ----------
    labels : tuple of Label
        In the order of the sheet, by rows.
    programme : str
        Name on every label.
    made_at : str
        RFC 3339; the document's clock.
    paper : {"a4", "letter"}
        Paper size.
    sheet : Sheet, optional
        Other label stock than the usual.

    Returns
    -------
    bytes
        PDF.

    Raises
    ------
    InputError
        If there are no labels, a code stands twice, or a label has too many lines.
    """
    codes = [label.code for label in labels]
    if not labels or len(set(codes)) != len(codes) or not all(code.strip() for code in codes):
        raise InputError(
            "These labels cannot be made.", {"labels": ["one label for each code, each code once"]}
        )
    if any(len(label.lines) > LINES for label in labels):
        raise InputError("A label has too many lines.", {"labels": [f"{LINES} lines at most"]})
    size = paper_named(paper)
    view = {
        "title": f"Bottle labels {codes[0]} to {codes[-1]}",
        "author": printable(programme),
        "description": f"{len(codes)} bottle labels",
        "paper": size,
        "sheet": asdict(sheet or SHEETS[paper]),
        "programme": printable(programme),
        "labels": [
            {
                "code": held_together(label.code),
                "qr": qr_svg(label.code, f"QR code of bottle {label.code}"),
                "lines": [printable(line) for line in label.lines],
            }
            for label in labels
        ],
    }
    return typeset("labels.typ", view, instant(made_at))
