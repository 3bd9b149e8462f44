"""The database of one programme: one file, one writer at a time, committed means on the disk.

SQLite in WAL mode with ``synchronous=FULL``. A write takes the process's lock
first (SQLite's own waiting polls with sleeps and is unfair) and begins with
``BEGIN IMMEDIATE``, since a deferred transaction that reads and then writes
fails at once when another connection has written in between.
"""

from __future__ import annotations

import sqlite3
import threading
import uuid
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from sqlite_utils import Database

from app.errors import WeirbookError
from app.journal.migrations import migrations

_PRAGMAS = ("journal_mode=wal", "synchronous=full", "foreign_keys=on", "busy_timeout=10000")


class StoreError(WeirbookError):
    """The store cannot be used; what is in it is unharmed."""

    code = "store"


class DiskFull(StoreError):
    """There is no room on the server's disk; nothing was taken, devices keep what they have."""

    code = "full"
    status = 507


class Store:
    """One open database.

    Parameters
    ----------
    folder : Path
        Where ``weirbook.db`` lies; made when it is not there.
    """

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.path = folder / "weirbook.db"
        self._lock = threading.RLock()
        self._local = threading.local()
        self._opened: list[sqlite3.Connection] = []
        try:
            folder.mkdir(parents=True, exist_ok=True)
            self._writer = self._connect()
            self._migrate()
        except (OSError, sqlite3.DatabaseError) as error:
            self.close()
            raise StoreError(f"The store in {folder} cannot be opened: {error}.") from error
        self.epoch = self._epoch()

    def _connect(self) -> sqlite3.Connection:
        connection = sqlite3.connect(self.path, timeout=10, check_same_thread=False)
        self._opened.append(connection)
        for pragma in _PRAGMAS:
            connection.execute(f"pragma {pragma}")
        return connection

    def _migrate(self) -> None:
        db = Database(self._writer)
        known = {m.name for m in migrations._migrations}
        newer = [m.name for m in migrations.applied(db) if m.name not in known]
        if newer:
            raise StoreError(
                f"The store in {self.folder} was written by a newer Weirbook: install that version. "
                "Nothing was changed."
            )
        migrations.apply(db)

    def _epoch(self) -> str:
        with self.write() as connection:
            connection.execute("INSERT OR IGNORE INTO meta VALUES ('epoch', ?)", (uuid.uuid4().hex,))
            row = connection.execute("SELECT value FROM meta WHERE key = 'epoch'").fetchone()
        return str(row[0])

    @contextmanager
    def write(self) -> Iterator[sqlite3.Connection]:
        """Hold the one write lock in one transaction; commit at the end, roll back on an error.

        Raises
        ------
        DiskFull
            If the disk is full; SQLite has rolled back already.
        """
        with self._lock:
            connection = self._writer
            try:
                connection.execute("BEGIN IMMEDIATE")
                yield connection
                connection.commit()
            except BaseException as error:
                if connection.in_transaction:
                    connection.rollback()
                if isinstance(error, sqlite3.OperationalError) and "full" in str(error):
                    raise DiskFull(
                        "The server's disk is full. Nothing was taken; entries stay on the devices."
                    ) from error
                raise

    def read(self) -> sqlite3.Connection:
        """Return this thread's connection for reading."""
        connection: sqlite3.Connection | None = getattr(self._local, "connection", None)
        if connection is None:
            connection = self._connect()
            connection.execute("pragma query_only=on")
            self._local.connection = connection
        return connection

    def close(self) -> None:
        """Close every connection."""
        for connection in self._opened:
            connection.close()
        self._opened.clear()
