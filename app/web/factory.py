"""Making the application."""

from __future__ import annotations

from pathlib import Path

from argon2 import PasswordHasher, profiles
from flask import Flask

from app import __version__
from app.journal.store import Store
from app.journal.units import STATIC
from app.records.ledger import Ledger
from app.records.rebuild import bring_up_to_date
from app.web import (
    attachments,
    certificates,
    papers,
    programme,
    security,
    sessions,
    shell,
    store_papers,
    sync,
)
from app.web.backups import Backups
from app.web.context import Context
from app.web.limits import Attempts

MAX_REQUEST_BYTES = 16 * 1024 * 1024


def create_app(
    folder: Path,
    base_url: str = "http://localhost:8700",
    hosts: tuple[str, ...] = (),
    fast_passwords: bool = False,
    backups: Backups | None = None,
) -> Flask:
    """Return the application for the store in a folder.

    Parameters
    ----------
    folder : Path
        Where the store lies.
    base_url : str
        The address that certificates name for verification.
    hosts : tuple of str
        Names besides this machine's own under which it may be asked.
    fast_passwords : bool
        Cheap password hashing, for tests only.
    backups : Backups, optional
        How and where the server makes copies by itself.
    """
    app = Flask("weirbook", static_folder=str(STATIC), static_url_path="/static")
    app.config.update(
        MAX_CONTENT_LENGTH=MAX_REQUEST_BYTES,
        TRUSTED_HOSTS=["localhost", "127.0.0.1", "[::1]", *hosts],
        SEND_FILE_MAX_AGE_DEFAULT=0,
        API_TITLE="Weirbook",
        API_VERSION=__version__,
        OPENAPI_VERSION="3.1.0",
        OPENAPI_URL_PREFIX="/api",
        OPENAPI_JSON_PATH="openapi.json",
    )
    app.json.sort_keys = False  # type: ignore[attr-defined]
    store = Store(folder)
    bring_up_to_date(store)
    passwords = PasswordHasher.from_parameters(profiles.CHEAPEST) if fast_passwords else PasswordHasher()
    app.extensions["weirbook"] = Context(
        store, Ledger(store), passwords, shell.build_of(), base_url, Attempts(), backups or Backups(folder)
    )
    security.install(app)
    api = security.OneBodyApi(app)
    for module in (sessions, programme, sync, attachments, certificates, papers, store_papers):
        api.register_blueprint(module.blueprint)
    app.register_blueprint(certificates.public)
    app.register_blueprint(shell.blueprint)
    return app
