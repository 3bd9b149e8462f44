"""The programme: its settings, people, dischargers, points and limits."""

from __future__ import annotations

from zoneinfo import available_timezones

from marshmallow import ValidationError, fields, validate

from app.journal.fields import Day, Id, Measured, Text
from app.journal.kinds import ADMINISTRATOR, COORDINATOR, ROLES, SERVER, Body, kind
from app.journal.kinds.settings import Settings


def known_zone(name: str) -> None:
    """Refuse a time zone that the IANA data base does not know."""
    if name not in available_timezones():
        raise ValidationError("Not a time zone such as America/Chicago.")


@kind("programme.started", SERVER)
class ProgrammeStarted(Body):
    """The authority's programme begins on this server."""

    name = Text(required=True)
    laboratory = Text(required=True)
    zone = fields.String(required=True, validate=known_zone)
    units = fields.String(required=True, validate=validate.OneOf(["metric", "us"]))
    example = fields.Boolean(required=True, truthy={True}, falsy={False})
    settings = fields.Nested(Settings, required=True)


@kind("settings.changed", ADMINISTRATOR)
class SettingsChanged(Body):
    """Some of the programme's settings take new values, for a reason."""

    settings = fields.Nested(Settings, required=True)
    reason = Text(required=True)


@kind("person.added", SERVER)
class PersonAdded(Body):
    """Somebody may work here, in one or several roles."""

    name = Text(required=True)
    roles = fields.List(fields.String(validate=validate.OneOf(ROLES)), required=True)


@kind("person.changed", SERVER)
class PersonChanged(Body):
    """Somebody's name, roles or standing changes."""

    name = Text(required=True)
    roles = fields.List(fields.String(validate=validate.OneOf(ROLES)), required=True)
    active = fields.Boolean(required=True, truthy={True}, falsy={False})


@kind("discharger.registered", COORDINATOR, ADMINISTRATOR)
class DischargerRegistered(Body):
    """A discharger is known to the programme."""

    name = Text(required=True)
    sector = Text(required=True, allow_none=True)
    address = Text(required=True, blank=True)


@kind("point.registered", COORDINATOR, ADMINISTRATOR)
class PointRegistered(Body):
    """A discharge point: where it is, what endangers there, how it is sampled."""

    discharger = Id(required=True)
    name = Text(required=True)
    access = Text(required=True, blank=True, longest=500)
    hazards = fields.List(Text(longest=40), required=True)
    sample_kind = fields.String(required=True, validate=validate.OneOf(["grab", "composite"]))
    flow_device = Text(required=True, allow_none=True)


@kind("limit.set", COORDINATOR)
class LimitSet(Body):
    """A limit of a point, in force from a day, with its source."""

    basis = fields.String(required=True, validate=validate.OneOf(["daily_maximum", "monthly_average"]))
    value = Measured("concentration", low=0, required=True)
    from_ = Day(required=True, data_key="from")
    source = Text(required=True)


@kind("entry.settled", COORDINATOR)
class EntrySettled(Body):
    """A person decides on a held entry: it comes into force, or is set aside."""

    decision = fields.String(required=True, validate=validate.OneOf(["admit", "set aside"]))
    reason = Text(required=True, longest=500)
