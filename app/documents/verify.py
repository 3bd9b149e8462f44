"""Read the data back out of a certificate's PDF, offline and strictly.

A certificate is written once: one revision, one cross-reference table, one
attached file. This reader takes exactly that shape and nothing else, so that a
file to which something was appended (an incremental update may change the
visible pages and leave the attachment as it was) is refused and not read.

What each answer proves: the data digest, compared with the journal's or the
verify page's, proves the *data*. That the *pages* say the same is proved by
the SHA-256 of the whole file, which the journal keeps, or by making the
document again from its data: :func:`made_again`.
"""

from __future__ import annotations

import json
import re
import zlib
from typing import Any

from app.documents.certificate import render_certificate
from app.documents.data import certificate_from_json
from app.errors import InputError

LARGEST = 20_000_000
_ENTRY = re.compile(rb"(\d{10}) (\d{5}) ([nf])[\r\n ]{2}")
_OBJECT = re.compile(rb"\d+ \d+ obj\s*(<<.*?)stream\r?\n", re.S)
_LENGTH = re.compile(rb"/Length (\d+)")


def _refuse(why: str) -> InputError:
    return InputError(
        "This is not a certificate as Weirbook writes it, or it was changed since.", {"file": [why]}
    )


def _offsets(pdf: bytes) -> list[int]:
    """Return the places of all objects of a file with a single revision."""
    end = re.search(rb"startxref\s+(\d+)\s+%%EOF\s*\Z", pdf[-64:])
    if not pdf.startswith(b"%PDF-") or end is None:
        raise _refuse("it does not begin and end as a PDF of one revision")
    start = int(end[1])
    table, trailer, rest = pdf[start:].partition(b"trailer")
    head = re.match(rb"xref\s+0 (\d+)\s+", table)
    if head is None or not trailer or b"/Prev" in rest:
        raise _refuse("its table of contents is not that of one revision")
    entries = _ENTRY.findall(table, head.end())
    if len(entries) != int(head[1]):
        raise _refuse("its table of contents is damaged")
    return [int(place) for place, _, kind in entries if kind == b"n"]


def _attached(pdf: bytes, offset: int) -> bytes | None:
    """Return the attached file that begins at a place, or None for another object."""
    found = _OBJECT.match(pdf, offset, offset + 4096)
    if found is None or b"/Type/EmbeddedFile" not in found[1]:
        return None
    length = _LENGTH.search(found[1])
    if length is None or b"/Filter/FlateDecode" not in found[1]:
        raise _refuse("its attachment is written in another way")
    unpack = zlib.decompressobj()
    try:
        content = unpack.decompress(pdf[found.end() : found.end() + int(length[1])], LARGEST)
    except zlib.error as error:
        raise _refuse("its attachment is damaged") from error
    if not unpack.eof or unpack.unused_data:
        raise _refuse("its attachment is damaged or too large")
    return content


def embedded_json(pdf: bytes) -> bytes:
    """Return the attached bytes of a certificate, exactly as they were attached.

    Parameters
    ----------
    pdf : bytes
        The file.

    Returns
    -------
    bytes
        Their SHA-256 is the certificate's data digest.

    Raises
    ------
    InputError
        If the file is not a certificate as Weirbook writes it.
    """
    found = [content for place in _offsets(pdf) if (content := _attached(pdf, place)) is not None]
    if len(found) != 1:
        raise _refuse(f"it holds {len(found)} attached files, not one")
    return found[0]


def embedded_data(pdf: bytes) -> dict[str, Any]:
    """Return the attached data of a certificate as plain values.

    Parameters
    ----------
    pdf : bytes
        The file.

    Returns
    -------
    dict
        What :class:`app.documents.data.CertificateData` holds.

    Raises
    ------
    InputError
        If the file is not a certificate as Weirbook writes it, or its data do
        not fit the schema.
    """
    content = embedded_json(pdf)
    certificate_from_json(content)
    plain: dict[str, Any] = json.loads(content)
    return plain


def made_again(pdf: bytes, base_url: str) -> bool:
    """Tell whether making the document again from its data gives the same bytes.

    Parameters
    ----------
    pdf : bytes
        The file.
    base_url : str
        The address of the server that issued it.

    Returns
    -------
    bool
        True proves that the pages say what the data say. False is no proof of
        a change: another version of Weirbook or of typst may set the same data
        in other bytes.

    Raises
    ------
    InputError
        If the file is not a certificate as Weirbook writes it.
    """
    data = certificate_from_json(embedded_json(pdf))
    return any(render_certificate(data, base_url, paper) == pdf for paper in ("a4", "letter"))
