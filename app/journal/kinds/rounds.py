"""Rounds and visits: what was planned, what was met at each stop, and the meters that were carried."""

from __future__ import annotations

from marshmallow import fields, validate

from app.compliance.flow import LARGE_FLUMES, SMALL_FLUMES
from app.journal.fields import Day, Id, Measured, Number, Text, When
from app.journal.kinds import ADMINISTRATOR, ANALYST, COORDINATOR, INSPECTOR, Body, kind
from app.journal.kinds.field import ACTIVITIES, SAMPLE_KINDS, Signature

OUTCOMES = ("sampled", "sampler set", "no flow", "refused", "unsafe", "not representative", "not sampled")
WEIRS = ("v-notch 90", "rectangular contracted", "rectangular suppressed")
DEVICES = (*WEIRS, "parshall", "bucket", "totalizer")


class Stop(Body):
    """One stop: a point, what is to be taken there, and room for a remark."""

    id = Id(required=True)
    point = Id(required=True)
    sample_kind = fields.String(required=True, validate=validate.OneOf(SAMPLE_KINDS))
    bottles = fields.Integer(required=True, strict=True, validate=validate.Range(min=0, max=20))
    note = Text(required=True, blank=True, longest=500)


class _Stops(Body):
    stops = fields.List(fields.Nested(Stop), required=True, validate=validate.Length(max=60))


@kind("round.planned", COORDINATOR, INSPECTOR)
class RoundPlanned(_Stops):
    """The stops of one day, in the order that was thought best."""

    name = Text(required=True)
    day = Day(required=True)
    inspector = Id(required=True, allow_none=True)


@kind("round.changed", COORDINATOR, INSPECTOR)
class RoundChanged(_Stops):
    """The stops in another order, or with one more."""


class Present(Body):
    """Somebody who was there for the discharger."""

    name = Text(required=True)
    title = Text(required=True, blank=True)
    phone = Text(required=True, blank=True, longest=40)


@kind("visit.begun", INSPECTOR)
class VisitBegun(Body):
    """The inspector is at a point: who is there and what goes on."""

    round = Id(required=True, allow_none=True)
    stop = Id(required=True, allow_none=True)
    point = Id(required=True)
    arrived_at = When(required=True)
    introduced = fields.Boolean(required=True, truthy={True}, falsy={False})
    present = fields.List(fields.Nested(Present), required=True, validate=validate.Length(max=10))
    activity = fields.String(required=True, allow_none=True, validate=validate.OneOf(ACTIVITIES))
    production = Text(required=True, blank=True, longest=500)
    weather = Text(required=True, blank=True)


@kind("gas.tested", INSPECTOR)
class GasTested(Body):
    """What the gas meter showed at the opening, from outside."""

    at = When(required=True)
    meter = Text(required=True, blank=True)
    oxygen_percent = Number(low=0, high=100, required=True, allow_none=True)
    lel_percent = Number(low=0, high=100, required=True, allow_none=True)
    h2s_ppm = Number(low=0, high=10_000, required=True, allow_none=True)
    co_ppm = Number(low=0, high=10_000, required=True, allow_none=True)


@kind("gas.confirmed", INSPECTOR)
class GasConfirmed(Body):
    """After an alarm and a better reading, a person confirms that sampling from outside goes on."""

    note = Text(required=True, longest=500)


class FlowDevice(Body):
    """What the flow was measured with."""

    type = fields.String(required=True, validate=validate.OneOf(DEVICES))
    size = fields.String(
        required=True, allow_none=True, validate=validate.OneOf([*SMALL_FLUMES, *LARGE_FLUMES])
    )
    crest = Measured("length", low=0.001, high=100, required=True, allow_none=True)
    crest_height = Measured("length", low=0.001, high=100, required=True, allow_none=True)


