"""Waste: where a container stands, who took it away, and the site's other streams; checks of instruments."""

from __future__ import annotations

from marshmallow import fields, validate

from app.journal.fields import Day, Measured, Number, Text
from app.journal.kinds import ADMINISTRATOR, ANALYST, COORDINATOR, Body, kind


@kind("container.moved", ANALYST, ADMINISTRATOR)
class ContainerMoved(Body):
    """A container passed the limit at its place, went into central accumulation, or was picked up."""

    to = fields.String(
        required=True, validate=validate.OneOf(["over the limit", "central accumulation", "picked up"])
    )
    on = Day(required=True)
    by = Text(required=True, blank=True)
    manifest = Text(required=True, blank=True, longest=60)
    note = Text(required=True, blank=True, longest=500)


@kind("waste.added", ANALYST, COORDINATOR, ADMINISTRATOR)
class WasteAdded(Body):
    """Another stream of the site made hazardous waste; the whole site counts."""

    stream = Text(required=True, longest=80)
    on = Day(required=True)
    mass = Measured("mass", low=0, required=True)
    acute = fields.Boolean(required=True, truthy={True}, falsy={False})
    note = Text(required=True, blank=True, longest=500)


@kind("instrument.checked", ANALYST, ADMINISTRATOR)
class InstrumentChecked(Body):
    """A block, a photometer or a pipette was checked."""

    what = fields.String(
        required=True, validate=validate.OneOf(["block temperature", "wavelength", "pipette by weight"])
    )
    on = Day(required=True)
    wanted = Number(low=0.0001, required=True)
    found = fields.List(Number(low=0), required=True, validate=validate.Length(min=1, max=30))
    water_c = Number(low=0, high=60, required=True, allow_none=True)
    next_on = Day(required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=500)
