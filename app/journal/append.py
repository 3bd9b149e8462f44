"""Writing one row of the journal."""

from __future__ import annotations

import json
import sqlite3
from dataclasses import dataclass, field

from app.errors import Fields
from app.journal.chain import Head, link
from app.journal.entry import Entry, digest


@dataclass(frozen=True)
class Hold:
    """Why an entry is kept but not in force.

    Attributes
    ----------
    code : str
        ``unreadable``, ``invalid``, ``not_permitted``, ``id_conflict``,
        ``device_fork``, ``unknown_kind``, ``newer_version``, ``from_file`` or a reason of the
        kind's handler.
    message : str
        What happened and what to do, in words.
    fields : dict of str to list of str
        The sentences about single fields.
    """

    code: str
    message: str
    fields: Fields = field(default_factory=dict)

    def body(self) -> dict[str, object]:
        """Return the reasons as the journal keeps them."""
        return {"code": self.code, "message": self.message, "fields": self.fields}


def append(
    connection: sqlite3.Connection,
    head: Head,
    entry: Entry,
    carrier: str,
    received_at: str,
    held: Hold | None,
) -> Head:
    """Append an entry and return the new head. The caller holds the write transaction."""
    position, linked = head.position + 1, link(head.digest, entry.raw)
    connection.execute(
        "INSERT INTO journal VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)",
        (
            position,
            entry.id,
            entry.raw_digest,
            entry.device,
            entry.incarnation,
            entry.n,
            entry.kind,
            entry.about,
            entry.by,
            carrier,
            received_at,
            json.dumps(held.body(), ensure_ascii=False) if held else None,
            entry.raw,
            linked,
        ),
    )
    return Head(position, linked)


def unreadable(raw: bytes, device: str, incarnation: str, carrier: str) -> Entry:
    """Return a stand-in for a text that is no entry, so that its bytes can be kept."""
    return Entry(
        id=f"unreadable:{digest(raw)[:32]}",
        device=device,
        incarnation=incarnation,
        n=0,
        prev=None,
        kind="unreadable",
        version=1,
        about="",
        at="",
        zone="",
        by=carrier,
        base=0,
        body={},
        raw=raw,
    )


def known(connection: sqlite3.Connection, entry: Entry) -> tuple[int, Hold | None] | None:
    """Return where these very bytes stand already and why they are held, if they do."""
    row = connection.execute(
        "SELECT position, held FROM journal WHERE id = ? AND raw_digest = ?", (entry.id, entry.raw_digest)
    ).fetchone()
    if row is None:
        return None
    return row[0], Hold(**json.loads(row[1])) if row[1] else None


def collision(connection: sqlite3.Connection, entry: Entry) -> Hold | None:
    """Tell when another entry has this one's id, or its place on its device."""
    if connection.execute("SELECT 1 FROM journal WHERE id = ?", (entry.id,)).fetchone():
        return Hold(
            "id_conflict",
            "Another entry with the same identity is in the journal. Both are kept; a coordinator decides.",
        )
    place = (entry.device, entry.incarnation, entry.n)
    if connection.execute(
        "SELECT 1 FROM journal WHERE device = ? AND incarnation = ? AND n = ?", place
    ).fetchone():
        return Hold(
            "device_fork",
            f"This device already sent a different entry number {entry.n}: it may be a copy of another "
            "device. Both entries are kept; a coordinator decides.",
        )
    return None


def contiguous(connection: sqlite3.Connection, device: str, incarnation: str) -> int:
    """Return the first number of a device that the server has not seen."""
    last, count = connection.execute(
        "SELECT coalesce(max(n), 0), count(DISTINCT n) FROM journal "
        "WHERE device = ? AND incarnation = ? AND n > 0",
        (device, incarnation),
    ).fetchone()
    if last == count:
        return int(last) + 1
    gap = connection.execute(
        "WITH seen AS (SELECT n FROM journal WHERE device = ? AND incarnation = ?) "
        "SELECT min(n) + 1 FROM (SELECT 0 AS n UNION SELECT n FROM seen) "
        "WHERE n + 1 NOT IN (SELECT n FROM seen)",
        (device, incarnation),
    ).fetchone()
    return int(gap[0])
