"""The label of a reagent bottle: what it is, its hazards in words, its lot and its days."""

from __future__ import annotations

from dataclasses import dataclass

from app.documents.letters import held_together, printable
from app.documents.typeset import paper_named, typeset
from app.documents.words import instant, moment, said
from app.errors import InputError


@dataclass(frozen=True)
class ReagentLabelData:
    """What the label shows."""

    lot: str
    recipe: str
    made_on: str
    expires_on: str
    origin: str
    standardised: str
    hazards: tuple[str, ...]
    laboratory: str
    zone: str
    made_at: str
    example: bool = False


def render_reagent_label(data: ReagentLabelData, paper: str = "a4") -> bytes:
    """Return a page with two labels: digestion solution and acid reagent of one lot.

    Parameters
    ----------
    data : ReagentLabelData
        Lot, recipe and days.
    paper : {"a4", "letter"}
        Paper size.

    Returns
    -------
    bytes
        PDF.

    Raises
    ------
    InputError
        If the lot has no name.
    """
    if not data.lot.strip():
        raise InputError("A reagent label needs its lot.", {"lot": ["is missing"]})
    view = {
        "title": f"Reagent label, lot {printable(data.lot)}",
        "author": printable(data.laboratory),
        "description": "Labels of the reagents of one lot",
        "paper": paper_named(paper),
        "watermark": "EXAMPLE DATA" if data.example else None,
        "bottles": ["Digestion solution", "Acid reagent"],
        "facts": [
            ["Lot", held_together(data.lot)],
            ["Recipe", printable(data.recipe)],
            ["Made" if data.origin == "made" else "Bought", held_together(data.made_on)],
            ["Use until", held_together(data.expires_on)],
            ["Standardised", said(data.standardised)],
            ["Laboratory", said(data.laboratory)],
        ],
        "hazards": [printable(words) for words in data.hazards],
        "printed": f"printed {moment(data.made_at, data.zone)}",
    }
    return typeset("reagent_label.typ", view, instant(data.made_at))
