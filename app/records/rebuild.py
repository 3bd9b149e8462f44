"""Deriving the records again from the journal, by the same handlers, in one transaction."""

from __future__ import annotations

import hashlib
import sqlite3
from dataclasses import dataclass

from app.journal import chain
from app.journal.append import unreadable
from app.journal.entry import reopen
from app.journal.store import Store, StoreError
from app.records import SHAPE
from app.records.change import Refused
from app.records.ledger import apply, put_held


@dataclass(frozen=True)
class Rebuilt:
    """How many entries were replayed, and the records' digest before and after."""

    entries: int
    before: str
    after: str


def digest_of_records(connection: sqlite3.Connection) -> str:
    """Return one digest over all records in a fixed order."""
    total = hashlib.sha256()
    for row in connection.execute(
        "SELECT type, id, parent, at, position, body FROM record ORDER BY type, id"
    ):
        total.update(repr(row).encode("utf-8"))
    return total.hexdigest()


def replay(connection: sqlite3.Connection, row: chain.Row) -> None:
    """Bring one row of the journal to bear on the records as it did when it came."""
    if row.held is None:
        apply(connection, reopen(row.raw), row.position, row.received_at, replayed=True)
        return
    readable = row.held["code"] != "unreadable"
    entry = reopen(row.raw) if readable else unreadable(row.raw, row.device, "", row.carrier)
    put_held(connection, entry, row.position, row.received_at, row.carrier, row.held)


def rebuild(store: Store) -> Rebuilt:
    """Derive every record again.

    Raises
    ------
    StoreError
        If an entry that was in force no longer applies; the records stay as
        they were.
    """
    with store.write() as connection:
        before = digest_of_records(connection)
        connection.execute("DELETE FROM record")
        count = 0
        for row in chain.rows(connection):
            try:
                replay(connection, row)
            except Refused as refusal:
                raise StoreError(
                    f"Entry {row.position} no longer comes into force: {refusal}. The records were left as "
                    "they were."
                ) from refusal
            count += 1
        after = digest_of_records(connection)
        connection.execute("INSERT OR REPLACE INTO meta VALUES ('shape', ?)", (str(SHAPE),))
    return Rebuilt(count, before, after)


def bring_up_to_date(store: Store) -> bool:
    """Derive the records again if another version of the handlers put them; tell whether it was needed."""
    row = store.read().execute("SELECT value FROM meta WHERE key = 'shape'").fetchone()
    if row and row[0] == str(SHAPE):
        return False
    rebuild(store)
    return True


def state_name(store: Store) -> str:
    """Return the name of the records' state: devices that knew another one read all again."""
    return f"{store.epoch}.{SHAPE}"
