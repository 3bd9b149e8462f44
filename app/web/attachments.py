"""Attachments over HTTP: how much is here, the next part, the whole."""

from __future__ import annotations

import re
from typing import Any

from flask import Response, request
from flask_smorest import Blueprint
from marshmallow import fields, validate

from app import __version__
from app.journal import attachments
from app.journal.attachments import AttachmentError, Have, Part
from app.journal.kinds import Body
from app.web.context import context
from app.web.security import NotFound
from app.web.sessions import need

blueprint = Blueprint("attachments", __name__, url_prefix="/api", description="Photos, by their digest")

_DIGEST = re.compile(r"[0-9a-f]{64}")


class PartSchema(Body):
    """Where a part begins, and how long the whole is."""

    offset = fields.Integer(required=True, data_key="X-Offset", validate=validate.Range(min=0))
    size = fields.Integer(required=True, data_key="X-Size", validate=validate.Range(min=1))

    class Meta:
        """Other headers are not ours."""

        unknown = "exclude"


class HaveSchema(Body):
    """How much of an attachment the server has."""

    weirbook = fields.String()
    have = fields.Integer()
    complete = fields.Boolean()
    position = fields.Integer()


def _named(digest: str) -> str:
    """Return what is a digest; anything else names nothing."""
    if not _DIGEST.fullmatch(digest):
        raise NotFound("A picture is named by the SHA-256 of its bytes; this is none.")
    return digest


def _told(response: Response, found: Have) -> Response:
    response.headers["X-Have"] = str(found.bytes)
    response.headers["X-Complete"] = "1" if found.complete else "0"
    return response


@blueprint.route("/blobs/<digest>", methods=["HEAD"])
@need()
@blueprint.response(200)
def how_much(digest: str) -> Response:
    """Tell how many bytes have come, in ``X-Have``, and whether that is all, in ``X-Complete``."""
    return _told(
        Response(mimetype="application/json"), attachments.have(context().store.read(), _named(digest))
    )


@blueprint.route("/blobs/<digest>", methods=["PUT"])
@need()
@blueprint.arguments(PartSchema, location="headers")
@blueprint.response(200, HaveSchema)
def put_part(given: dict[str, Any], digest: str) -> dict[str, Any]:
    """Take the bytes that follow what has come."""
    part = Part(_named(digest), given["offset"], given["size"], request.get_data())
    with context().ledger.transaction() as writing:
        before = attachments.have(writing.connection, digest)
        found = attachments.take(writing.connection, part, writing.received_at())
        if found.complete and not before.complete:
            body = {"size": found.bytes, "media_type": found.media_type}
            writing.state("attachment.arrived", digest, body)
        position = writing.head.position
    if part.at + len(part.data) == part.size and not found.complete:
        raise AttachmentError("The bytes that came are not the picture that was announced; send it again.")
    return {"weirbook": __version__, "have": found.bytes, "complete": found.complete, "position": position}


@blueprint.route("/blobs/<digest>")
@need()
@blueprint.response(200, content_type="image/jpeg")
def whole(digest: str) -> Response:
    """Give an attachment that is whole."""
    found = attachments.bytes_of(context().store.read(), _named(digest))
    if found is None or not found[1].startswith("image/"):
        raise NotFound("This picture is not on the server yet; it may still be on the tablet that took it.")
    return Response(found[0], mimetype=found[1])
