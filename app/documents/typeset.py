"""Typst at work: a template and a view in, the bytes of a PDF out.

Only the fonts inside the typst package are used, so that a document does not
depend on the machine; the compiler's clock is the moment given. The view goes
in as JSON, and a string in it is only ever text: markup in a person's words
stays what it is, characters.
"""

from __future__ import annotations

import html
import json
import re
from datetime import datetime
from functools import cache
from pathlib import Path
from typing import Any, Literal

import typst

from app.documents.letters import SURELY_PRINTED, characters, missing_glyphs, without
from app.errors import InputError

TEMPLATES = Path(__file__).parent / "typst"
PAPERS = {"a4": "a4", "letter": "us-letter"}
STANDARDS: list[Literal["a-3a", "ua-1"]] = ["a-3a", "ua-1"]
TRIES = 3


@cache
def _fonts() -> typst.Fonts:
    return typst.Fonts(include_system_fonts=False)


def paper_named(name: str) -> str:
    """Return the typesetter's name of a paper size.

    Raises
    ------
    InputError
        If it is neither "a4" nor "letter".
    """
    if name not in PAPERS:
        raise InputError("This paper is not known.", {"paper": [f"one of {', '.join(PAPERS)}"]})
    return PAPERS[name]


def picture(svg: str) -> dict[str, str]:
    """Return a picture with its text alternative, as templates take it."""
    said = [re.search(rf"<{tag}>(.*?)</{tag}>", svg, re.S) for tag in ("title", "desc")]
    words = ". ".join(html.unescape(found[1]).rstrip(".") for found in said if found)
    return {"svg": svg, "alt": f"{words}."}


def _compile(template: str, view: Any, data: str, made_at: datetime) -> bytes:
    made: bytes = typst.compile(
        TEMPLATES / template,
        root=TEMPLATES,
        font_paths=_fonts(),
        ignore_system_fonts=True,
        timestamp=int(made_at.timestamp()),
        sys_inputs={"view": json.dumps(view, ensure_ascii=False), "data": data},
        pdf_standards=[*STANDARDS],
    )
    return made


def typeset(template: str, view: dict[str, Any], made_at: datetime, data: bytes = b"") -> bytes:
    """Return a document as PDF/A-3a with PDF/UA-1.

    Characters that the fonts lack are shown as codes: the compiler names them,
    and the document is made again without them.

    Parameters
    ----------
    template : str
        File name in the folder of templates.
    view : dict
        What the template prints: texts, lists, SVG.
    made_at : datetime
        The only clock of the document.
    data : bytes
        UTF-8 text attached where the template does so.

    Returns
    -------
    bytes
        The same for the same input and the same version of typst.
    """
    cannot: frozenset[str] = frozenset()
    for _ in range(TRIES):
        try:
            return _compile(template, without(view, cannot), data.decode("utf-8"), made_at)
        except typst.TypstError as error:
            missing = missing_glyphs(str(error.diagnostic))
            if not missing - cannot:
                break  # text that the fonts draw but cannot give back, e.g. a lone vowel sign
            cannot |= missing
    everything = characters(view) - SURELY_PRINTED
    return _compile(template, without(view, everything), data.decode("utf-8"), made_at)
