"""What ``plan``, ``learn`` and ``backtest`` take: structure and plain sense, every bad field named.

Histories are long and there may be hundreds a second: their results are read by
plain functions inside one marshmallow field instead of a nested schema.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from datetime import datetime
from typing import Any

from marshmallow import ValidationError, fields, validate

from app.forecast.observations import ACTIVITIES, LARGEST_COD, READINGS, Observation
from app.forecast.planning import Range
from app.verbs.fields import YEARS, Count, Flag, Moment, Number, Strict

UNIX_DAY = 86400.0
MOST_RESULTS = 20000
#: What each reading may be: plainly impossible numbers are slips of the finger or of the unit.
POSSIBLE = {
    "conductivity_us_cm": (0.0, 1e6),
    "turbidity_ntu": (0.0, 1e6),
    "ph": (-2.0, 16.0),
    "temperature_c": (-10.0, 110.0),
}
UNKNOWN = "is not known here"


def _moment(value: Any) -> datetime:
    try:
        moment = datetime.fromisoformat(value)
    except (TypeError, ValueError):
        raise ValidationError("must be a time such as 2031-01-12T09:00:00-06:00") from None
    if moment.utcoffset() is None:
        raise ValidationError("needs an offset, e.g. 2031-01-12T09:00:00-06:00")
    if moment.year not in YEARS:
        raise ValidationError("is not a plausible time")
    return moment


def _number(value: Any) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise ValidationError("must be a number")
    try:
        number = float(value)
    except OverflowError:
        number = math.inf
    if not math.isfinite(number):
        raise ValidationError("must be a finite number")
    return number


def days_of(moment: datetime) -> float:
    """Return a moment as days since 1970-01-01 UTC."""
    return moment.timestamp() / UNIX_DAY


def _days(value: Any) -> float:
    return days_of(_moment(value))


def _cod(value: Any) -> float:
    number = _number(value)
    if not 0 < number <= LARGEST_COD:
        raise ValidationError(f"must be above 0 and at most {LARGEST_COD:g}")
    return number


def _state(value: Any) -> str:
    if not isinstance(value, str) or value not in ("ok", "over", "below"):
        raise ValidationError("must be ok, over or below")
    return value


def _activity(value: Any) -> str | None:
    if value is not None and (not isinstance(value, str) or value not in ACTIVITIES):
        raise ValidationError(f"must be one of {', '.join(ACTIVITIES)}, or null")
    return value


def _readings(value: Any) -> dict[str, float]:
    """Return field readings; a missing one may be null."""
    if value is None:
        return {}
    if not isinstance(value, Mapping):
        raise ValidationError("must be an object")
    found: dict[str, float] = {}
    wrong: dict[str, list[str]] = {}
    for name, given in value.items():
        if name not in READINGS:
            wrong[str(name)] = [f"{UNKNOWN}; readings are {', '.join(READINGS)}"]
        elif given is not None:
            try:
                found[name] = _possible(name, _number(given))
            except ValidationError as error:
                wrong[str(name)] = [str(line) for line in error.messages]
    if wrong:
        raise ValidationError(wrong)
    return found


def _possible(name: str, number: float) -> float:
    low, high = POSSIBLE[name]
    if not low <= number <= high:
        raise ValidationError(f"must be between {low:g} and {high:g}")
    return number


READERS: dict[str, Callable[[Any], Any]] = {
    "at": _days,
    "cod": _cod,
    "state": _state,
    "field": _readings,
    "activity": _activity,
}
NEEDED = ("at", "cod")


def _observation(value: Any) -> Observation:
    if not isinstance(value, dict):
        raise ValidationError("must be an object")
    found: dict[str, Any] = {}
    wrong: dict[str, Any] = {key: ["is missing"] for key in NEEDED if key not in value}
    for key, given in value.items():
        reader = READERS.get(key)
        if reader is None:
            wrong[str(key)] = [UNKNOWN]
            continue
        try:
            found["days" if key == "at" else str(key)] = reader(given)
        except ValidationError as error:
            wrong[str(key)] = error.messages
    if wrong:
        raise ValidationError(wrong)
    return Observation(**found)


class History(fields.Field[list[Observation]]):
    """Results of a point, in any order."""

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> list[Observation]:
        if not isinstance(value, list):
            raise ValidationError("must be a list")
        if len(value) > MOST_RESULTS:
            raise ValidationError(f"must have {MOST_RESULTS} results or fewer")
        found, wrong = [], {}
        for i, one in enumerate(value):
            try:
                found.append(_observation(one))
            except ValidationError as error:
                wrong[i] = error.messages
        if wrong:
            raise ValidationError(wrong)
        return found


class Readings(fields.Field[dict[str, float]]):
    """Field readings of now."""

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> dict[str, float]:
        return _readings(value)


class NowSchema(Strict):
    """The moment of the next sample, and what is known of it."""

    at = Moment(required=True)
    field = Readings(load_default=dict, allow_none=True)
    activity = fields.String(load_default=None, allow_none=True, validate=validate.OneOf(ACTIVITIES))
    chloride = Number(load_default=None, allow_none=True, least=0)
    volume_ml = Number(load_default=None, allow_none=True, least=0)
    solids = Flag(load_default=False)


class RangeSchema(Strict):
    """One recipe's working range."""

    name = fields.String(required=True, validate=validate.Length(min=1))
    low = Number(required=True, least=0)
    high = Number(required=True, above=0)
    chloride_limit = Number(load_default=None, allow_none=True, least=0)
    reporting = Number(load_default=None, allow_none=True, least=0)
    recipe_mg_mercury = Number(load_default=None, allow_none=True, least=0)


