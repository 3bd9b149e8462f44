"""The label of a waste container: what is in it, why it is dangerous, whose it is.

It says the hazards in words and leaves room for the pictograms that the safety
data sheet and local rules ask for; the codes and the determination are the
generator's. A caution, not a claim of compliance.
"""

from __future__ import annotations

from dataclasses import dataclass

from app.documents.letters import held_together, printable
from app.documents.typeset import paper_named, typeset
from app.documents.words import instant, moment, said
from app.errors import InputError


@dataclass(frozen=True)
class WasteLabelData:
    """What the label shows; amounts are texts with unit, e.g. ("mercury", "0.84 g")."""

    container: str
    contents: str
    hazards: tuple[str, ...]
    generator: str
    address: str
    phone: str
    zone: str
    made_at: str
    started_on: str = ""
    dated_on: str = ""
    codes: tuple[str, ...] = ()
    amounts: tuple[tuple[str, str], ...] = ()
    filled: str = ""
    cautions: tuple[str, ...] = (
        "Acid-resistant container with a vented cap, never metal.",
        "Keep apart from bases, cyanides, sulfides, metals and organic material.",
        "Follow the safety data sheet and local rules; call trained help for a spill.",
    )
    example: bool = False


def render_waste_label(data: WasteLabelData, paper: str = "a4") -> bytes:
    """Return a page with one label of half a page.

    Parameters
    ----------
    data : WasteLabelData
        Container, contents and at least one hazard.
    paper : {"a4", "letter"}
        Paper size.

    Returns
    -------
    bytes
        PDF.

    Raises
    ------
    InputError
        If container, contents or hazards are missing; each is named.
    """
    needed = {"container": data.container, "contents": data.contents, "hazards": "".join(data.hazards)}
    wrong = {name: ["is missing"] for name, value in needed.items() if not value.strip()}
    if wrong:
        raise InputError("A waste label needs more.", wrong)
    facts = [
        ["Container", held_together(data.container)],
        ["Filled", said(data.filled)],
        ["First waste", held_together(data.started_on) if data.started_on else "________________"],
        ["Accumulation date", held_together(data.dated_on) if data.dated_on else "________________"],
        ["Codes", printable(", ".join(data.codes)) or "for the generator to determine"],
        ["Generator", said(data.generator)],
        ["Address", said(data.address)],
        ["In an emergency", said(data.phone)],
    ]
    view = {
        "title": f"Waste label, container {printable(data.container)}",
        "author": printable(data.generator) or "Weirbook",
        "description": "Label of a hazardous waste container",
        "paper": paper_named(paper),
        "watermark": "EXAMPLE DATA" if data.example else None,
        "contents": printable(data.contents),
        "hazards": [printable(words) for words in data.hazards],
        "facts": facts,
        "amounts": [[printable(name), held_together(amount)] for name, amount in data.amounts],
        "cautions": [printable(words) for words in data.cautions],
        "printed": f"printed {moment(data.made_at, data.zone)}",
    }
    return typeset("waste_label.typ", view, instant(data.made_at))
