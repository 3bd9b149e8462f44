"""The one write path: entries in, records out, in one transaction.

Everything that changes passes here: what devices push and what the server
states itself. Each entry is parsed, checked, brought into force by its kind's
handler within a savepoint, and appended to the journal; what cannot come into
force is appended as held. At the end of the transaction the reactions run:
the server answers entries with entries of its own.
"""

from __future__ import annotations

import json
import sqlite3
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import UTC, datetime
from typing import Any

from app.errors import InputError
from app.journal import append, chain, kinds
from app.journal.append import Hold
from app.journal.entry import Entry, parse, reopen
from app.journal.identity import uuid7
from app.journal.store import Store
from app.records import handlers, reactions
from app.records.change import Body, Change, Refused, count, find, get, latest

SYSTEM = "system"
SERVER_DEVICE = "server"


@dataclass(frozen=True)
class Answer:
    """What became of one pushed entry: stored, duplicate or held."""

    id: str
    result: str
    position: int
    hold: Hold | None = None

    def body(self) -> dict[str, Any]:
        """Return the answer as the device reads it."""
        told: dict[str, Any] = {"id": self.id, "result": self.result, "position": self.position}
        return told | (self.hold.body() if self.hold else {})


class Ledger:
    """The write path of one store.

    Parameters
    ----------
    store : Store
        The open database.
    now : callable
        Returns the present as an aware datetime; tests give their own.
    """

    def __init__(self, store: Store, now: Callable[[], datetime] = lambda: datetime.now(UTC)) -> None:
        self.store = store
        self.now = now

    @contextmanager
    def transaction(self) -> Iterator[Writing]:
        """Hold the write lock; reactions run before the commit."""
        with self.store.write() as connection:
            writing = Writing(connection, self.store.epoch, self.now)
            yield writing
            writing.react()

    def push(
        self,
        texts: Sequence[str],
        carrier: str,
        device: str,
        incarnation: str,
        hold: Hold | None = None,
    ) -> list[Answer]:
        """Take the entries of a device, in their order; each is answered. With ``hold`` none is in force."""
        with self.transaction() as writing:
            return [
                writing.take(text.encode("utf-8", "surrogatepass"), carrier, device, incarnation, hold)
                for text in texts
            ]

    def state(self, kind: str, about: str, body: Body, by: str = SYSTEM) -> Entry:
        """State one entry as the server."""
        with self.transaction() as writing:
            return writing.state(kind, about, body, by)


