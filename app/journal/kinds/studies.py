"""Detection limit studies: planned, their results as they come, finished, the limit that follows."""

from __future__ import annotations

from marshmallow import fields, validate

from app.journal.fields import Day, Id, Measured, Text
from app.journal.kinds import ANALYST, SERVER, Body, kind


@kind("study.planned", ANALYST)
class StudyPlanned(Body):
    """A study of a recipe's detection limit begins: the estimate, the spike, the days."""

    name = Text(required=True)
    recipe = Id(required=True)
    instruments = fields.List(Id(), required=True, validate=validate.Length(min=1, max=20))
    estimate = Measured("concentration", low=0.001, high=100_000, required=True)
    level = Measured("concentration", low=0.001, high=100_000, required=True)
    days = fields.List(Day(), required=True, validate=validate.Length(min=3, max=60))
    note = Text(required=True, blank=True, longest=2000)


@kind("study.result", ANALYST)
class StudyResult(Body):
    """One tube of a study: typed, or taken from a run; said again with a reason, it corrects."""

    row = Id(required=True)
    tube = fields.String(required=True, validate=validate.OneOf(["spike", "blank"]))
    on = Day(required=True)
    batch = Text(required=True)
    instrument = Id(required=True)
    result = Measured(
        "concentration", low=-100_000, high=100_000, bounds=True, required=True, allow_none=True
    )
    run = Id(required=True, allow_none=True)
    position = fields.Integer(
        required=True, allow_none=True, strict=True, validate=validate.Range(min=1, max=200)
    )
    left_out = Text(required=True, blank=True, longest=300)
    reason = Text(required=True, blank=True, longest=300)


@kind("study.tube_found", SERVER)
class StudyTubeFound(Body):
    """What a run's tube gave, in mg/L in the tube; null where there is no number."""

    software = Text(required=True)
    row = Id(required=True)
    mg_l = fields.Float(required=True, allow_none=True)


@kind("study.finished", ANALYST)
class StudyFinished(Body):
    """The results suffice: the limit is calculated, for the first time or again."""

    keep = fields.Boolean(required=True, truthy={True}, falsy={False})
    note = Text(required=True, blank=True, longest=500)


@kind("study.computed", SERVER)
class StudyComputed(Body):
    """The server calculated a study's detection limit: what it was given and what it answered."""

    software = Text(required=True)
    inputs_digest = fields.String(required=True)
    input = fields.Dict(required=True)
    answer = fields.Dict(required=True)
    workings = fields.Dict(required=True)
    mg_l = fields.Float(required=True, allow_nan=False)
    shown = Text(required=True)
    computed_on = Day(required=True)
    again_by = Day(required=True)
    data_from = Day(required=True)
    stood = fields.Boolean(required=True, truthy={True}, falsy={False})
    words = fields.List(Text(longest=500), required=True)
