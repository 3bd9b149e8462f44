"""The envelope of an entry: who stated what about which thing, when and on which device."""

from __future__ import annotations

import hashlib
import json
from dataclasses import dataclass
from typing import Any

from marshmallow import RAISE, Schema, ValidationError, fields, validate

from app.errors import InputError, flatten
from app.journal.fields import Id, When

MAX_TEXT_BYTES = 256 * 1024


def digest(data: bytes) -> str:
    """Return the SHA-256 of some bytes in hexadecimal."""
    return hashlib.sha256(data).hexdigest()


class Envelope(Schema):
    """What every entry carries, whatever its kind."""

    class Meta:
        """An unknown key is an error."""

        unknown = RAISE

    id = fields.UUID(required=True)
    device = Id(required=True)
    incarnation = Id(required=True)
    n = fields.Integer(required=True, strict=True, validate=validate.Range(min=1, max=2**53))
    prev = fields.String(required=True, allow_none=True, validate=validate.Regexp(r"^[0-9a-f]{64}$"))
    kind = fields.String(required=True, validate=validate.Regexp(r"^[a-z]+(\.[a-z_]+)+$"))
    version = fields.Integer(required=True, strict=True, validate=validate.Range(min=1, max=10_000))
    about = Id(required=True)
    at = When(required=True)
    zone = fields.String(required=True, validate=validate.Length(max=64))
    skew_ms = fields.Integer(required=True, allow_none=True, strict=True)
    by = Id(required=True)
    base = fields.Integer(required=True, strict=True, validate=validate.Range(min=0, max=2**53))
    body = fields.Dict(keys=fields.String(), required=True)
    blobs = fields.List(fields.String(validate=validate.Regexp(r"^[0-9a-f]{64}$")), required=True)


_ENVELOPE = Envelope()


@dataclass(frozen=True)
class Entry:
    """One statement, as it was received.

    Attributes
    ----------
    raw : bytes
        The received text; what the chain's digest covers.
    blobs : tuple of str
        SHA-256 of each attachment that it names; they come apart from it.
    """

    id: str
    device: str
    incarnation: str
    n: int
    prev: str | None
    kind: str
    version: int
    about: str
    at: str
    zone: str
    by: str
    base: int
    body: dict[str, Any]
    raw: bytes
    blobs: tuple[str, ...] = ()

    @property
    def raw_digest(self) -> str:
        """SHA-256 of the received text; the device's next entry names it as ``prev``."""
        return digest(self.raw)


def _decode(raw: bytes) -> Any:
    def refuse(name: str) -> None:
        raise ValueError(f"{name} is not a number")

    try:
        given = json.loads(raw, parse_constant=refuse)
        if b"\\ud" in raw.lower():  # half of a surrogate pair is no text: it could not be stored or shown
            json.dumps(given, ensure_ascii=False).encode("utf-8")
    except (ValueError, RecursionError) as error:
        raise InputError(f"This entry cannot be read: {error}.", {"entry": [str(error)]}) from None
    return given


def parse(raw: bytes) -> Entry:
    """Read an entry from the text that a device made.

    Raises
    ------
    InputError
        If the text is no entry; every bad field is named.
    """
    if len(raw) > MAX_TEXT_BYTES:
        raise InputError("This entry is larger than 256 KiB.", {"entry": ["too large"]})
    given = _decode(raw)
    try:
        _ENVELOPE.load(given)
    except ValidationError as error:
        raise InputError("This entry's envelope is not complete.", flatten(error.messages)) from None
    return _entry(given, raw)


def reopen(raw: bytes) -> Entry:
    """Read an entry that was accepted before, without checking it again."""
    return _entry(json.loads(raw), raw)


def _entry(given: dict[str, Any], raw: bytes) -> Entry:
    names = (
        "id",
        "device",
        "incarnation",
        "n",
        "prev",
        "kind",
        "version",
        "about",
        "at",
        "zone",
        "by",
        "base",
    )
    told = {name: given[name] for name in names}
    return Entry(**told, body=given["body"], raw=raw, blobs=tuple(given.get("blobs", ())))
