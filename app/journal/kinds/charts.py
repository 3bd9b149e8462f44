"""Control charts: a named baseline is frozen by a person; what each result set off is said by the server."""

from __future__ import annotations

from marshmallow import fields, validate

from app.journal.fields import Id, Text
from app.journal.kinds import ANALYST, SERVER, Body, kind

CHARTS = ("blank", "verification", "control", "duplicate", "spike")


class LeftOut(Body):
    """A result with a known failure, which enters no limit."""

    run = Id(required=True)
    position = fields.Integer(required=True, allow_none=True, strict=True)
    reason = Text(required=True, longest=300)


@kind("baseline.frozen", ANALYST)
class BaselineFrozen(Body):
    """The limits of a chart are frozen from the results of these runs; the server says the limits."""

    name = Text(required=True, longest=80)
    first = Id(required=True)
    last = Id(required=True)
    spread = fields.String(required=True, validate=validate.OneOf(["standard deviation", "moving range"]))
    left_out = fields.List(fields.Nested(LeftOut), required=True, validate=validate.Length(max=50))


@kind("chart.judged", SERVER)
class ChartJudged(Body):
    """The server put results on a chart: the points from one place on, each with the rules it set off."""

    software = Text(required=True)
    inputs_digest = fields.String(required=True)
    recipe = Id(required=True)
    instrument = Id(required=True)
    what = fields.String(required=True, validate=validate.OneOf(CHARTS))
    begins = fields.Integer(required=True, strict=True, validate=validate.Range(min=0))
    points = fields.List(fields.Dict(), required=True)
    baseline = fields.Dict(required=True, allow_none=True)
