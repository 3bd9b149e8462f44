"""The preparation sheet: what to weigh and measure for a recipe's reagents, and how to make its standards."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from app.documents.letters import held_together, printable
from app.documents.typeset import paper_named, typeset
from app.documents.words import instant, moment

DIGITS = 5
DEFERRAL = (
    "Prepared by trained people only. The safety data sheet of the very lot, your chemical hygiene plan and "
    "local codes decide; this sheet does not."
)


@dataclass(frozen=True)
class PreparationData:
    """What the sheet shows; ``sheet`` is the answer of the verb ``preparation``."""

    recipe: str
    source: str
    programme: str
    laboratory: str
    zone: str
    made_at: str
    sheet: dict[str, Any]
    stock: str = ""
    example: bool = False


def _amount(value: float) -> str:
    """Return an amount as a balance or a flask shows it: five significant digits."""
    return f"{value:.{DIGITS}g}" if value < 10**DIGITS else f"{value:.0f}"


def _row(line: dict[str, Any]) -> list[str]:
    amount = held_together(f"{_amount(line['amount'])} {line['unit']}")
    purity = "" if line["purity"] == 1.0 else f"purity {line['purity']:.4g}"
    return [printable(line["substance"]), amount, printable(line["into"]), purity, "________"]


def _standard(one: dict[str, Any]) -> list[str]:
    off = (
        ""
        if abs(one["cod"] - one["wanted"]) < 1e-6 * max(1.0, one["wanted"])
        else f"({one['wanted']:g} asked)"
    )
    cod = f"{_amount(one['cod'])} mg/L {off}".strip()
    share = f"{100 * one['relative_u']:.2f} %" if one["relative_u"] else ""
    return [held_together(cod), printable(one["words"]), share, "________"]


def _cautions(lines: Sequence[dict[str, Any]]) -> list[str]:
    return list(dict.fromkeys(printable(line["caution"]) for line in lines))


def render_preparation(data: PreparationData, paper: str = "a4") -> bytes:
    """Return the preparation sheet.

    Parameters
    ----------
    data : PreparationData
        The recipe's name and what the sums said.
    paper : {"a4", "letter"}
        Paper size.

    Returns
    -------
    bytes
        PDF.

    Raises
    ------
    InputError
        If the paper is not known.
    """
    sheet = data.sheet
    stock = [sheet["stock"]] if sheet["stock"] else []
    view = {
        "title": f"Preparation sheet, {printable(data.recipe)}",
        "author": printable(data.laboratory),
        "description": "What to weigh and measure for the reagents and standards of a recipe",
        "paper": paper_named(paper),
        "watermark": "EXAMPLE DATA" if data.example else None,
        "head-left": printable(data.recipe),
        "head-right": "Preparation sheet",
        "foot": f"printed {moment(data.made_at, data.zone)}",
        "recipe": printable(data.recipe),
        "source": printable(data.source),
        "programme": printable(data.programme),
        "laboratory": printable(data.laboratory),
        "weigh": [_row(line) for line in sheet["weigh"]],
        "stock": [_row(line) for line in stock],
        "stock-words": printable(data.stock),
        "standards": [_standard(one) for one in sheet["standards"]],
        "cautions": _cautions([*sheet["weigh"], *stock]),
        "deferral": DEFERRAL,
    }
    return typeset("preparation.typ", view, instant(data.made_at))
