"""What was measured beside the COD of a bottle, and what follows from it for its results."""

from __future__ import annotations

from typing import Any

from marshmallow import ValidationError, fields, validate, validates_schema

from app.journal.fields import Measured, Text
from app.journal.kinds import ANALYST, INSPECTOR, SERVER, Body, kind
from app.journal.kinds.field import bottle_code


class Species(Body):
    """Concentrations in the undiluted sample; a strip may give a bound."""

    chloride = Measured("concentration", low=0, high=200_000, bounds=True)
    nitrite = Measured("concentration", low=0, high=50_000, bounds=True)
    ferrous = Measured("concentration", low=0, high=50_000, bounds=True)
    sulfide = Measured("concentration", low=0, high=50_000, bounds=True)

    @validates_schema
    def _something(self, data: dict[str, Any], **_: Any) -> None:
        if not data:
            raise ValidationError("Give at least one value.")


@kind("bottle.measured", ANALYST, INSPECTOR)
class BottleMeasured(Body):
    """Chloride, nitrite (as N), ferrous iron (as Fe) or sulfide (as S) of a bottle; a later value stands."""

    bottle = fields.String(required=True, validate=bottle_code)
    species = fields.Nested(Species, required=True)
    how = Text(required=True, longest=200)
    note = Text(required=True, blank=True, longest=500)


@kind("result.qualified", SERVER)
class ResultQualified(Body):
    """The server's words beside a result: chloride, corrected value, the detection limit in force."""

    software = Text(required=True)
    inputs_digest = fields.String(required=True)
    input = fields.Dict(required=True)
    chloride = fields.Dict(required=True, allow_none=True)
    qualifiers = fields.List(fields.Dict(), required=True)
    corrected = fields.Dict(required=True, allow_none=True)
    detection_limit = fields.Dict(required=True, allow_none=True)
    words = fields.List(Text(longest=500), required=True, validate=validate.Length(max=20))
