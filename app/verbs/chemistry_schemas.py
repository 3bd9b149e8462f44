"""What the verbs of chemistry take: structure by marshmallow, meaning by the sums.

The schemas say which keys there are and what kind of thing each holds; the
pure packages say which values make sense. Numbers are JSON numbers: no text,
no true or false, nothing that is not finite.
"""

from __future__ import annotations

import math
from typing import Any

from marshmallow import Schema, ValidationError, fields, validate

MISSING_WORDS: dict[str, Any] = {"required": "is missing", "null": "must not be null"}


def as_number(value: Any) -> float:
    """Return a JSON number as a float, or raise the words about it."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        kind = "text" if isinstance(value, str) else "null" if value is None else "that"
        raise ValidationError(f"must be a number, not {kind}")
    try:
        number = float(value)
    except OverflowError:
        number = math.inf
    if not math.isfinite(number):
        raise ValidationError("must be a finite number")
    return number


def is_text(value: Any) -> bool:
    """Tell whether a value is text that can be written down again (JSON lets half a character through)."""
    return isinstance(value, str) and value.encode("utf-8", "replace").decode("utf-8") == value


class Number(fields.Field[float]):
    """One finite number."""

    default_error_messages = MISSING_WORDS

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> float:
        return as_number(value)


class Numbers(fields.Field[tuple[float, ...]]):
    """A list of finite numbers, told about under its own path."""

    default_error_messages = MISSING_WORDS

    def __init__(self, *, length: int | None = None, holes: bool = False, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.length = length
        self.holes = holes

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> tuple[Any, ...]:
        if not isinstance(value, list):
            raise ValidationError("must be a list of numbers")
        found, wrong = [], []
        for i, one in enumerate(value):
            try:
                found.append(None if one is None and self.holes else as_number(one))
            except ValidationError as error:
                wrong.append(f"number {i + 1} {error.messages[0]}")
        if self.length is not None and len(value) != self.length:
            wrong.append(f"must hold {self.length} numbers")
        if wrong:
            raise ValidationError(wrong)
        return tuple(found)


class Whole(fields.Field[int]):
    """One whole number."""

    default_error_messages = MISSING_WORDS

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> int:
        if isinstance(value, bool) or not isinstance(value, int):
            raise ValidationError("must be a whole number")
        return value


class Text(fields.Field[str]):
    """One text."""

    default_error_messages = MISSING_WORDS

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> str:
        if not is_text(value):
            raise ValidationError("must be a text")
        return str(value)


class NamePairs(fields.Field[tuple[tuple[str, str], ...]]):
    """A list of pairs of sample names."""

    default_error_messages = MISSING_WORDS

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> tuple[tuple[str, str], ...]:
        if not isinstance(value, list):
            raise ValidationError("must be a list of pairs of sample names")
        wrong = {
            i: ["must be a pair of sample names"]
            for i, pair in enumerate(value)
            if not (isinstance(pair, list) and len(pair) == 2 and all(map(is_text, pair)))
        }
        if wrong:
            raise ValidationError(wrong)
        return tuple((pair[0], pair[1]) for pair in value)


class Strict(Schema):
    """A JSON object with known keys only."""

    error_messages = {  # noqa: RUF012
        "unknown": "is not a known field here",
        "type": "must be a JSON object",
    }


def one_of(*choices: str) -> validate.OneOf:
    """Return a validator that names the choices."""
    return validate.OneOf(choices, error=f"must be one of {', '.join(choices)}")


def many(schema: type[Schema], **kwargs: Any) -> fields.Nested:
    """Return a field for a list of objects."""
    words = {**MISSING_WORDS, "type": "must be a list"}
    return fields.Nested(schema, many=True, error_messages=words, **kwargs)


def one(schema: type[Schema], **kwargs: Any) -> fields.Nested:
    """Return a field for one object."""
    return fields.Nested(schema, error_messages=MISSING_WORDS, **kwargs)


class OxygenDemandInput(Strict):
    """``oxygen-demand``."""

    formula = Text(required=True)


class RecipeInput(Strict):
    """A recipe, as every verb takes it."""

    sample_ml = Number(required=True)
    digestion_solution_ml = Number(required=True)
    acid_reagent_ml = Number(required=True)
    dichromate_g_per_l = Number(required=True)
    mercury_sulfate_g_per_l = Number(required=True)
    silver_sulfate_g_per_l = Number(required=True)
    wavelength_nm = Number(required=True)


class RecipeAndRangeInput(RecipeInput):
    """``recipe``: with the range that somebody wants to state for it."""

    working_range = Numbers(length=2, allow_none=True)


class PurityInput(Strict):
    """Mass fractions on the bottles."""

    dichromate = Number(load_default=1.0)
    mercury_sulfate = Number(load_default=1.0)
    silver_sulfate = Number(load_default=1.0)
    phthalate = Number(load_default=1.0)


class StockInput(Strict):
    """A stock of known COD."""

    cod = Number(required=True)
    volume_ml = Number(required=True)


class PreparationInput(Strict):
    """``preparation``."""

    recipe = one(RecipeInput, required=True)
    digestion_solution_ml = Number(load_default=0.0)
    acid_reagent_ml = Number(load_default=0.0)
    digestion_acid_ml_per_l = Number(load_default=0.0)
    purity = one(PurityInput, load_default=None, allow_none=True)
    stock = one(StockInput, load_default=None, allow_none=True)
    levels = Numbers(load_default=())


class StandardInput(Strict):
    """One standard."""

    cod = Number(required=True)
    absorbance = Numbers(required=True)


MODEL = one_of("linear", "quadratic")
WEIGHTS = one_of("equal", "inverse", "inverse_square")


class FitInput(Strict):
    """``fit``."""

    standards = many(StandardInput, required=True)
    model = Text(load_default="linear", validate=MODEL)
    weights = Text(load_default="equal", validate=WEIGHTS)
    read = fields.List(
        Numbers(), load_default=list, error_messages={**MISSING_WORDS, "invalid": "must be a list"}
    )
    confidence = Number(load_default=0.95)


class CalibrationInput(Strict):
    """The calibration in force."""

    standards = many(StandardInput, required=True)
    model = Text(load_default="linear", validate=MODEL)
    weights = Text(load_default="equal", validate=WEIGHTS)
    standards_relative_u = Number(required=True)


class ExclusionInput(Strict):
    """A tube set aside by a person."""

    index = Whole(required=True)
    reason = Text(required=True)


class TubesInput(Strict):
    """The tubes of one sample."""

    sample = Text(required=True)
    absorbance = Numbers(required=True)
    dilution_factor = Number(required=True)
    dilution_relative_u = Number(required=True)
    colour = Text(load_default=None, allow_none=True, validate=one_of("orange", "olive", "green"))
    remaining_oxidant = Number(load_default=None, allow_none=True)
    excluded = many(ExclusionInput, load_default=list)


class VerificationInput(Strict):
    """A verification."""

    expected = Number(required=True)
    absorbance = Numbers(required=True)


class SpikeInput(Strict):
    """A spike."""

    unspiked = Text(required=True)
    spiked = Text(required=True)
    sample_ml = Number(required=True)
    spike_ml = Number(required=True)
    spike_mg_l = Number(required=True)


class RepeatabilityInput(Strict):
    """The laboratory's repeatability."""

    a = Number(required=True)
    k = Number(required=True)
    dof = Number(load_default=None, allow_none=True)


class PolicyInput(Strict):
    """What the programme asks of a run."""

    repeatability = one(RepeatabilityInput, required=True)
    bias_relative_u = Number(required=True)
    bias_dof = Number(load_default=None, allow_none=True)
    verification_percent = Number(required=True)
    duplicate_rpd_percent = Number(required=True)
    spike_percent = Numbers(required=True, length=2)


class CalculateInput(Strict):
    """``calculate``: one run."""

    recipe = one(RecipeInput, required=True)
    calibration = one(CalibrationInput, required=True)
    working_range = Numbers(required=True, length=2)
    blanks = Numbers(load_default=None, allow_none=True)
    tubes = many(TubesInput, required=True)
    verifications = many(VerificationInput, load_default=list)
    duplicates = NamePairs(load_default=())
    spikes = many(SpikeInput, load_default=list)
    policy = one(PolicyInput, required=True)


class DetectionLimitInput(Strict):
    """``detection-limit``."""

    spikes = Numbers(required=True)
    blanks = Numbers(required=True, holes=True)
