"""Issuing certificates: numbered without gaps, rendered once, the same bytes for ever."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any

from flask import Blueprint as PlainBlueprint
from flask import Response, render_template_string
from flask.views import MethodView
from flask_smorest import Blueprint
from marshmallow import fields, validate

from app.documents.certificate import render_certificate
from app.documents.data import data_digest
from app.errors import InputError
from app.journal.entry import digest
from app.journal.fields import Id
from app.journal.kinds import Body
from app.records.change import find, get
from app.records.laboratory import SOFTWARE
from app.records.ledger import Writing
from app.web import certificate_data
from app.web.context import context
from app.web.security import NotFound
from app.web.sessions import Person, need, person

blueprint = Blueprint("certificates", __name__, url_prefix="/api", description="Certificates")
public = PlainBlueprint("verify", __name__)


class IssueSchema(Body):
    """Which result is certified, and what the signature means."""

    result = Id(required=True)
    meaning = fields.String(required=True, validate=validate.OneOf(["authorised"]))


class IssuedSchema(Body):
    """A certificate's number and digests."""

    number = fields.String()
    digest = fields.String()
    data_digest = fields.String()


def _issue(writing: Writing, result: str, meaning: str, who: Person) -> dict[str, str]:
    now = datetime.now(UTC).isoformat(timespec="seconds")
    number = certificate_data.next_number(writing.find("certificate"), now)
    data = certificate_data.gather(writing, result, number, who.name, meaning, now)
    pdf = render_certificate(data, context().base_url)
    body = {
        "number": number,
        "result": result,
        "sample": data.sample.id,
        "digest": digest(pdf),
        "data_digest": data_digest(data),
        "meaning": meaning,
        "issued_at": now,
        "software": SOFTWARE,
    }
    writing.connection.execute("INSERT INTO blob VALUES (?, 'application/pdf', ?)", (body["digest"], pdf))
    writing.state("certificate.issued", number, body, who.id)
    return {name: body[name] for name in ("number", "digest", "data_digest")}


@blueprint.route("/certificates")
class Certificates(MethodView):
    """Certificates issued by this programme."""

    @need("coordinator")
    @blueprint.arguments(IssueSchema)
    @blueprint.response(201, IssuedSchema)
    def post(self, given: dict[str, str]) -> dict[str, Any]:
        """Issue a certificate for a result that was accepted."""
        who = person()
        if who is None:
            raise InputError("Nobody is signed in.")
        with context().ledger.transaction() as writing:
            return _issue(writing, given["result"], given["meaning"], who)


def _bytes_of(number: str) -> bytes:
    connection = context().store.read()
    certificate = get(connection, "certificate", number)
    row = (
        certificate
        and connection.execute("SELECT bytes FROM blob WHERE digest = ?", (certificate["digest"],)).fetchone()
    )
    if not row:
        raise NotFound(f"There is no certificate {number} here.")
    found: bytes = row[0]
    return found


@blueprint.route("/certificates/<number>.pdf")
@need()
@blueprint.response(200, content_type="application/pdf")
def pdf(number: str) -> Response:
    """The frozen bytes of a certificate."""
    headers = {"Content-Disposition": f'inline; filename="certificate-{number}.pdf"'}
    return Response(_bytes_of(number), mimetype="application/pdf", headers=headers)


_PAGE = """<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width">
<title>Certificate {{ number }}</title><link rel="stylesheet" href="/static/css/base.css"></head>
<body><main class="page">
{% if certificate %}
<h1>Certificate {{ number }}: {{ certificate.state }}</h1>
<p>Issued {{ certificate.issued_at }} by {{ programme.name }}, authorised by {{ certificate.by_name }}.</p>
<p>Digest of its data: <code>{{ certificate.data_digest }}</code></p>
<p>Digest of the file: <code>{{ certificate.digest }}</code></p>
<p>Compare the digest of the data with the one printed under the square code. If they differ, the paper in
your hand is not what was issued.</p>
{% else %}
<h1>No certificate {{ number }}</h1>
<p>This server has issued no certificate with that number. Ask the laboratory before you rely on the
paper.</p>
{% endif %}
</main></body></html>"""


@public.get("/verify/<number>")
def verify(number: str) -> tuple[str, int]:
    """What the square code on paper leads to: valid, amended, withdrawn or unknown."""
    connection = context().store.read()
    certificate = get(connection, "certificate", number)
    programmes = find(connection, "programme")
    page = render_template_string(
        _PAGE, number=number, certificate=certificate, programme=programmes[0][1] if programmes else {}
    )
    return page, 200 if certificate else 404
