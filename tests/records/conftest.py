"""A ledger on an empty store, with one person who holds every role."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest

from app.journal.kinds import ROLES
from app.journal.kinds.settings import DEFAULTS
from app.journal.store import Store
from app.records.change import find, get
from app.records.ledger import Answer, Ledger
from tests.tools import devices

NOW = datetime(2031, 6, 2, 9, 0, tzinfo=UTC)


class Desk:
    """A started programme, told entry by entry."""

    def __init__(self, store: Store) -> None:
        self.store = store
        self.ledger = Ledger(store, lambda: NOW)
        body = {"name": "P", "laboratory": "L", "zone": "America/Denver", "units": "metric", "example": False}
        self.ledger.state("programme.started", "programme", body | {"settings": DEFAULTS})
        self.ledger.state("person.added", "maren", {"name": "Maren", "roles": list(ROLES)})
        self.device = devices.Device("maren")

    def tell(self, *texts: str) -> list[Answer]:
        """Push texts of one device."""
        return self.ledger.push(texts, "maren", self.device.id, self.device.incarnation)

    def held(self, *texts: str) -> list[str | None]:
        """Push and return each entry's reason for being held, None where it is stored."""
        return [answer.hold.code if answer.hold else None for answer in self.tell(*texts)]

    def get(self, type_: str, id_: str) -> dict[str, Any]:
        """Return a record that must be there."""
        body = get(self.store.read(), type_, id_)
        assert body is not None, (type_, id_)
        return body

    def all(self, type_: str) -> list[dict[str, Any]]:
        """Return all records of a type."""
        return [body for _, body in find(self.store.read(), type_)]


@pytest.fixture
def desk(tmp_path: Path) -> Iterator[Desk]:
    """Start a programme."""
    store = Store(tmp_path / "store")
    yield Desk(store)
    store.close()


@pytest.fixture
def ready(desk: Desk) -> Desk:
    """Start a programme with its point, recipe and stores."""
    assert set(desk.held(*devices.setting_up(desk.device))) == {None}
    return desk
