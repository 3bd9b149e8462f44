"""Photos: what they show, said in an entry; their bytes come apart from it."""

from __future__ import annotations

from marshmallow import fields, validate

from app.journal.fields import Id, Text, When
from app.journal.kinds import ANALYST, INSPECTOR, SERVER, Body, kind

#: What a photo may be of.
SUBJECTS = ("visit", "sample", "bottle", "run", "instrument", "container")


class Subject(Body):
    """The thing that a photo is of."""

    type = fields.String(required=True, validate=validate.OneOf(SUBJECTS))
    id = Id(required=True)


@kind("photo.taken", INSPECTOR, ANALYST)
class PhotoTaken(Body):
    """A photo of something; the entry names its bytes, or none where the device had no room for them."""

    of = fields.Nested(Subject, required=True)
    taken_at = When(required=True)
    caption = Text(required=True, blank=True)


@kind("attachment.arrived", SERVER)
class AttachmentArrived(Body):
    """All bytes of an attachment are on the server, with the digest they were announced under."""

    size = fields.Integer(required=True, strict=True)
    media_type = fields.String(required=True)