@dataclass
class Writing:
    """One open write transaction."""

    connection: sqlite3.Connection
    epoch: str
    now: Callable[[], datetime]
    head: chain.Head = field(init=False)
    _last: tuple[int, str | None] = field(init=False)
    _due: dict[reactions.Due, None] = field(init=False, default_factory=dict)

    def __post_init__(self) -> None:
        """Find the journal's head and the server's own last entry."""
        self.head = chain.head(self.connection)
        row = self.connection.execute(
            "SELECT n, raw_digest FROM journal WHERE device = ? AND incarnation = ? ORDER BY n DESC LIMIT 1",
            (SERVER_DEVICE, self.epoch),
        ).fetchone()
        self._last = (row[0], row[1]) if row else (0, None)

    def get(self, type_: str, id_: str) -> Body | None:
        """Return a record's body, or None."""
        return get(self.connection, type_, id_)

    def find(self, type_: str, parent: str | None = None) -> list[tuple[str, Body]]:
        """Return the records of a type (of one parent)."""
        return find(self.connection, type_, parent)

    def latest(self, type_: str, count: int) -> list[Body]:
        """Return the newest records of a type."""
        return latest(self.connection, type_, count)

    def count(self, type_: str) -> int:
        """Return how many records of a type there are."""
        return count(self.connection, type_)

    def received_at(self) -> str:
        """Return the present in UTC, as entries carry it."""
        return self.now().astimezone(UTC).isoformat(timespec="milliseconds")

    def take(
        self, raw: bytes, carrier: str, device: str, incarnation: str, hold: Hold | None = None
    ) -> Answer:
        """Take one entry of a device: stored, duplicate or held, never dropped."""
        try:
            entry, unread = parse(raw), None
        except InputError as error:
            entry = append.unreadable(raw, device, incarnation, carrier)
            unread = Hold("unreadable", error.message, error.fields)
        before = append.known(self.connection, entry)
        if before:
            position, held = before
            return Answer(entry.id, "duplicate", position, held)
        objection = unread or append.collision(self.connection, entry) or self._objection(entry)
        hold = objection or hold
        hold = self._enter(entry, carrier, hold)
        position = self.head.position
        self.react(reactions.AT_ONCE)
        return Answer(entry.id, "held" if hold else "stored", position, hold)

    def state(self, kind: str, about: str, body: Body, by: str = SYSTEM) -> Entry:
        """State one entry as the server; what the server states must be valid.

        Raises
        ------
        InputError
            If the entry cannot come into force; nothing of it is kept.
        """
        entry = self._own(kind, about, body, by)
        kinds.check(kind, body)
        hold = self._apply(entry, self.received_at())
        if hold:
            raise InputError(hold.message, hold.fields)
        self._append(entry, by, self.received_at(), None)
        self._last = (entry.n, entry.raw_digest)
        return entry

    def react(self, kinds_of_sum: Sequence[int] = reactions.ALL) -> None:
        """Answer what was stated, until nothing of these kinds is due."""
        while due := min((one for one in self._due if one[0] in kinds_of_sum), default=None):
            del self._due[due]
            self._react_to(due)

    def _react_to(self, due: reactions.Due) -> None:
        """Run one reaction; one that fails is stated, and never stops the entries that caused it."""
        head, last = self.head, self._last
        self.connection.execute("SAVEPOINT reaction")
        try:
            reactions.run(due, self)
        except sqlite3.Error:
            raise
        except Exception as error:
            self.connection.execute("ROLLBACK TO reaction")
            self.head, self._last = head, last
            self.state("sum.failed", due[1], reactions.failure(due, error))
        finally:
            if self.connection.in_transaction:
                self.connection.execute("RELEASE reaction")

    def _own(self, kind: str, about: str, body: Body, by: str) -> Entry:
        now, (n, previous) = self.now(), self._last
        given = {
            "id": uuid7(int(now.timestamp() * 1000)),
            "device": SERVER_DEVICE,
            "incarnation": self.epoch,
            "n": n + 1,
            "prev": previous,
            "kind": kind,
            "version": kinds.table()[kind].version,
            "about": about,
            "at": now.astimezone(UTC).isoformat(timespec="milliseconds"),
            "zone": "UTC",
            "skew_ms": 0,
            "by": by,
            "base": self.head.position,
            "body": body,
            "blobs": [],
        }
        return parse(json.dumps(given, ensure_ascii=False, allow_nan=False, separators=(",", ":")).encode())

    def _objection(self, entry: Entry) -> Hold | None:
        kind = kinds.table().get(entry.kind)
        if kind is None:
            return Hold(
                "unknown_kind", f"This server does not know entries of kind {entry.kind}; update the server."
            )
        if entry.version > kind.version:
            return Hold("newer_version", "This entry was made by a newer client; update the server.")
        author = self.get("person", entry.by)
        if author is None:
            return Hold("unknown_person", "The person who states this is not known to the programme.")
        if not author["active"] or not kind.roles & set(author["roles"]):
            needed = " or ".join(sorted(kind.roles - {kinds.SERVER})) or "the server"
            return Hold("not_permitted", f"Only {needed} may state this; a coordinator decides.")
        try:
            kinds.check(entry.kind, kinds.newest(entry.kind, entry.version, entry.body))
        except InputError as error:
            return Hold("invalid", error.message, error.fields)
        return None

    def _enter(self, entry: Entry, carrier: str, hold: Hold | None) -> Hold | None:
        received_at = self.received_at()
        hold = hold or self._apply(entry, received_at)
        if hold:
            put_held(self.connection, entry, self.head.position + 1, received_at, carrier, hold.body())
        self._append(entry, carrier, received_at, hold)
        return hold

    def _append(self, entry: Entry, carrier: str, received_at: str, hold: Hold | None) -> None:
        self.head = append.append(self.connection, self.head, entry, carrier, received_at, hold)

    def _apply(self, entry: Entry, received_at: str) -> Hold | None:
        self.connection.execute("SAVEPOINT entry")
        try:
            change = apply(self.connection, entry, self.head.position + 1, received_at)
        except Refused as refusal:
            self.connection.execute("ROLLBACK TO entry")
            return refusal.hold
        finally:
            self.connection.execute("RELEASE entry")
        self._due |= dict.fromkeys(reactions.due(change))
        return None


def apply(
    connection: sqlite3.Connection, entry: Entry, position: int, received_at: str, replayed: bool = False
) -> Change:
    """Bring one entry into force; the same for new entries and at a rebuild.

    What was in force stays in force: a replayed entry meets no rule that was
    made after it came.

    Raises
    ------
    Refused
        If it cannot come into force.
    """
    body = kinds.newest(entry.kind, entry.version, entry.body)
    change = Change(connection, entry, body, position, received_at, replayed)
    if entry.kind == "entry.settled":
        return _settle(change)
    handlers.table()[entry.kind](change)
    return change


def _settle(change: Change) -> Change:
    held = change.need("held", change.entry.about)
    if held["state"] != "held":
        raise Refused("already_settled", "This entry was settled before.")
    decision = change.body["decision"]
    state = "admitted" if decision == "admit" else "set aside"
    settled = {"by": change.name_of(change.entry.by), "at": change.entry.at, "reason": change.body["reason"]}
    change.put(
        "held", change.entry.about, held | {"state": state, "settled": settled}, at=held["received_at"]
    )
    if decision != "admit":
        return change
    if held["code"] in ("unreadable", "unknown_kind", "newer_version", "not_permitted"):
        raise Refused("cannot_admit", "This entry cannot come into force as it stands; set it aside.")
    entry = reopen(held["text"].encode("utf-8"))
    try:
        kinds.check(entry.kind, kinds.newest(entry.kind, entry.version, entry.body))
    except InputError as error:
        raise Refused("cannot_admit", error.message, error.fields) from None
    return apply(change.connection, entry, change.position, change.received_at, change.replayed)


def put_held(
    connection: sqlite3.Connection,
    entry: Entry,
    position: int,
    received_at: str,
    carrier: str,
    reasons: dict[str, object],
) -> None:
    """Put the record that shows a held entry to its author and to the coordinator."""
    body: dict[str, Any] = {
        **reasons,
        "kind": entry.kind,
        "about": entry.about,
        "by": entry.by,
        "carrier": carrier,
        "device": entry.device,
        "received_at": received_at,
        "state": "held",
        "settled": None,
        "text": entry.raw.decode("utf-8", "replace"),
    }
    known = get(connection, "held", entry.id)
    id_ = entry.id if known is None else f"{entry.id}:{position}"
    Change(connection, entry, {}, position, received_at).put("held", id_, body, at=received_at)
