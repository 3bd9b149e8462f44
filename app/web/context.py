"""What a request can reach: the application's store, ledger and settings."""

from __future__ import annotations

from dataclasses import dataclass

from argon2 import PasswordHasher
from flask import current_app

from app.journal.store import Store
from app.records.ledger import Ledger
from app.web.backups import Backups
from app.web.limits import Attempts

PROTOCOL = 1


@dataclass(frozen=True)
class Context:
    """Made once by the factory, kept in ``app.extensions["weirbook"]``."""

    store: Store
    ledger: Ledger
    passwords: PasswordHasher
    build: str
    base_url: str
    attempts: Attempts
    backups: Backups


def context() -> Context:
    """Return the application's context."""
    found: Context = current_app.extensions["weirbook"]
    return found
