"""The client: one shell for every place, its files, its service worker."""

from __future__ import annotations

import hashlib
import json
from pathlib import Path

from flask import Blueprint, Response, jsonify, send_file

from app import __version__
from app.journal.units import STATIC
from app.safety.pack import client_pack
from app.web.context import context
from app.web.security import NotFound

blueprint = Blueprint("shell", __name__)

_KINDS = {".js", ".css", ".html", ".json", ".svg", ".png", ".webmanifest"}
_OUTSIDE = {"sw.js", "index.html"}
_PICTURES = "pictures"


def shell_files(folder: Path = STATIC) -> list[str]:
    """Return the addresses of the client's files, in a fixed order."""
    found = (p.relative_to(folder) for p in sorted(folder.rglob("*")) if p.suffix in _KINDS)
    kept = (p.as_posix() for p in found if p.parts[0] != _PICTURES)
    return [f"/static/{name}" for name in kept if name not in _OUTSIDE]


def build_of(folder: Path = STATIC) -> str:
    """Return the digest that names this build of the client."""
    total = hashlib.sha256(__version__.encode())
    for path in sorted(p for p in folder.rglob("*") if p.suffix in _KINDS):
        total.update(path.relative_to(folder).as_posix().encode())
        total.update(path.read_bytes())
    return total.hexdigest()[:16]


@blueprint.get("/sw.js")
def service_worker() -> Response:
    """The service worker of this build: its name and the list of its files."""
    text = (STATIC / "sw.js").read_text(encoding="utf-8")
    text = text.replace('"__BUILD__"', json.dumps(context().build))
    text = text.replace("/*__SHELL__*/[]", json.dumps(["/", *shell_files()]))
    return Response(text, mimetype="text/javascript", headers={"Cache-Control": "no-cache"})


@blueprint.get("/manifest.webmanifest")
def manifest() -> Response:
    """What makes the client installable."""
    return send_file(STATIC / "manifest.webmanifest", mimetype="application/manifest+json")


@blueprint.get("/api/words")
def words() -> Response:
    """Gates, hazards and emergency lines: the same words on every side, without signing in."""
    return jsonify({"weirbook": __version__, **client_pack()})


@blueprint.get("/healthz")
def alive() -> Response:
    """The process runs."""
    return jsonify({"alive": True})


@blueprint.get("/readyz")
def ready() -> Response:
    """The store answers a write."""
    with context().store.write() as connection:
        connection.execute("INSERT OR REPLACE INTO meta VALUES ('probe', '1')")
    return jsonify({"ready": True})


@blueprint.get("/")
@blueprint.get("/<path:path>")
def shell(path: str = "") -> Response:
    """Every other address is a screen of the client."""
    if path.startswith(("api/", "static/")):
        raise NotFound("There is nothing under this address.")
    response = send_file(STATIC / "index.html", mimetype="text/html")
    response.headers["Cache-Control"] = "no-cache"
    return response
