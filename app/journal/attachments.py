"""Attachments: bytes named by their SHA-256, sent apart from the entry that names them.

A photo is larger than what a thin link carries at once. It comes in parts, in
order; what has come is kept and told, so that a device goes on where the link
broke. Only when all bytes are here and have the digest they were announced
under does the attachment exist; bytes with another digest are dropped and
asked for again.
"""

from __future__ import annotations

import hashlib
import sqlite3
from dataclasses import dataclass
from datetime import datetime, timedelta

from app.errors import WeirbookError

MOST_BYTES = 8 * 1024 * 1024
MOST_OPEN = 500
FORGOTTEN_AFTER = timedelta(days=60)

#: The first bytes of the picture formats that are taken.
PICTURES = ((b"\xff\xd8\xff", "image/jpeg"), (b"\x89PNG\r\n\x1a\n", "image/png"))


class AttachmentError(WeirbookError):
    """Some bytes cannot be kept; what had come before is kept, and the device keeps its own copy."""

    code = "attachment"
    status = 422


class OutOfPlace(AttachmentError):
    """A part that does not follow what has come; the device goes on from there."""

    code = "out_of_place"
    status = 409


class NotAPicture(AttachmentError):
    """Neither JPEG nor PNG."""

    code = "not_a_picture"
    status = 415


class TooLarge(AttachmentError):
    """More than the server keeps of one attachment."""

    code = "too_large"
    status = 413


class TooMany(AttachmentError):
    """Too many attachments are on their way; the device sends this one later."""

    code = "too_many_attachments"
    status = 503


@dataclass(frozen=True)
class Have:
    """How much of an attachment is here.

    Attributes
    ----------
    bytes : int
        How many bytes have come, from the first on.
    complete : bool
        Whether they are all there and have their digest.
    media_type : str
        Empty while it is not complete.
    """

    bytes: int
    complete: bool
    media_type: str = ""


@dataclass(frozen=True)
class Part:
    """Some bytes of an attachment: where they begin, and how long the whole is."""

    digest: str
    at: int
    size: int
    data: bytes


def have(connection: sqlite3.Connection, digest: str) -> Have:
    """Return how much of an attachment is here."""
    row = connection.execute(
        "SELECT length(bytes), media_type FROM blob WHERE digest = ?", (digest,)
    ).fetchone()
    if row:
        return Have(row[0], True, row[1])
    come = connection.execute(
        "SELECT coalesce(sum(length(bytes)), 0) FROM part WHERE digest = ?", (digest,)
    ).fetchone()
    return Have(come[0], False)


def bytes_of(connection: sqlite3.Connection, digest: str) -> tuple[bytes, str] | None:
    """Return an attachment and its media type, or None while it is not whole."""
    row = connection.execute("SELECT bytes, media_type FROM blob WHERE digest = ?", (digest,)).fetchone()
    return (row[0], row[1]) if row else None


def _media_type(data: bytes) -> str:
    for beginning, name in PICTURES:
        if data.startswith(beginning):
            return name
    raise NotAPicture("This is neither a JPEG nor a PNG picture; it was not kept.")


def _check(connection: sqlite3.Connection, part: Part, come: int) -> None:
    if not 0 < part.size <= MOST_BYTES:
        raise TooLarge(f"An attachment may have up to {MOST_BYTES // 1024 // 1024} MiB; it was not kept.")
    if part.at != come or not part.data or part.at + len(part.data) > part.size:
        raise OutOfPlace(f"The server has the first {come} bytes of this picture; go on from there.")
    known = connection.execute("SELECT size FROM part WHERE digest = ? LIMIT 1", (part.digest,)).fetchone()
    if known and known[0] != part.size:
        raise OutOfPlace("This picture was announced with another size before; begin again later.")
    if part.at == 0:
        _media_type(part.data)


def _make_room(connection: sqlite3.Connection, received_at: str) -> None:
    """Drop what nobody has gone on with for long."""
    oldest = (datetime.fromisoformat(received_at) - FORGOTTEN_AFTER).isoformat(timespec="milliseconds")
    connection.execute(
        "DELETE FROM part WHERE digest IN "
        "(SELECT digest FROM part GROUP BY digest HAVING max(received_at) < ?)",
        (oldest,),
    )
    (count,) = connection.execute("SELECT count(DISTINCT digest) FROM part").fetchone()
    if count >= MOST_OPEN:
        raise TooMany("Too many pictures are on their way at once; the device sends this one later.")


def take(connection: sqlite3.Connection, part: Part, received_at: str) -> Have:
    """Keep a part; with the last one the attachment is whole. The caller holds the write transaction.

    Returns
    -------
    Have
        With no bytes when they were all there and had another digest: they are dropped.

    Raises
    ------
    AttachmentError
        If the part cannot be kept.
    """
    known = have(connection, part.digest)
    if known.complete:
        return known
    _check(connection, part, known.bytes)
    if known.bytes == 0:
        _make_room(connection, received_at)
    connection.execute(
        "INSERT INTO part VALUES (?, ?, ?, ?, ?)", (part.digest, part.at, part.size, part.data, received_at)
    )
    come = known.bytes + len(part.data)
    return _finish(connection, part.digest) if come == part.size else Have(come, False)


def _finish(connection: sqlite3.Connection, digest: str) -> Have:
    rows = connection.execute("SELECT bytes FROM part WHERE digest = ? ORDER BY at", (digest,)).fetchall()
    whole = b"".join(row[0] for row in rows)
    connection.execute("DELETE FROM part WHERE digest = ?", (digest,))
    if hashlib.sha256(whole).hexdigest() != digest:
        return Have(0, False)
    connection.execute("INSERT INTO blob VALUES (?, ?, ?)", (digest, _media_type(whole), whole))
    return have(connection, digest)
