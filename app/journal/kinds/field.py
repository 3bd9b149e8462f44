"""The field: samples taken and bottles handed over."""

from __future__ import annotations

from marshmallow import ValidationError, fields, validate

from app.compliance import codes
from app.errors import InputError
from app.journal.fields import Id, Measured, Text, When
from app.journal.kinds import ANALYST, INSPECTOR, Body, kind


def bottle_code(text: str) -> None:
    """Refuse a bottle code whose check character does not agree."""
    try:
        known = codes.check(text)
    except InputError as error:
        raise ValidationError(error.message) from None
    if known != text:
        raise ValidationError(f"Write the code as {known}.")


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


@kind("sample.taken", INSPECTOR)
class SampleTaken(Body):
    """A sample was taken at a point, into a bottle with this code."""

    point = Id(required=True)
    bottle = fields.String(required=True, validate=bottle_code)
    sample_kind = fields.String(required=True, validate=validate.OneOf(["grab"]))
    collected_at = When(required=True)
    field = fields.Nested(Readings, required=True)
    activity = fields.String(
        required=True, allow_none=True, validate=validate.OneOf(["production", "cleaning", "idle"])
    )
    appearance = Text(required=True, blank=True)
    preservation = fields.Nested(Preservation, required=True)
    plan = fields.Nested(Plan, required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=2000)


@kind("custody.handed_over", INSPECTOR, ANALYST)
class CustodyHandedOver(Body):
    """Bottles pass from one holder to the next."""

    bottles = fields.List(
        fields.String(validate=bottle_code), required=True, validate=validate.Length(min=1, max=100)
    )
    to = Text(required=True)
    temperature = Measured("temperature", low=-5, high=60, required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=2000)
