"""What a handler sees and may do: read records, put records, refuse."""

from __future__ import annotations

import json
import sqlite3
from dataclasses import dataclass
from typing import Any, Protocol

from app.errors import Fields
from app.journal.append import Hold
from app.journal.entry import Entry

Body = dict[str, Any]


def count(connection: sqlite3.Connection, type_: str) -> int:
    """Return how many records of a type there are."""
    row = connection.execute("SELECT count(*) FROM record WHERE type = ?", (type_,)).fetchone()
    return int(row[0])


class Stating(Protocol):
    """What a reaction may do: read records, and state entries as the server."""

    def get(self, type_: str, id_: str) -> Body | None:
        """Return a record's body, or None."""

    def find(self, type_: str, parent: str | None = None) -> list[tuple[str, Body]]:
        """Return the records of a type (of one parent)."""

    def latest(self, type_: str, count: int) -> list[Body]:
        """Return the newest records of a type."""

    def count(self, type_: str) -> int:
        """Return how many records of a type there are."""

    def state(self, kind: str, about: str, body: Body) -> Entry:
        """State one entry as the server."""


class Refused(Exception):
    """An entry that cannot come into force; it is kept and shown as held."""

    def __init__(self, code: str, message: str, fields: Fields | None = None) -> None:
        super().__init__(message)
        self.hold = Hold(code, message, fields or {})


@dataclass(frozen=True)
class Record:
    """A record with its identity and the position that changed it last."""

    type: str
    id: str
    parent: str
    at: str
    position: int
    body: Body | None


def get(connection: sqlite3.Connection, type_: str, id_: str) -> Body | None:
    """Return a record's body, or None where there is none."""
    row = connection.execute("SELECT body FROM record WHERE type = ? AND id = ?", (type_, id_)).fetchone()
    return json.loads(row[0]) if row and row[0] else None


def find(connection: sqlite3.Connection, type_: str, parent: str | None = None) -> list[tuple[str, Body]]:
    """Return the records of a type (of one parent), in the order of their times."""
    where, given = ("AND parent = ?", (type_, parent)) if parent is not None else ("", (type_,))
    rows = connection.execute(
        f"SELECT id, body FROM record WHERE type = ? {where} AND body IS NOT NULL ORDER BY at, id", given
    )
    return [(id_, json.loads(body)) for id_, body in rows.fetchall()]


def latest(connection: sqlite3.Connection, type_: str, count: int) -> list[Body]:
    """Return the newest records of a type by their times, newest first."""
    rows = connection.execute(
        "SELECT body FROM record WHERE type = ? AND body IS NOT NULL ORDER BY at DESC, id LIMIT ?",
        (type_, count),
    )
    return [json.loads(row[0]) for row in rows.fetchall()]


class Change:
    """One entry's effect on the records."""

    def __init__(
        self,
        connection: sqlite3.Connection,
        entry: Entry,
        body: Body,
        position: int,
        received_at: str,
        replayed: bool = False,
    ) -> None:
        self.connection = connection
        self.entry = entry
        self.body = body
        self.position = position
        self.received_at = received_at
        self.replayed = replayed

    def get(self, type_: str, id_: str) -> Body | None:
        """Return a record's body, or None."""
        return get(self.connection, type_, id_)

    def need(self, type_: str, id_: str) -> Body:
        """Return a record's body, or refuse the entry because the thing is not known."""
        body = self.get(type_, id_)
        if body is None:
            raise Refused(
                f"unknown_{type_}",
                f"This {type_} is not known to the server yet. The entry is kept; when the {type_} has "
                "arrived, a coordinator can bring it into force.",
            )
        return body

    def find(self, type_: str, parent: str | None = None) -> list[tuple[str, Body]]:
        """Return the records of a type (of one parent)."""
        return find(self.connection, type_, parent)

    def put(self, type_: str, id_: str, body: Body | None, parent: str = "", at: str = "") -> None:
        """Put a record as this entry leaves it; a body of None removes it."""
        text = None if body is None else json.dumps(body, ensure_ascii=False, separators=(",", ":"))
        self.connection.execute(
            "INSERT INTO record VALUES (?, ?, ?, ?, ?, ?) ON CONFLICT (type, id) DO UPDATE SET "
            "parent = excluded.parent, at = excluded.at, position = excluded.position, body = excluded.body",
            (type_, id_, parent, at, self.position, text),
        )

    def update(self, type_: str, id_: str, body: Body) -> None:
        """Put a record's new body and leave its parent and time as they are."""
        text = json.dumps(body, ensure_ascii=False, separators=(",", ":"))
        self.connection.execute(
            "UPDATE record SET position = ?, body = ? WHERE type = ? AND id = ?",
            (self.position, text, type_, id_),
        )

    def name_of(self, person: str) -> str:
        """Return a person's name as it is now, or the id where none is known."""
        body = self.get("person", person)
        return str(body["name"]) if body else person
