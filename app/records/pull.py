"""What has changed: pages of records for a device."""

from __future__ import annotations

import json
import sqlite3
from dataclasses import dataclass
from typing import Any

_PAGE = "SELECT type, id, parent, at, position, body FROM record WHERE position > ? ORDER BY position LIMIT ?"
_REST = "SELECT type, id, parent, at, position, body FROM record WHERE position = ?"


@dataclass(frozen=True)
class Page:
    """Records in the order of their last change, the next cursor, and whether more waits."""

    records: list[dict[str, Any]]
    next: int
    more: bool


def page(connection: sqlite3.Connection, after: int, limit: int) -> Page:
    """Return the records changed after a position.

    All records of the last position are in the page, so that a cursor never
    points into the middle of one entry's effects.
    """
    rows = connection.execute(_PAGE, (after, limit)).fetchall()
    if len(rows) < limit:
        return Page([_record(row) for row in rows], rows[-1][4] if rows else after, False)
    last = rows[-1][4]
    rows = [row for row in rows if row[4] < last] + connection.execute(_REST, (last,)).fetchall()
    return Page([_record(row) for row in rows], last, True)


def _record(row: tuple[str, str, str, str, int, str | None]) -> dict[str, Any]:
    type_, id_, parent, at, position, body = row
    told = {"type": type_, "id": id_, "parent": parent, "at": at, "position": position}
    return told | {"body": json.loads(body) if body else None}
