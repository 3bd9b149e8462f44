"""Who asks: passwords by argon2, sessions by a random token in a strict cookie.

The cookie holds a random token, the store only its digest, so that a copy of
the store opens no session. Roles are looked up at each request.
"""

from __future__ import annotations

import secrets
import sqlite3
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from functools import wraps
from typing import Any, ParamSpec, TypeVar

from argon2.exceptions import VerificationError
from flask import Response, after_this_request, g, request
from flask.views import MethodView
from flask_smorest import Blueprint
from marshmallow import fields

from app import __version__
from app.errors import InputError
from app.journal.backup import sealed
from app.journal.entry import digest
from app.journal.fields import Text
from app.journal.kinds import Body
from app.records.change import find, get
from app.records.rebuild import state_name
from app.web.context import PROTOCOL, context
from app.web.security import NotPermitted, SignInNeeded

COOKIE = "__Host-weirbook"
LIFETIME = timedelta(days=30)

blueprint = Blueprint("sessions", __name__, url_prefix="/api", description="Who is signed in")

P = ParamSpec("P")
R = TypeVar("R")


@dataclass(frozen=True)
class Person:
    """Somebody who is signed in, with the roles of this moment."""

    id: str
    name: str
    roles: frozenset[str]


class PersonSchema(Body):
    """A person as the client sees it."""

    id = fields.String()
    name = fields.String()
    roles = fields.List(fields.String())


class StateSchema(Body):
    """The server's state: what a client asks first."""

    weirbook = fields.String()
    protocol = fields.Integer()
    build = fields.String()
    epoch = fields.String()
    started = fields.Boolean()
    example = fields.Boolean()
    sealed = fields.Integer()
    backup = fields.Dict(allow_none=True)
    server_time = fields.String()
    person = fields.Nested(PersonSchema, allow_none=True)


class SignInSchema(Body):
    """A sign-in name and a password."""

    sign_in = Text(required=True, longest=80)
    password = fields.String(required=True)


def person() -> Person | None:
    """Return who is signed in, or None."""
    if "person" not in g:
        g.person = _look_up(request.cookies.get(COOKIE, ""))
    found: Person | None = g.person
    return found


def _look_up(token: str) -> Person | None:
    if not token:
        return None
    connection = context().store.read()
    row = connection.execute(
        "SELECT person, started_at FROM session WHERE token_digest = ?", (digest(token.encode()),)
    ).fetchone()
    if row is None or datetime.fromisoformat(row[1]) + LIFETIME < datetime.now(UTC):
        return None
    body = get(connection, "person", row[0])
    if body is None or not body["active"]:
        return None
    return Person(row[0], body["name"], frozenset(body["roles"]))


def need(*roles: str) -> Callable[[Callable[P, R]], Callable[P, R]]:
    """Let a view run only for somebody signed in who holds one of the roles (any, if none is named)."""

    def decorate(view: Callable[P, R]) -> Callable[P, R]:
        @wraps(view)
        def guarded(*args: P.args, **kwargs: P.kwargs) -> R:
            who = person()
            if who is None:
                raise SignInNeeded(
                    "Sign in first. What is recorded on this device is kept and goes out afterwards."
                )
            if roles and not who.roles & set(roles):
                raise NotPermitted(f"Only {' or '.join(roles)} may do this. Nothing was changed.")
            return view(*args, **kwargs)

        guarded.needs = roles or ("anybody signed in",)  # type: ignore[attr-defined]
        return guarded

    return decorate


def hash_password(password: str) -> str:
    """Return the argon2 hash of a password.

    Raises
    ------
    InputError
        If it has fewer than 12 characters.
    """
    if len(password) < 12:
        raise InputError("The password is too short.", {"person.password": ["At least 12 characters."]})
    return context().passwords.hash(password)


def open_session(connection: sqlite3.Connection, who: str) -> None:
    """Open a session within the caller's transaction and give its cookie to this answer."""
    token = secrets.token_urlsafe(32)
    now = datetime.now(UTC).isoformat()
    connection.execute("INSERT INTO session VALUES (?, ?, ?, ?)", (digest(token.encode()), who, now, now))

    @after_this_request
    def give(response: Response) -> Response:
        response.set_cookie(
            COOKIE,
            token,
            max_age=int(LIFETIME.total_seconds()),
            secure=True,
            httponly=True,
            samesite="Strict",
            path="/",
        )
        return response

    body = get(connection, "person", who)
    if body is not None:
        g.person = Person(who, body["name"], frozenset(body["roles"]))


def state() -> dict[str, Any]:
    """Return the server's state as a client reads it."""
    connection, who = context().store.read(), person()
    programmes = find(connection, "programme")
    return {
        "weirbook": __version__,
        "protocol": PROTOCOL,
        "build": context().build,
        "epoch": state_name(context().store),
        "started": bool(programmes),
        "example": bool(programmes and programmes[0][1]["example"]),
        "server_time": datetime.now(UTC).isoformat(timespec="milliseconds"),
        "sealed": sealed(connection),
        "backup": context().backups.told(),
        "person": who and {"id": who.id, "name": who.name, "roles": sorted(who.roles)},
    }


@blueprint.route("/state")
@blueprint.response(200, StateSchema)
def get_state() -> dict[str, Any]:
    """What a client asks first."""
    return state()


def _verify(sign_in: str, password: str) -> str:
    account, source = sign_in.strip().casefold(), request.remote_addr or ""
    context().attempts.check(account, source)
    row = (
        context()
        .store.read()
        .execute("SELECT person, password FROM account WHERE sign_in = ?", (account,))
        .fetchone()
    )
    hashed = (
        row[1] if row else context().passwords.hash("nobody")
    )  # an unknown name takes as long as a known one
    try:
        context().passwords.verify(hashed, password)
    except VerificationError:
        row = None
    if row is None:
        context().attempts.failed(account, source)
        raise InputError("Sign-in name and password do not agree.", {"password": ["Try again."]})
    context().attempts.passed(account)
    return str(row[0])


@blueprint.route("/session")
class Session(MethodView):
    """Signing in and out."""

    @blueprint.arguments(SignInSchema)
    @blueprint.response(200, StateSchema)
    def post(self, given: dict[str, str]) -> dict[str, Any]:
        """Sign in."""
        who = _verify(given["sign_in"], given["password"])
        with context().store.write() as connection:
            open_session(connection, who)
        return state()

    @blueprint.response(200, StateSchema)
    def delete(self) -> dict[str, Any]:
        """Sign out; entries on the device stay there."""
        with context().store.write() as connection:
            connection.execute(
                "DELETE FROM session WHERE token_digest = ?",
                (digest(request.cookies.get(COOKIE, "").encode()),),
            )
        g.person = None
        return state()
