"""The run sheet: what goes into which position, and room for readings by pen.

It carries a run through a dead tablet: tubes, gates to tick, heating times and
readings. Cautions come from :mod:`app.safety` and are passed in.
"""

from __future__ import annotations

from dataclasses import dataclass

from app.documents.charts.rack import RackTube, rack_svg
from app.documents.data import Dilution
from app.documents.letters import held_together, printable
from app.documents.typeset import paper_named, picture, typeset
from app.documents.words import dilution_words, duration_words, instant, moment, number_with_unit, said
from app.errors import InputError


@dataclass(frozen=True)
class RunTube:
    """One position: blank, verification with its expected value, or a bottle."""

    position: int
    what: str
    dilution: Dilution | None = None
    expected: str = ""
    absorbance: str = ""


@dataclass(frozen=True)
class RunSheetData:
    """What the sheet shows; moments are RFC 3339, numbers are texts."""

    name: str
    programme: str
    laboratory: str
    zone: str
    made_at: str
    planned_by: str
    recipe: str
    source: str
    lot: str
    photometer: str
    wavelength_nm: str
    block: str
    calibration: str
    container: str
    minutes: int
    temperature_c: str
    tubes: tuple[RunTube, ...]
    columns: int = 5
    order: tuple[str, ...] = ()
    gates: tuple[str, ...] = ()
    cautions: tuple[str, ...] = ()
    example: bool = False


def _tube_row(tube: RunTube) -> list[str]:
    return [
        str(tube.position),
        printable(tube.what),
        "" if tube.dilution is None else dilution_words(tube.dilution),
        held_together(tube.expected),
        held_together(tube.absorbance),
    ]


def _facts(data: RunSheetData) -> list[list[str]]:
    heat = f"{duration_words(data.minutes)} at {number_with_unit(data.temperature_c, '°C')}"
    return [
        ["Planned by", said(data.planned_by)],
        ["Recipe", f"{said(data.recipe)} ({said(data.source)})"],
        ["Lot", said(data.lot)],
        ["Photometer", f"{said(data.photometer)}, {number_with_unit(data.wavelength_nm, 'nm')}"],
        ["Calibration", said(data.calibration)],
        ["Block", f"{said(data.block)}, {heat}"],
        ["Waste container", said(data.container)],
    ]


def render_run_sheet(data: RunSheetData, paper: str = "a4") -> bytes:
    """Return the run sheet.

    Parameters
    ----------
    data : RunSheetData
        At least one tube, each position once.
    paper : {"a4", "letter"}
        Paper size.

    Returns
    -------
    bytes
        PDF.

    Raises
    ------
    InputError
        If there is no tube or a position stands twice.
    """
    positions = [tube.position for tube in data.tubes]
    if not positions or len(set(positions)) != len(positions):
        raise InputError("This run sheet cannot be made.", {"tubes": ["at least one, each position once"]})
    rack = tuple(RackTube(t.position, printable(t.what)) for t in data.tubes)
    name = printable(data.name)
    view = {
        "title": f"Run sheet, {name}",
        "author": printable(data.laboratory),
        "description": f"Run sheet of {len(positions)} tubes",
        "paper": paper_named(paper),
        "watermark": "EXAMPLE DATA" if data.example else None,
        "head-left": "Run sheet",
        "head-right": name,
        "foot": f"Run sheet, {name}, printed {moment(data.made_at, data.zone)}",
        "programme": printable(data.programme),
        "laboratory": printable(data.laboratory),
        "name": name,
        "facts": _facts(data),
        "rack": picture(rack_svg(rack, data.columns, "print")),
        "tubes": [_tube_row(t) for t in sorted(data.tubes, key=lambda t: t.position)],
        "order": [printable(step) for step in data.order],
        "gates": [printable(gate) for gate in data.gates],
        "cautions": [printable(words) for words in data.cautions],
    }
    return typeset("run_sheet.typ", view, instant(data.made_at))
