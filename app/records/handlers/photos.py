"""Photos and their bytes, which may arrive in either order."""

from __future__ import annotations

from app.records.change import Change, Refused
from app.records.handlers import handles


@handles("photo.taken")
def photo_taken(change: Change) -> None:
    """A photo of something; without bytes it says that there was no room for them."""
    if change.get("photo", change.entry.about):
        raise Refused("already_stated", "This photo was stated before.")
    if len(change.entry.blobs) > 1:
        raise Refused("invalid", "A photo has one picture.", {"blobs": ["more than one"]})
    of = change.body["of"]
    change.need(of["type"], of["id"])
    digest = change.entry.blobs[0] if change.entry.blobs else None
    arrived = digest and change.get("attachment", digest)
    body = {
        **change.body,
        "digest": digest,
        "arrived": bool(arrived),
        "by": change.entry.by,
        "by_name": change.name_of(change.entry.by),
    }
    change.put("photo", change.entry.about, body, parent=of["id"], at=change.body["taken_at"])
    if digest and not arrived:
        waiting = change.get("attachment_awaited", digest) or {"photos": []}
        photos = [*waiting["photos"], change.entry.about]
        change.put("attachment_awaited", digest, {"photos": photos}, at=change.entry.at)


@handles("attachment.arrived")
def attachment_arrived(change: Change) -> None:
    """The bytes are whole; the photos that wait for them show them."""
    digest = change.entry.about
    change.put("attachment", digest, change.body, at=change.entry.at)
    waiting = change.get("attachment_awaited", digest)
    if waiting is None:
        return
    for id_ in waiting["photos"]:
        photo = change.need("photo", id_)
        change.update("photo", id_, photo | {"arrived": True})
    change.put("attachment_awaited", digest, None)
