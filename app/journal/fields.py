"""Fields of entries: texts kept as they came, checked for what they must say."""

from __future__ import annotations

import re
from collections.abc import Mapping
from datetime import date, datetime
from typing import Any

from marshmallow import RAISE, Schema, ValidationError, fields

from app.errors import InputError
from app.journal import measured, units

_ID = re.compile(r"[A-Za-z0-9:._-]{1,80}")


class Id(fields.String):
    """Something's identity: 1 to 80 letters, digits, ``:``, ``.``, ``_`` or ``-``."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        text: str = super()._deserialize(value, attr, data, **kwargs)
        if not _ID.fullmatch(text):
            raise ValidationError("Not an identity that Weirbook gives.")
        return text


class Text(fields.String):
    """Words of a person, up to ``longest`` characters; blank only where it is allowed."""

    def __init__(self, longest: int = 200, blank: bool = False, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.longest = longest
        self.blank = blank

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        text: str = super()._deserialize(value, attr, data, **kwargs)
        if not self.blank and not text.strip():
            raise ValidationError("Must not be blank.")
        if len(text) > self.longest:
            raise ValidationError(f"Longer than {self.longest} characters.")
        return text


class When(fields.String):
    """A moment: RFC 3339 with its offset from UTC; kept as the text that came."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        text: str = super()._deserialize(value, attr, data, **kwargs)
        try:
            moment = datetime.fromisoformat(text)
        except ValueError:
            raise ValidationError("Not a date and time such as 2031-06-01T14:05:00-06:00.") from None
        if moment.tzinfo is None:
            raise ValidationError("A time needs its offset from UTC, such as -06:00.")
        return text


class Day(fields.String):
    """A day, as 2031-06-01."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        text: str = super()._deserialize(value, attr, data, **kwargs)
        try:
            date.fromisoformat(text)
        except ValueError:
            raise ValidationError("Not a day such as 2031-06-01.") from None
        return text


class Number(fields.String):
    """A typed number within bounds; kept as typed, a bound sign only where allowed."""

    def __init__(
        self, low: float | None = None, high: float | None = None, bounds: bool = False, **kwargs: Any
    ) -> None:
        super().__init__(**kwargs)
        self.low, self.high, self.bounds = low, high, bounds

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        text: str = super()._deserialize(value, attr, data, **kwargs)
        self.check(text)
        return text

    def check(self, text: str) -> measured.Reading:
        """Read the text and hold it to the bounds."""
        try:
            reading = measured.read(text)
        except InputError as error:
            raise ValidationError(error.message) from None
        if reading.sign != "=" and not self.bounds:
            raise ValidationError("A number is needed here, not a bound.")
        if self.low is not None and reading.value < self.low:
            raise ValidationError(f"Must not be below {self.low:g}.")
        if self.high is not None and reading.value > self.high:
            raise ValidationError(f"Must not be above {self.high:g}.")
        return reading


class MeasuredSchema(Schema):
    """A measured value: the text that was typed and its unit."""

    class Meta:
        """An unknown key is an error."""

        unknown = RAISE

    text = fields.String(required=True)
    unit = fields.String(required=True)


class Measured(fields.Nested):
    """A measured value of one quantity; its bounds are in the quantity's base unit."""

    def __init__(
        self,
        quantity: str,
        low: float | None = None,
        high: float | None = None,
        bounds: bool = False,
        **kwargs: Any,
    ) -> None:
        super().__init__(MeasuredSchema, **kwargs)
        self.quantity = quantity
        self.number = Number(bounds=bounds)
        self.low, self.high = low, high

    def _deserialize(
        self,
        value: Any,
        attr: str | None,
        data: Mapping[str, Any] | None,
        partial: Any = None,
        **kwargs: Any,
    ) -> Any:
        given = super()._deserialize(value, attr, data, partial, **kwargs)
        reading = self.number.check(given["text"])
        try:
            if units.quantity(given["unit"]) != self.quantity:
                raise ValidationError(f"{given['unit']} is no unit of {self.quantity}.")
        except InputError as error:
            raise ValidationError(error.message) from None
        self._in_bounds(reading.value, given["unit"])
        return given

    def _in_bounds(self, number: float, unit: str) -> None:
        one = units.table()[unit]
        base = number * float(one["factor"]) + float(one.get("offset", 0))
        if (self.low is not None and base < self.low) or (self.high is not None and base > self.high):
            low = "" if self.low is None else f" from {self.low:g}"
            high = "" if self.high is None else f" up to {self.high:g}"
            raise ValidationError(f"Not a possible {self.quantity}: expected{low}{high}.")
