"""A copy of a store while it serves, verified by reopening it; and a store from such a copy.

SQLite's own backup copies a consistent state in one step, whatever is being
written. A copied database file is none: the write-ahead log is missing from it.
A restored store has a new epoch, so that devices notice and send again what
came after the copy.
"""

from __future__ import annotations

import sqlite3
import uuid
from contextlib import closing
from pathlib import Path

from app.journal import chain
from app.journal.chain import Head
from app.journal.store import Store, StoreError


def _verified(path: Path) -> Head:
    """Reopen a copy, check it through and return its journal's head.

    Raises
    ------
    StoreError
        If the copy is damaged.
    """
    try:
        with closing(sqlite3.connect(f"file:{path}?mode=ro", uri=True)) as copy:
            said = copy.execute("pragma integrity_check").fetchone()[0]
            bad = chain.first_bad(copy)
            head = chain.head(copy)
    except sqlite3.DatabaseError as error:
        raise StoreError(f"{path} is no whole copy of a store: {error}.") from error
    if said != "ok" or bad is not None:
        raise StoreError(
            f"{path} is no whole copy of a store: {said if bad is None else f'entry {bad} is bad'}."
        )
    return head


def backup(folder: Path, target: Path) -> Head:
    """Copy the store in a folder into a new file and verify the copy.

    Parameters
    ----------
    folder : Path
        The store's folder; a server may be serving it.
    target : Path
        A file that does not exist yet.

    Returns
    -------
    Head
        The newest entry in the copy.

    Raises
    ------
    StoreError
        If there is no store, the target exists, or the copy is damaged.
    """
    source = folder / "weirbook.db"
    if not source.exists():
        raise StoreError(f"There is no store in {folder}.")
    if target.exists():
        raise StoreError(f"{target} exists already; nothing was overwritten.")
    target.parent.mkdir(parents=True, exist_ok=True)
    with closing(sqlite3.connect(source, timeout=30)) as here, closing(sqlite3.connect(target)) as there:
        here.backup(there)
        there.execute("pragma journal_mode=delete")
    head = _verified(target)
    _seal(source, head.position)
    return head


def _seal(path: Path, position: int) -> None:
    """Note in a store that everything up to a position lies in a verified backup."""
    with closing(sqlite3.connect(path, timeout=30)) as store, store:
        store.execute(
            "INSERT INTO meta VALUES ('sealed', ?) ON CONFLICT (key) DO UPDATE SET value = excluded.value "
            "WHERE CAST(value AS INTEGER) < CAST(excluded.value AS INTEGER)",
            (str(position),),
        )


def sealed(connection: sqlite3.Connection) -> int:
    """Return the highest position that lies in a verified backup; 0 without one."""
    row = connection.execute("SELECT value FROM meta WHERE key = 'sealed'").fetchone()
    return int(row[0]) if row else 0


def restore(copy: Path, folder: Path) -> Head:
    """Make a store from a verified copy; it gets an epoch of its own.

    Parameters
    ----------
    copy : Path
        A file that :func:`backup` made.
    folder : Path
        Must hold no store yet.

    Returns
    -------
    Head
        The newest entry of the new store.

    Raises
    ------
    StoreError
        If the copy is damaged or the folder holds a store.
    """
    if not copy.exists():
        raise StoreError(f"There is no file {copy}.")
    head = _verified(copy)
    if (folder / "weirbook.db").exists():
        raise StoreError(f"{folder} holds a store already; nothing was overwritten.")
    folder.mkdir(parents=True, exist_ok=True)
    with closing(sqlite3.connect(copy)) as here, closing(sqlite3.connect(folder / "weirbook.db")) as there:
        here.backup(there)
        there.execute("UPDATE meta SET value = ? WHERE key = 'epoch'", (uuid.uuid4().hex,))
        there.commit()
    _seal(folder / "weirbook.db", head.position)
    Store(folder).close()
    return head
