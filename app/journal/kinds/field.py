"""The field: samples taken, split and handed over, each hand-over with both its halves."""

from __future__ import annotations

from typing import Any

from marshmallow import ValidationError, fields, validate

from app.compliance import codes
from app.errors import InputError
from app.journal.fields import Id, Measured, Text, When
from app.journal.kinds import ANALYST, INSPECTOR, Body, kind, upcaster

ACTIVITIES = ("production", "cleaning", "idle")
SAMPLE_KINDS = ("grab", "composite")
PURPOSES = ("sample", "duplicate", "field blank")


def bottle_code(text: str) -> None:
    """Refuse a bottle code whose check character does not agree."""
    try:
        known = codes.check(text)
    except InputError as error:
        raise ValidationError(error.message) from None
    if known != text:
        raise ValidationError(f"Write the code as {known}.")


class Signature(Body):
    """A name written on glass: who signed, and the strokes as an SVG path."""

    name = Text(required=True)
    strokes = fields.String(
        required=True, validate=[validate.Length(max=20_000), validate.Regexp(r"[ML0-9 .,-]*\Z")]
    )


class Readings(Body):
    """What the meters showed at the point."""

    conductivity_us_cm = Measured("conductivity", low=0, high=1_000_000)
    turbidity_ntu = Measured("turbidity", low=0, high=1_000_000, bounds=True)
    ph = Measured("pH", low=-1, high=15)
    temperature_c = Measured("temperature", low=-5, high=100)
    chloride_mg_l = Measured("concentration", low=0, high=200_000, bounds=True)


class Preservation(Body):
    """How the bottle was kept from changing."""

    acid = fields.Boolean(required=True, truthy={True}, falsy={False})
    ph = Measured("pH", low=-1, high=15, bounds=True, required=True, allow_none=True)
    cooled = fields.Boolean(required=True, truthy={True}, falsy={False})
    at = When(allow_none=True)


class Step(Body):
    """One transfer: so much by pipette, made up to so much in a flask."""

    pipette_ml = fields.Float(required=True, validate=validate.Range(min=0, min_inclusive=False))
    flask_ml = fields.Float(required=True, validate=validate.Range(min=0, min_inclusive=False))


class Plan(Body):
    """The dilution settled before digestion, and why."""

    recipe = Id(required=True, allow_none=True)
    dilution_factor = fields.Float(required=True, validate=validate.Range(min=1, max=1_000_000))
    steps = fields.List(fields.Nested(Step), required=True)
    p_in_range = fields.Float(required=True, allow_none=True, validate=validate.Range(min=0, max=1))
    median = fields.Float(required=True, allow_none=True)
    low = fields.Float(required=True, allow_none=True)
    high = fields.Float(required=True, allow_none=True)
    reason = Text(required=True, longest=500)
    chosen_by = fields.String(required=True, validate=validate.OneOf(["forecast", "person"]))


class Portion(Body):
    """One grab of a composite made by hand: the flow at it, and its share of the volume."""

    at = When(required=True)
    flow = Measured("flow", low=0, required=True)


class Composite(Body):
    """How the bottle filled over time; the sample's own moment is the end."""

    started_at = When(required=True)
    paced_by = fields.String(required=True, validate=validate.OneOf(["time", "flow", "hand"]))
    planned = fields.Integer(
        required=True, strict=True, allow_none=True, validate=validate.Range(min=1, max=10_000)
    )
    taken = fields.Integer(
        required=True, strict=True, allow_none=True, validate=validate.Range(min=0, max=10_000)
    )
    missed = Text(required=True, blank=True, longest=500)
    volume = Measured("volume", low=0, required=True, allow_none=True)
    temperature = Measured("temperature", low=-5, high=60, required=True, allow_none=True)
    seal = fields.String(required=True, validate=validate.OneOf(["intact", "broken", "none"]))
    portions = fields.List(fields.Nested(Portion), required=True, validate=validate.Length(max=96))


@kind("sample.taken", INSPECTOR, version=2)
class SampleTaken(Body):
    """A sample was taken at a point, into a bottle with this code."""

    point = Id(required=True)
    visit = Id(required=True, allow_none=True)
    purpose = fields.String(required=True, validate=validate.OneOf(PURPOSES))
    of = Id(required=True, allow_none=True)
    bottle = fields.String(required=True, validate=bottle_code)
    sample_kind = fields.String(required=True, validate=validate.OneOf(SAMPLE_KINDS))
    collected_at = When(required=True)
    composite = fields.Nested(Composite, required=True, allow_none=True)
    meter = Id(required=True, allow_none=True)
    field = fields.Nested(Readings, required=True)
    activity = fields.String(required=True, allow_none=True, validate=validate.OneOf(ACTIVITIES))
    solids = fields.Boolean(truthy={True}, falsy={False})
    appearance = Text(required=True, blank=True)
    preservation = fields.Nested(Preservation, required=True)
    plan = fields.Nested(Plan, required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=2000)


@upcaster("sample.taken", 1)
def _sample_taken_1(body: dict[str, Any]) -> dict[str, Any]:
    return {"visit": None, "purpose": "sample", "of": None, "composite": None, "meter": None} | body


@kind("custody.handed_over", INSPECTOR, ANALYST, version=2)
class CustodyHandedOver(Body):
    """Bottles pass from one holder to the next; a locked refrigerator is a holder too."""

    bottles = fields.List(
        fields.String(validate=bottle_code), required=True, validate=validate.Length(min=1, max=100)
    )
    to = Text(required=True)
    to_kind = fields.String(required=True, validate=validate.OneOf(["person", "place"]))
    seal = Text(required=True, blank=True, longest=60)
    given = fields.Nested(Signature, required=True, allow_none=True)
    taken = fields.Nested(Signature, required=True, allow_none=True)
    temperature = Measured("temperature", low=-5, high=60, required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=2000)


@upcaster("custody.handed_over", 1)
def _handed_over_1(body: dict[str, Any]) -> dict[str, Any]:
    return {"to_kind": "person", "seal": "", "given": None, "taken": None} | body
