"""The chain: each entry's digest covers the one before, so a change anywhere shows.

``digest = SHA-256(previous digest, received bytes)``, the previous digest as 64
hexadecimal characters; the first entry has 64 zeros before it. A chain shows
that nothing up to an anchored head was changed, removed or reordered; it does
not show that what was stated is true, nor what came after the last anchor.
"""

from __future__ import annotations

import hashlib
import json
import sqlite3
from collections.abc import Iterator
from dataclasses import dataclass

GENESIS = "0" * 64


@dataclass(frozen=True)
class Head:
    """The newest entry's place and digest."""

    position: int
    digest: str


@dataclass(frozen=True)
class Row:
    """An entry as the journal keeps it; ``held`` names why it is not in force."""

    position: int
    device: str
    carrier: str
    received_at: str
    held: dict[str, object] | None
    raw: bytes


def link(previous: str, raw: bytes) -> str:
    """Return the digest of an entry that follows ``previous``."""
    return hashlib.sha256(previous.encode("ascii") + raw).hexdigest()


def head(connection: sqlite3.Connection) -> Head:
    """Return the newest entry's place and digest."""
    row = connection.execute("SELECT position, digest FROM journal ORDER BY position DESC LIMIT 1").fetchone()
    return Head(*row) if row else Head(0, GENESIS)


def first_bad(connection: sqlite3.Connection) -> int | None:
    """Walk the chain and return the position of the first bad entry, or None."""
    previous, expected = GENESIS, 1
    for position, raw, raw_digest, digest in connection.execute(
        "SELECT position, raw, raw_digest, digest FROM journal ORDER BY position"
    ):
        if (
            position != expected
            or digest != link(previous, raw)
            or raw_digest != hashlib.sha256(raw).hexdigest()
        ):
            return expected
        previous, expected = digest, position + 1
    return None


def rows(connection: sqlite3.Connection, after: int = 0) -> Iterator[Row]:
    """Yield the journal's rows in order, one at a time."""
    for position, device, carrier, received_at, held, raw in connection.execute(
        "SELECT position, device, carrier, received_at, held, raw FROM journal "
        "WHERE position > ? ORDER BY position",
        (after,),
    ):
        yield Row(position, device, carrier, received_at, json.loads(held) if held else None, raw)


def exported(connection: sqlite3.Connection) -> Iterator[dict[str, object]]:
    """Yield each entry with its place, its digest in the chain and its text, oldest first.

    Whoever has the file can walk the chain without this program: ``digest`` is
    SHA-256 of the digest before it followed by the bytes of ``text``.
    """
    query = "SELECT position, digest, received_at, carrier, held, raw FROM journal ORDER BY position"
    for position, digest, received_at, carrier, held, raw in connection.execute(query):
        yield {
            "position": position,
            "digest": digest,
            "received_at": received_at,
            "carrier": carrier,
            "held": json.loads(held) if held else None,
            "text": raw.decode("utf-8", "surrogatepass"),
        }
