"""The bench: receipt, recipes and stores, the run from the rack to the readings."""

from __future__ import annotations

from typing import Any

from marshmallow import fields, validate

from app.journal.fields import Day, Id, Measured, Number, Text, When
from app.journal.kinds import ADMINISTRATOR, ANALYST, SERVER, Body, kind, upcaster
from app.journal.kinds.field import Step, bottle_code


@kind("recipe.adopted", ANALYST, ADMINISTRATOR)
class RecipeAdopted(Body):
    """The laboratory works by this recipe; its limits are computed, never typed."""

    name = Text(required=True)
    source = Text(required=True)
    sample_ml = Number(low=0.01, high=1000, required=True)
    digestion_solution_ml = Number(low=0.01, high=1000, required=True)
    acid_reagent_ml = Number(low=0.01, high=1000, required=True)
    dichromate_g_per_l = Number(low=0.001, high=500, required=True)
    mercury_sulfate_g_per_l = Number(low=0, high=500, required=True)
    silver_sulfate_g_per_l = Number(low=0, high=100, required=True)
    wavelength_nm = Number(low=300, high=900, required=True)
    working_low = Number(low=0, required=True)
    working_high = Number(low=0, required=True)
    temperature_c = Number(low=50, high=200, required=True)
    minutes = Number(low=1, high=600, required=True)
    order = fields.List(Text(), required=True)
    digestion_acid_ml_per_l = Number(low=0, high=1000, allow_none=True)
    tube = Text(blank=True, longest=60)
    stated = Text(blank=True, longest=300)


@kind("recipe.derived", SERVER)
class RecipeDerived(Body):
    """The server computed what follows from a recipe."""

    software = Text(required=True)
    derived = fields.Dict(required=True)


@kind("lot.made", ANALYST)
class LotMade(Body):
    """A batch of reagent, made or bought, for one recipe."""

    recipe = Id(required=True)
    name = Text(required=True)
    made_on = Day(required=True)
    expires_on = Day(required=True)
    origin = fields.String(validate=validate.OneOf(["made", "bought"]))
    standardised_on = Day(allow_none=True)
    standardised = Text(blank=True, longest=300)


@kind("instrument.added", ANALYST, ADMINISTRATOR)
class InstrumentAdded(Body):
    """An instrument of the laboratory."""

    name = Text(required=True)
    what = fields.String(required=True, validate=validate.OneOf(["photometer", "block", "pipette", "meter"]))
    positions = fields.Integer(strict=True, allow_none=True, validate=validate.Range(min=1, max=200))


@kind("container.opened", ANALYST)
class ContainerOpened(Body):
    """A waste container is opened."""

    name = Text(required=True)
    capacity_ml = Number(low=1, required=True)


class Standard(Body):
    """One level of the curve: its COD and the blank-corrected absorbances."""

    cod = Number(low=0, required=True)
    absorbance = fields.List(Number(low=-1, high=5), required=True, validate=validate.Length(min=1, max=20))


@kind("calibration.made", ANALYST)
class CalibrationMade(Body):
    """Standards were read; the curve holds for one recipe, lot, instrument and wavelength."""

    recipe = Id(required=True)
    lot = Id(required=True)
    instrument = Id(required=True)
    wavelength_nm = Number(low=300, high=900, required=True)
    model = fields.String(required=True, validate=validate.OneOf(["linear", "quadratic"]))
    weights = fields.String(validate=validate.OneOf(["equal", "inverse", "inverse_square"]))
    valid_until = Day(required=True)
    standards = fields.List(fields.Nested(Standard), required=True, validate=validate.Length(min=5, max=50))


@kind("calibration.fitted", SERVER)
class CalibrationFitted(Body):
    """The server fitted the curve."""

    software = Text(required=True)
    inputs_digest = fields.String(required=True)
    fitted = fields.Dict(required=True)


@kind("curve.checked", ANALYST)
class CurveChecked(Body):
    """A standard of another source, or the linear range, was read against a curve."""

    what = fields.String(required=True, validate=validate.OneOf(["second source", "linear range"]))
    source = Text(required=True)
    expected = Number(low=0.001, required=True)
    absorbance = fields.List(Number(low=-2, high=5), required=True, validate=validate.Length(min=1, max=20))
    note = Text(required=True, blank=True, longest=500)


@kind("curve.judged", SERVER)
class CurveJudged(Body):
    """The server judged a check of a curve."""

    software = Text(required=True)
    check = Id(required=True)
    cod = fields.Float(required=True, allow_none=True)
    recovery_percent = fields.Float(required=True, allow_none=True)
    limit_percent = fields.Float(required=True)
    ok = fields.Boolean(required=True)
    due_on = Day(required=True)


@kind("bottle.received", ANALYST)
class BottleReceived(Body):
    """A bottle reached the laboratory, in this condition."""

    bottle = fields.String(required=True, validate=bottle_code)
    temperature = Measured("temperature", low=-5, high=60, required=True, allow_none=True)
    ph = Measured("pH", low=-1, high=15, bounds=True, required=True, allow_none=True)
    seal = fields.String(required=True, validate=validate.OneOf(["intact", "broken", "none"]))
    container = fields.String(required=True, validate=validate.OneOf(["sound", "leaking", "wrong"]))
    label_agrees = fields.Boolean(required=True, truthy={True}, falsy={False})
    decision = fields.String(
        required=True, validate=validate.OneOf(["accepted", "qualified", "on hold", "rejected"])
    )
    reasons = fields.List(Text(longest=300), required=True)
    told = Text(blank=True)
    note = Text(required=True, blank=True, longest=2000)


