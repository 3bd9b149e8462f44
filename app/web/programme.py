"""Starting a programme, looking around in the example, adding people."""

from __future__ import annotations

import sqlite3
import uuid
from dataclasses import asdict
from ipaddress import ip_address
from typing import Any

from flask import request
from flask_smorest import Blueprint
from marshmallow import fields, validate

from app.errors import InputError
from app.journal.devices import known_devices
from app.journal.fields import Text
from app.journal.kinds import ADMINISTRATOR, COORDINATOR, ROLES, Body
from app.journal.kinds.programme import known_zone
from app.journal.kinds.settings import DEFAULTS
from app.records.change import find
from app.records.ledger import Writing
from app.scenarios import load
from app.web.context import context
from app.web.security import Conflict, NotPermitted
from app.web.sessions import StateSchema, hash_password, need, open_session, person, state

blueprint = Blueprint("programme", __name__, url_prefix="/api", description="The programme and its people")

VISITOR = "visitor"


class NewProgramme(Body):
    """What a new programme needs to begin."""

    name = Text(required=True)
    laboratory = Text(required=True)
    zone = fields.String(required=True, validate=known_zone)


class Account(Body):
    """A person with a way to sign in."""

    name = Text(required=True)
    sign_in = Text(required=True, longest=80)
    password = fields.String(required=True)


class StartSchema(Body):
    """The first page's form."""

    programme = fields.Nested(NewProgramme, required=True)
    person = fields.Nested(Account, required=True)


class NewPersonSchema(Account):
    """Somebody new, and the roles they hold."""

    roles = fields.List(
        fields.String(validate=validate.OneOf(ROLES)), required=True, validate=validate.Length(min=1)
    )


class AddedSchema(Body):
    """Who was added."""

    person = fields.String()


def _add_account(connection: sqlite3.Connection, id_: str, account: dict[str, Any], password: str) -> None:
    try:
        connection.execute(
            "INSERT INTO account VALUES (?, ?, ?)", (id_, account["sign_in"].strip().casefold(), password)
        )
    except sqlite3.IntegrityError:
        raise InputError("This sign-in name is taken.", {"sign_in": ["Choose another."]}) from None


def _begin(writing: Writing, programme: dict[str, Any], who: str, name: str) -> None:
    if writing.find("programme"):
        raise Conflict("A programme runs on this server already. Nothing was changed.")
    body = {**programme, "units": "metric", "example": False, "settings": DEFAULTS}
    writing.state("programme.started", str(uuid.uuid4()), body, who)
    writing.state("person.added", who, {"name": name, "roles": list(ROLES)}, who)


@blueprint.route("/start", methods=["POST"])
@blueprint.arguments(StartSchema)
@blueprint.response(200, StateSchema)
def start(given: dict[str, Any]) -> dict[str, Any]:
    """Start one's own programme; who starts it is its first administrator."""
    who, account = str(uuid.uuid4()), given["person"]
    password = hash_password(account["password"])
    with context().ledger.transaction() as writing:
        _begin(writing, given["programme"], who, account["name"])
        _add_account(writing.connection, who, account, password)
        open_session(writing.connection, who)
    return state()


@blueprint.route("/example", methods=["POST"])
@blueprint.response(200, StateSchema)
def example() -> dict[str, Any]:
    """Look around in the invented programme, from this machine only.

    The visitor has no password: a session is given to this browser, and only
    while the store holds the example and nothing of anybody's own.
    """
    if not ip_address(request.remote_addr or "0.0.0.0").is_loopback:
        raise NotPermitted("The example opens only on the machine that serves it.")
    programmes = find(context().store.read(), "programme")
    if programmes and not programmes[0][1]["example"]:
        raise Conflict("A programme of your own runs on this server; the example needs an empty store.")
    if not programmes:
        load(context().store)
    with context().ledger.transaction() as writing:
        if writing.get("person", VISITOR) is None:
            writing.state("person.added", VISITOR, {"name": "Visitor", "roles": list(ROLES)})
        open_session(writing.connection, VISITOR)
    return state()


@blueprint.route("/people", methods=["POST"])
@need("administrator")
@blueprint.arguments(NewPersonSchema)
@blueprint.response(201, AddedSchema)
def add_person(given: dict[str, Any]) -> dict[str, str]:
    """Add a person with a way to sign in."""
    id_, who = str(uuid.uuid4()), person()
    password = hash_password(given["password"])
    with context().ledger.transaction() as writing:
        _add_account(writing.connection, id_, given, password)
        body = {"name": given["name"], "roles": given["roles"]}
        writing.state("person.added", id_, body, who.id if who else VISITOR)
    return {"person": id_}


class DeviceSchema(Body):
    """One store of one device, as the journal knows it."""

    device = fields.String()
    incarnation = fields.String()
    last = fields.Integer()
    entries = fields.Integer()
    missing = fields.Integer()
    doubled = fields.Integer()
    breaks = fields.Integer()
    seen = fields.String()
    carrier = fields.String()


class DevicesSchema(Body):
    """Every device that ever sent an entry."""

    devices = fields.List(fields.Nested(DeviceSchema))


@blueprint.route("/devices")
@need(COORDINATOR, ADMINISTRATOR)
@blueprint.response(200, DevicesSchema)
def devices() -> dict[str, Any]:
    """How far each device got, what of it is missing, and where its own chain breaks."""
    return {"devices": [asdict(one) for one in known_devices(context().store.read())]}
