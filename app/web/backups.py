"""Backups that the server makes by itself while it serves; each is verified by reopening it."""

from __future__ import annotations

import logging
import sqlite3
import threading
from contextlib import suppress
from dataclasses import dataclass, field
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from app.errors import WeirbookError
from app.journal.backup import backup

KEPT = 30
_PATTERN = "weirbook-*.db"

log = logging.getLogger("weirbook")


def _discard(target: Path) -> None:
    """Remove what a failed backup left: a file that was never verified must not pass for a copy."""
    with suppress(OSError):
        target.unlink(missing_ok=True)


@dataclass
class Backups:
    """Makes backups at an interval and remembers how the last one went.

    Parameters
    ----------
    store : Path
        The store's folder.
    folder : Path or None
        Where copies go; None makes none.
    hours : float
        Time between two.
    """

    store: Path
    folder: Path | None = None
    hours: float = 24.0
    last: dict[str, Any] | None = None
    _stop: threading.Event = field(default_factory=threading.Event)

    def told(self) -> dict[str, Any] | None:
        """Return how the last one went, or None where none was asked for."""
        if self.folder is None:
            return None
        return {"hours": self.hours} | (self.last or {"at": None, "position": None, "problem": ""})

    def make(self) -> dict[str, Any]:
        """Make one backup now; a failure is told, never raised."""
        now = datetime.now(UTC)
        said: dict[str, Any] = {"at": now.isoformat(timespec="seconds"), "position": None, "problem": ""}
        assert self.folder is not None
        target = self.folder / f"weirbook-{now:%Y%m%d-%H%M%S-%f}.db"
        try:
            said["position"] = backup(self.store, target).position
            self._tidy()
        except (WeirbookError, OSError, sqlite3.Error) as error:
            if said["position"] is None:
                _discard(target)
            said["problem"] = f"The backup failed: {error}"
            log.error(said["problem"])
        self.last = said
        return said

    def _tidy(self) -> None:
        """Keep the newest copies; only files that were made here are ever removed."""
        assert self.folder is not None
        for old in sorted(self.folder.glob(_PATTERN))[:-KEPT]:
            old.unlink()

    def start(self) -> None:
        """Make one now and then one at each interval, in a thread of its own."""
        if self.folder is not None:
            threading.Thread(target=self._run, name="backups", daemon=True).start()

    def stop(self) -> None:
        """End the thread."""
        self._stop.set()

    def _run(self) -> None:
        while not self._stop.is_set():
            self.make()
            self._stop.wait(self.hours * 3600)
