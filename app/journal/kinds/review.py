"""The review: results brought from before, decisions on results, certificates, expectations."""

from __future__ import annotations

from marshmallow import fields, validate

from app.journal.fields import Id, Measured, Text, When
from app.journal.kinds import COORDINATOR, SERVER, Body, kind
from app.journal.kinds.field import Readings


@kind("result.recorded", COORDINATOR)
class ResultRecorded(Body):
    """A result from before the programme kept this journal."""

    point = Id(required=True)
    collected_at = When(required=True)
    cod = Measured("concentration", low=0, bounds=True, required=True)
    expanded_u = Measured("concentration", low=0, required=True, allow_none=True)
    field = fields.Nested(Readings, required=True)
    activity = fields.String(
        required=True, allow_none=True, validate=validate.OneOf(["production", "cleaning", "idle"])
    )
    source = Text(required=True)


@kind("result.reviewed", COORDINATOR)
class ResultReviewed(Body):
    """A coordinator accepts a result for use, or rejects it, for a reason."""

    decision = fields.String(required=True, validate=validate.OneOf(["accepted", "rejected"]))
    reason = Text(required=True, blank=True, longest=500)


@kind("certificate.issued", SERVER)
class CertificateIssued(Body):
    """A certificate left the building: frozen, numbered, signed."""

    number = Id(required=True)
    result = Id(required=True)
    sample = Id(required=True)
    digest = fields.String(required=True)
    data_digest = fields.String(required=True)
    meaning = fields.String(required=True, validate=validate.OneOf(["authorised"]))
    issued_at = When(required=True)
    software = Text(required=True)


@kind("sum.failed", SERVER)
class SumFailed(Body):
    """The server could not do a sum that was due; what it was given is kept."""

    software = Text(required=True)
    what = Text(required=True, longest=40)
    error = Text(required=True, longest=2000)
    fields_ = fields.Dict(data_key="fields", required=True)


@kind("programme.learned", SERVER)
class ProgrammeLearned(Body):
    """The server learnt what the programme's points have in common."""

    software = Text(required=True)
    programme = fields.Dict(required=True)
    n = fields.Integer(required=True, strict=True)


@kind("outlook.computed", SERVER)
class OutlookComputed(Body):
    """What the server expects of a point's next sample, from all it knows."""

    software = Text(required=True)
    pack = fields.Dict(required=True)
    n = fields.Integer(required=True, strict=True)
    last_at = When(required=True, allow_none=True)


@kind("trust.judged", SERVER)
class TrustJudged(Body):
    """How forecasts would have done on the programme's own results, in all and point by point."""

    software = Text(required=True)
    results = fields.Integer(required=True, strict=True)
    ladder = fields.Dict(required=True)
    latest = fields.Integer(required=True, strict=True)
    first = fields.Integer(required=True, strict=True)
    programme = fields.Dict(required=True)
    points = fields.Dict(keys=fields.String(), values=fields.Dict(), required=True)
