"""Push and pull: entries in, records out.

A push never fails for one bad entry: each is answered on its own. The answer
echoes the digest of what was received, so that a captive portal's page is
never taken for an acknowledgement.
"""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any

from flask_smorest import Blueprint
from marshmallow import fields, validate

from app import __version__
from app.errors import WeirbookError
from app.journal.append import Hold, contiguous
from app.journal.backup import sealed
from app.journal.entry import digest
from app.journal.fields import Id
from app.journal.kinds import Body
from app.records.pull import page
from app.records.rebuild import state_name
from app.web.context import PROTOCOL, context
from app.web.sessions import need, person

blueprint = Blueprint("sync", __name__, url_prefix="/api", description="Entries in, records out")


class ClientTooOld(WeirbookError):
    """The page on the device is older than this server understands."""

    code = "client_too_old"
    status = 426


class ServerTooOld(WeirbookError):
    """The device is newer than this server."""

    code = "server_too_old"
    status = 409


class Reset(WeirbookError):
    """The device's copy belongs to another state of the server."""

    code = "reset"
    status = 409


class PushSchema(Body):
    """A batch of entries of one device, each as the text that it made."""

    protocol = fields.Integer(required=True, strict=True)
    build = fields.String(required=True)
    epoch = fields.String(required=True)
    device = Id(required=True)
    incarnation = Id(required=True)
    entries = fields.List(fields.String(), required=True, validate=validate.Length(max=200))


class TabletFileSchema(Body):
    """The entries of a tablet that cannot send them itself, each as the text that the tablet made."""

    entries = fields.List(fields.String(), required=True, validate=validate.Length(min=1, max=5000))


class AnswerSchema(Body):
    """What became of one entry."""

    id = fields.String()
    result = fields.String(validate=validate.OneOf(["stored", "duplicate", "held"]))
    position = fields.Integer()
    code = fields.String()
    message = fields.String()
    fields_ = fields.Dict(data_key="fields", attribute="fields")


class PushedSchema(Body):
    """What became of a batch."""

    weirbook = fields.String()
    epoch = fields.String()
    server_time = fields.String()
    sealed = fields.Integer()
    digest = fields.String()
    answers = fields.List(fields.Nested(AnswerSchema))
    expect_n = fields.Integer()


class TakenInSchema(Body):
    """What became of a tablet's file."""

    weirbook = fields.String()
    answers = fields.List(fields.Nested(AnswerSchema))


class PullSchema(Body):
    """Which changes a device asks for."""

    epoch = fields.String(required=True)
    after = fields.Integer(required=True, validate=validate.Range(min=0, max=2**53))
    limit = fields.Integer(load_default=500, validate=validate.Range(min=1, max=2000))


class RecordSchema(Body):
    """One record; a body of null means that it was removed."""

    type = fields.String()
    id = fields.String()
    parent = fields.String()
    at = fields.String()
    position = fields.Integer()
    body = fields.Raw(allow_none=True)


class PulledSchema(Body):
    """A page of records."""

    weirbook = fields.String()
    epoch = fields.String()
    server_time = fields.String()
    sealed = fields.Integer()
    records = fields.List(fields.Nested(RecordSchema))
    next = fields.Integer()
    more = fields.Boolean()


def _common() -> dict[str, Any]:
    return {
        "weirbook": __version__,
        "epoch": state_name(context().store),
        "server_time": datetime.now(UTC).isoformat(timespec="milliseconds"),
        "sealed": sealed(context().store.read()),
    }


def _check_protocol(protocol: int) -> None:
    if protocol < PROTOCOL:
        raise ClientTooOld("This page is older than the server: reload it. Everything recorded here is kept.")
    if protocol > PROTOCOL:
        raise ServerTooOld("The server is older than this page: update the server. Everything here is kept.")


@blueprint.route("/push", methods=["POST"])
@need()
@blueprint.arguments(PushSchema)
@blueprint.response(200, PushedSchema)
def push(given: dict[str, Any]) -> dict[str, Any]:
    """Take a device's entries; answer each."""
    _check_protocol(given["protocol"])
    who = person()
    texts, device, incarnation = given["entries"], given["device"], given["incarnation"]
    answers = context().ledger.push(texts, who.id if who else "", device, incarnation)
    received = "".join(texts).encode("utf-8", "surrogatepass")
    return _common() | {
        "digest": digest(received),
        "answers": [answer.body() for answer in answers],
        "expect_n": contiguous(context().store.read(), device, incarnation),
    }


@blueprint.route("/pull")
@need()
@blueprint.arguments(PullSchema, location="query")
@blueprint.response(200, PulledSchema)
def pull(given: dict[str, Any]) -> dict[str, Any]:
    """Give the records changed after a position."""
    if given["epoch"] != state_name(context().store):
        raise Reset(
            "The server's records begin anew: this device reads them all again. Nothing unsent is lost."
        )
    found = page(context().store.read(), given["after"], given["limit"])
    return _common() | {"records": found.records, "next": found.next, "more": found.more}


FILE_HOLD = Hold(
    "from_file",
    "It came in a file saved from a tablet, not from the tablet; a coordinator decides entry by entry.",
)


@blueprint.route("/tablet-file", methods=["POST"])
@need("administrator")
@blueprint.arguments(TabletFileSchema)
@blueprint.response(200, TakenInSchema)
def tablet_file(given: dict[str, Any]) -> dict[str, Any]:
    """Take in what a tablet saved as a file: author and bytes stay, who brings it carries, all is held."""
    who = person()
    answers = context().ledger.push(
        given["entries"], who.id if who else "", "tablet-file", "tablet-file", FILE_HOLD
    )
    return {"weirbook": __version__, "answers": [answer.body() for answer in answers]}
