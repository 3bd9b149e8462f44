"""Telling statements to a store as people and their devices would have made them."""

from __future__ import annotations

import hashlib
import json
import uuid
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import datetime, timedelta
from typing import Any
from zoneinfo import ZoneInfo

from app.journal.identity import uuid7
from app.journal.kinds import table
from app.records.ledger import Answer, Writing

Body = dict[str, Any]


@dataclass
class Clock:
    """The story's clock: it stands at the moment that is being told."""

    end: datetime
    now: datetime = field(init=False)

    def __post_init__(self) -> None:
        """Begin at the end; every statement sets its own moment."""
        self.now = self.end

    def __call__(self) -> datetime:
        """Return the moment that is being told."""
        return self.now

    def set(self, hours: float) -> None:
        """Go to a moment, in hours from the end (negative before it)."""
        self.now = self.end + timedelta(hours=hours)


@dataclass
class Device:
    """An invented tablet: it numbers its entries and chains them."""

    id: str = field(default_factory=lambda: str(uuid.uuid4()))
    incarnation: str = field(default_factory=lambda: str(uuid.uuid4()))
    n: int = 0
    prev: str | None = None


class Teller:
    """Makes entries as each person's device would, and hands them to the one write path."""

    def __init__(self, writing: Writing, clock: Clock, zone: str) -> None:
        self._writing = writing
        self._clock = clock
        self._zone = zone
        self._local = ZoneInfo(zone)
        self._devices: dict[str, Device] = {}

    def tell(self, hours: float, by: str, kind: str, about: str, body: Body) -> Answer:
        """State one thing at a moment; moments inside the body are put in their place."""
        self._clock.set(hours)
        device = self._devices.setdefault(by, Device())
        device.n += 1
        at = self._clock.now.astimezone(self._local)
        entry = {
            "id": uuid7(int(at.timestamp() * 1000)),
            "device": device.id,
            "incarnation": device.incarnation,
            "n": device.n,
            "prev": device.prev,
            "kind": kind,
            "version": table()[kind].version,
            "about": about,
            "at": at.isoformat(timespec="seconds"),
            "zone": self._zone,
            "skew_ms": 0,
            "by": by,
            "base": self._writing.head.position,
            "body": placed(body, self._moment),
            "blobs": [],
        }
        raw = json.dumps(entry, ensure_ascii=False, separators=(",", ":")).encode("utf-8")
        device.prev = hashlib.sha256(raw).hexdigest()
        return self._writing.take(raw, by, device.id, device.incarnation)

    def _moment(self, text: str) -> str:
        if text.startswith("@day"):
            days = timedelta(days=float(text.removeprefix("@day")))
            return (self._clock.end.astimezone(self._local) + days).date().isoformat()
        moment = self._clock.end + timedelta(hours=float(text.removeprefix("@")))
        return moment.astimezone(self._local).isoformat(timespec="seconds")


def placed(value: Any, moment: Callable[[str], str]) -> Any:
    """Return a value with each text that begins with ``@`` replaced by its moment."""
    if isinstance(value, dict):
        return {name: placed(one, moment) for name, one in value.items()}
    if isinstance(value, list):
        return [placed(one, moment) for one in value]
    return moment(value) if isinstance(value, str) and value.startswith("@") else value
