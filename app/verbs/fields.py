"""Fields that the verbs share: strict numbers, times with an offset, days, zones.

JSON has one kind of number and no dates. A boolean, a text and a number too
large for double precision are no numbers here; a time without an offset is
ambiguous and refused.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from datetime import date, datetime
from typing import Any
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

from marshmallow import RAISE, Schema, ValidationError, fields

from app.errors import InputError, flatten

YEARS = range(1900, 3000)
WORDS = {
    "Missing data for required field.": "is missing",
    "Field may not be null.": "must not be null",
    "Not a valid list.": "must be a list",
    "Not a valid string.": "must be a text",
}


class Strict(Schema):
    """A schema that names unknown keys as errors."""

    class Meta:
        """Unknown keys are errors."""

        unknown = RAISE

    error_messages = {"unknown": "is not known here", "type": "must be an object"}  # noqa: RUF012


class Number(fields.Field[float]):
    """A finite JSON number, optionally above or from a bound on.

    Parameters
    ----------
    above, least, most : float, optional
        Strict lower bound, lower bound and upper bound.
    """

    def __init__(
        self,
        *,
        above: float | None = None,
        least: float | None = None,
        most: float | None = None,
        **kwargs: Any,
    ) -> None:
        super().__init__(**kwargs)
        self.above, self.least, self.most = above, least, most

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> float:
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            raise ValidationError("must be a number")
        try:
            number = float(value)
        except OverflowError:
            number = math.inf
        if not math.isfinite(number):
            raise ValidationError("must be a finite number")
        if self.above is not None and number <= self.above:
            raise ValidationError(f"must be above {self.above:g}")
        if self.least is not None and number < self.least:
            raise ValidationError(f"must be {self.least:g} or more")
        if self.most is not None and number > self.most:
            raise ValidationError(f"must be {self.most:g} or less")
        return number


class Count(fields.Field[int]):
    """A whole JSON number from ``least`` on."""

    def __init__(self, *, least: int = 0, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.least = least

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> int:
        if isinstance(value, bool) or not isinstance(value, int):
            raise ValidationError("must be a whole number")
        if value < self.least:
            raise ValidationError(f"must be {self.least} or more")
        return value


class Flag(fields.Field[bool]):
    """A JSON true or false, nothing else."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> bool:
        if not isinstance(value, bool):
            raise ValidationError("must be true or false")
        return value


class Moment(fields.Field[datetime]):
    """A time in RFC 3339 with its offset."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> datetime:
        try:
            moment = datetime.fromisoformat(value)
        except (TypeError, ValueError):
            raise ValidationError("must be a time such as 2031-01-12T09:00:00-06:00") from None
        if moment.utcoffset() is None:
            raise ValidationError("needs an offset, e.g. 2031-01-12T09:00:00-06:00")
        if moment.year not in YEARS:
            raise ValidationError("is not a plausible time")
        return moment


class Day(fields.Field[date]):
    """A day as ``YYYY-MM-DD``."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> date:
        try:
            day = date.fromisoformat(value)
            if len(value) != len("2031-06-30"):
                raise ValueError
        except (TypeError, ValueError):
            raise ValidationError("must be a day such as 2031-06-30") from None
        if day.year not in YEARS:
            raise ValidationError("is not a plausible day")
        return day


class Zone(fields.Field[ZoneInfo]):
    """A time zone by its IANA name."""

    def _deserialize(
        self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> ZoneInfo:
        if not isinstance(value, str):
            raise ValidationError("must be a zone such as America/Chicago")
        try:
            return ZoneInfo(value)
        except (ZoneInfoNotFoundError, ValueError, OSError):
            raise ValidationError("is not a known zone such as America/Chicago") from None


def load(schema: Schema, value: Any) -> dict[str, Any]:
    """Validate a decoded JSON value and name every bad field at once.

    Parameters
    ----------
    schema : marshmallow.Schema
        What is expected.
    value : any
        The decoded JSON.

    Returns
    -------
    dict
        The loaded values.

    Raises
    ------
    InputError
        With dotted paths.
    """
    try:
        loaded: dict[str, Any] = schema.load(value)
    except ValidationError as error:
        wrong = {path: [WORDS.get(m, m) for m in lines] for path, lines in flatten(error.messages).items()}
        raise InputError("Some of this cannot be used; nothing was calculated.", wrong) from None
    return loaded
