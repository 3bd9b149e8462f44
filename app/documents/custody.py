"""The custody form: every bottle, and every pair of hands it goes through.

What is recorded is printed; blank rows are left for pens, because paper goes
on where the tablet stops. Fields: common practice for chain of custody.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from app.documents.letters import held_together, printable
from app.documents.palette import PRINT
from app.documents.svg import Svg
from app.documents.typeset import paper_named, picture, typeset
from app.documents.words import NOT_RECORDED, instant, listed, moment, said
from app.errors import InputError


@dataclass(frozen=True)
class CustodyBottle:
    """One bottle; ``started_at`` only for a composite."""

    code: str
    discharger: str
    point: str
    kind: str
    collected_at: str
    started_at: str | None = None
    preservation: tuple[str, ...] = ()
    container: str = ""
    collected_by: str = ""
    analyses: str = "COD"
    remarks: str = ""


@dataclass(frozen=True)
class Transfer:
    """One hand-over that is on record; temperature as text with unit, signatures as SVG paths."""

    given_by: str
    taken_by: str
    at: str
    temperature: str = ""
    seals: str = ""
    note: str = ""
    given_strokes: str = ""
    taken_strokes: str = ""


@dataclass(frozen=True)
class CustodyData:
    """What the form shows; ``id`` names the round or the hand-over."""

    id: str
    programme: str
    laboratory: str
    zone: str
    made_at: str
    bottles: tuple[CustodyBottle, ...]
    transfers: tuple[Transfer, ...] = ()
    blank_transfers: int = 3
    note: str = ""
    example: bool = False


def _bottle_row(bottle: CustodyBottle, zone: str) -> list[str]:
    taken = moment(bottle.collected_at, zone)
    if bottle.started_at:
        taken = f"{moment(bottle.started_at, zone)} to {taken}"
    return [
        held_together(bottle.code),
        f"{said(bottle.discharger)}, {said(bottle.point)}",
        printable(bottle.kind),
        taken,
        listed(tuple(printable(p) for p in bottle.preservation)),
        said(bottle.container),
        printable(bottle.analyses),
        said(bottle.collected_by),
        printable(bottle.remarks),
    ]


def _signed(name: str, strokes: str) -> dict[str, Any]:
    """Return a name with its signature, if it was written on glass."""
    words = printable(name)
    if not strokes:
        return {"words": words, "picture": None}
    drawn = Svg(320, 110, f"Signature of {words}", "Written on glass", PRINT.font)
    drawn.add("path", d=strokes, fill="none", stroke=PRINT.ink, stroke_width=3, stroke_linecap="round")
    return {"words": words, "picture": picture(str(drawn))}


def _transfer_row(transfer: Transfer, zone: str) -> list[Any]:
    return [
        _signed(transfer.given_by, transfer.given_strokes),
        moment(transfer.at, zone),
        _signed(transfer.taken_by, transfer.taken_strokes),
        held_together(transfer.temperature) or NOT_RECORDED,
        printable(transfer.seals) or NOT_RECORDED,
        printable(transfer.note),
    ]


def render_custody(data: CustodyData, paper: str = "a4") -> bytes:
    """Return the custody form, landscape.

    Parameters
    ----------
    data : CustodyData
        At least one bottle.
    paper : {"a4", "letter"}
        Paper size.

    Returns
    -------
    bytes
        PDF.

    Raises
    ------
    InputError
        If there is no bottle.
    """
    if not data.bottles:
        raise InputError("A custody form needs a bottle.", {"bottles": ["is empty"]})
    view = {
        "title": f"Custody form {printable(data.id)}",
        "author": printable(data.programme),
        "description": f"Custody of {len(data.bottles)} bottles",
        "paper": paper_named(paper),
        "watermark": "EXAMPLE DATA" if data.example else None,
        "head-left": "Custody form",
        "head-right": printable(data.id),
        "foot": f"Custody form {printable(data.id)}, printed {moment(data.made_at, data.zone)}",
        "programme": printable(data.programme),
        "laboratory": printable(data.laboratory),
        "id": held_together(data.id),
        "count": str(len(data.bottles)),
        "zone": printable(data.zone),
        "bottles": [_bottle_row(b, data.zone) for b in data.bottles],
        "transfers": [_transfer_row(t, data.zone) for t in data.transfers],
        "blanks": data.blank_transfers,
        "note": printable(data.note),
    }
    return typeset("custody.typ", view, instant(data.made_at))