class TubeDilution(Body):
    """The dilution of the sample in a tube."""

    factor = fields.Float(required=True, validate=validate.Range(min=1, max=1_000_000))
    steps = fields.List(fields.Nested(Step), required=True)
    relative_u = fields.Float(required=True, validate=validate.Range(min=0, max=1))
    reason = Text(required=True, blank=True, longest=500)


CONTROLS = ("control", "duplicate", "spike")


class TubeSpike(Body):
    """What a spiked tube was filled from: so much of a solution in so much of the diluted sample."""

    sample_ml = Number(low=0.01, high=10_000, required=True)
    spike_ml = Number(low=0.0001, high=1000, required=True)
    spike_mg_l = Number(low=0.1, high=1_000_000, required=True)


class Tube(Body):
    """What a position of the rack holds."""

    position = fields.Integer(required=True, strict=True, validate=validate.Range(min=1, max=200))
    role = fields.String(
        required=True, validate=validate.OneOf(["blank", "verification", "sample", *CONTROLS])
    )
    bottle = fields.String(allow_none=True, validate=bottle_code)
    expected = Number(low=0, allow_none=True)
    source = Text(allow_none=True, longest=200)
    dilution = fields.Nested(TubeDilution, allow_none=True)
    spike = fields.Nested(TubeSpike, allow_none=True)


class Without(Body):
    """A control that this rack does without, and why."""

    role = fields.String(required=True, validate=validate.OneOf(CONTROLS))
    reason = Text(required=True, longest=300)


@kind("run.planned", ANALYST, version=2)
class RunPlanned(Body):
    """A digestion is planned: these tubes in these positions."""

    name = Text(required=True)
    recipe = Id(required=True)
    lot = Id(required=True)
    instrument = Id(required=True)
    block = Id(required=True)
    calibration = Id(required=True)
    container = Id(required=True)
    tubes = fields.List(fields.Nested(Tube), required=True, validate=validate.Length(min=1, max=200))
    without = fields.List(fields.Nested(Without), required=True, validate=validate.Length(max=3))


@upcaster("run.planned", 1)
def _run_before_controls(body: dict[str, Any]) -> dict[str, Any]:
    why = "planned before racks had them"
    return body | {"without": [{"role": role, "reason": why} for role in CONTROLS]}


@kind("gate.confirmed", ANALYST)
class GateConfirmed(Body):
    """A person confirms that a gate's condition is met."""

    gate = Id(required=True)
    value = Measured("temperature", low=-50, high=400, allow_none=True)
    note = Text(blank=True, longest=500)


@kind("heating.started", ANALYST)
class HeatingStarted(Body):
    """The digestion begins."""

    started_at = When(required=True)
    minutes = fields.Integer(required=True, strict=True, validate=validate.Range(min=1, max=600))
    temperature = Measured("temperature", low=50, high=250, required=True)


@kind("heating.ended", ANALYST)
class HeatingEnded(Body):
    """The digestion ends, complete or interrupted."""

    ended_at = When(required=True)
    complete = fields.Boolean(required=True, truthy={True}, falsy={False})
    reason = Text(required=True, blank=True, longest=500)


@kind("tube.read", ANALYST)
class TubeRead(Body):
    """A tube's absorbance was read, and what it looks like."""

    position = fields.Integer(required=True, strict=True, validate=validate.Range(min=1, max=200))
    absorbance = Measured("absorbance", low=-2, high=5, required=True)
    colour = fields.String(
        required=True, allow_none=True, validate=validate.OneOf(["orange", "olive", "green"])
    )
    remaining_oxidant = Measured("share", low=0, high=1.5, allow_none=True)
    reason = Text(blank=True, longest=300)


@kind("tube.excluded", ANALYST)
class TubeExcluded(Body):
    """A tube is left out for a cause that was seen."""

    position = fields.Integer(required=True, strict=True, validate=validate.Range(min=1, max=200))
    cause = fields.String(
        required=True,
        validate=validate.OneOf(
            ["cap leaked", "wrong volume", "tube cracked", "spilled", "precipitate in the beam"]
        ),
    )
    note = Text(required=True, blank=True, longest=500)


@kind("readings.finished", ANALYST)
class ReadingsFinished(Body):
    """All tubes are read; the run can be calculated."""


@kind("run.calculated", SERVER)
class RunCalculated(Body):
    """The server calculated the run: what it was given and what it answered."""

    software = Text(required=True)
    inputs_digest = fields.String(required=True)
    input = fields.Dict(required=True)
    answer = fields.Dict(required=True)
    tubes = fields.List(fields.Dict(), required=True)
    results = fields.List(fields.Dict(), required=True)
    waste = fields.Dict(required=True)
    bracketing = fields.Dict()
    checks = fields.List(fields.Dict())
    experience = fields.Dict()


class Decision(Body):
    """What a person decided about something that does not hold."""

    what = Text(required=True, longest=40)
    subject = Text(required=True)
    decision = Text(required=True)
    reason = Text(required=True, longest=500)


@kind("run.closed", ANALYST)
class RunClosed(Body):
    """The run is closed; its waste went into its container."""

    decisions = fields.List(fields.Nested(Decision), required=True)