ONE_RANGE = RangeSchema()


class Ranges(fields.Field[tuple[Range, ...]]):
    """Working ranges, at least one, each with a name of its own."""

    def _deserialize(self, value: Any, attr: Any, data: Any, **kwargs: Any) -> tuple[Range, ...]:
        if not isinstance(value, list) or not value:
            raise ValidationError("must be a list of at least one range")
        found: list[Range] = []
        wrong: dict[int, Any] = {}
        for i, one in enumerate(value):
            try:
                told = ONE_RANGE.load(one)
                wrong.update(_sense(i, told, [known.name for known in found]))
                if i not in wrong:
                    found.append(_range(told))
            except ValidationError as error:
                wrong[i] = error.messages
        if wrong:
            raise ValidationError(wrong)
        return tuple(found)


def _sense(i: int, told: dict[str, Any], names: list[str]) -> dict[int, Any]:
    if not told["low"] < told["high"]:
        return {i: {"low": ["must be under high"]}}
    return {i: {"name": ["is used twice"]}} if told["name"] in names else {}


def _range(told: dict[str, Any]) -> Range:
    told = dict(told)
    mercury = told.pop("recipe_mg_mercury")
    return Range(**told, mercury_mg=mercury)


class GlasswareSchema(Strict):
    """The shelf."""

    pipettes_ml = fields.List(Number(above=0), required=True, validate=validate.Length(min=1, max=30))
    flasks_ml = fields.List(Number(above=0), required=True, validate=validate.Length(min=1, max=30))


class PointSchema(Strict):
    """A point's sector and results."""

    sector = fields.String(load_default=None, allow_none=True)
    history = History(required=True)


Dilutions = fields.List(
    Number(least=1, most=1e6), load_default=None, allow_none=True, validate=validate.Length(min=1, max=200)
)


class PlanSchema(Strict):
    """What ``plan`` reads."""

    sector = fields.String(load_default=None, allow_none=True)
    history = History(load_default=list)
    now = fields.Nested(NowSchema, required=True)
    ranges = Ranges(required=True)
    dilutions = Dilutions
    glassware = fields.Nested(GlasswareSchema, load_default=None, allow_none=True)
    decision_limit = Number(load_default=None, allow_none=True, above=0)
    replicates = Count(load_default=3, least=1)
    programme = fields.Dict(load_default=None, allow_none=True)


class LearnSchema(Strict):
    """What ``learn`` reads."""

    points = fields.List(fields.Nested(PointSchema), required=True)


class BacktestSchema(Strict):
    """What ``backtest`` reads."""

    points = fields.List(fields.Nested(PointSchema), required=True)
    ranges = Ranges(required=True)
    dilutions = fields.List(
        Number(least=1, most=1e6), required=True, validate=validate.Length(min=1, max=200)
    )
    first = Count(load_default=5, least=1)
    programme = fields.Dict(load_default=None, allow_none=True)