@kind("flow.measured", INSPECTOR)
class FlowMeasured(Body):
    """One flow at the point; what was read is kept, the flow follows from it."""

    at = When(required=True)
    device = fields.Nested(FlowDevice, required=True)
    head = Measured("length", low=0, high=100, required=True, allow_none=True)
    head_error = Measured("length", low=0, high=100, required=True, allow_none=True)
    tail = Measured("length", low=0, high=100, required=True, allow_none=True)
    volume = Measured("volume", low=0, required=True, allow_none=True)
    seconds = Number(low=0, high=86_400, required=True, allow_none=True)
    register_start = fields.String(required=True, allow_none=True, validate=validate.Regexp(r"\d{1,12}\Z"))
    register_end = fields.String(required=True, allow_none=True, validate=validate.Regexp(r"\d{1,12}\Z"))
    count = Measured("volume", low=0, required=True, allow_none=True)
    meter = Measured("flow", low=0, required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=500)


@kind("visit.ended", INSPECTOR)
class VisitEnded(Body):
    """The inspector leaves: what came of the visit, in the discharger's words too."""

    outcome = fields.String(required=True, validate=validate.OneOf(OUTCOMES))
    left_at = When(required=True)
    reason = Text(required=True, blank=True, longest=1000)
    told = Text(required=True, blank=True)
    remarks = Text(required=True, blank=True, longest=2000)
    signature = fields.Nested(Signature, required=True, allow_none=True)
    declined = fields.Boolean(required=True, truthy={True}, falsy={False})


@kind("sampler.set", INSPECTOR)
class SamplerSet(Body):
    """A sampler was set up at a point; its composite is picked up later under the same id."""

    point = Id(required=True)
    visit = Id(required=True, allow_none=True)
    started_at = When(required=True)
    paced_by = fields.String(required=True, validate=validate.OneOf(["time", "flow", "hand"]))
    every_minutes = Number(low=0.1, high=1440, required=True, allow_none=True)
    every_volume = Measured("volume", low=0, required=True, allow_none=True)
    expected_volume = Measured("volume", low=0, required=True, allow_none=True)
    aliquot = Measured("volume", low=0, required=True, allow_none=True)
    bottle_volume = Measured("volume", low=0, required=True, allow_none=True)
    planned = fields.Integer(
        required=True, strict=True, allow_none=True, validate=validate.Range(min=1, max=10_000)
    )
    intake = Text(required=True, blank=True)
    tubing = Text(required=True, blank=True)
    cooling = fields.String(required=True, validate=validate.OneOf(["ice", "refrigerated", "none"]))
    temperature = Measured("temperature", low=-5, high=60, required=True, allow_none=True)
    seal = Text(required=True, blank=True, longest=60)
    lock = Text(required=True, blank=True, longest=60)


@kind("sample.split", INSPECTOR)
class SampleSplit(Body):
    """Part of a sample went to the discharger, from the same mixed container."""

    to = Text(required=True)
    container = Text(required=True, blank=True, longest=60)
    receipt = fields.String(required=True, validate=validate.OneOf(["signed", "refused"]))
    signature = fields.Nested(Signature, required=True, allow_none=True)
    note = Text(required=True, blank=True, longest=500)


class CheckPoint(Body):
    """A reference and what the meter read in it."""

    reference = Number(required=True)
    read = Number(required=True)
    lot = Text(required=True, blank=True, longest=60)


@kind("meter.checked", INSPECTOR, ANALYST, ADMINISTRATOR)
class MeterChecked(Body):
    """A field meter was calibrated, or checked afterwards."""

    what = fields.String(required=True, validate=validate.OneOf(["calibration", "check", "bump test"]))
    quantity = fields.String(
        required=True, validate=validate.OneOf(["pH", "conductivity", "temperature", "turbidity", "gas"])
    )
    at = When(required=True)
    points = fields.List(fields.Nested(CheckPoint), required=True, validate=validate.Length(max=10))
    slope_percent = Number(low=0, high=200, required=True, allow_none=True)
    passed = fields.Boolean(required=True, allow_none=True, truthy={True}, falsy={False})
    note = Text(required=True, blank=True, longest=500)
