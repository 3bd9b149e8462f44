"""Writes the golden texts of kinds that have none yet; an existing one is never touched.

``python -m tests.journal.golden`` tells a whole story to a store and keeps one
entry of each kind as it stands in the journal.
"""

from __future__ import annotations

import json
import tempfile
from pathlib import Path

from app.journal import chain
from app.journal.kinds import table
from app.journal.kinds.settings import DEFAULTS
from app.journal.store import Store
from app.scenarios import load
from tests.records.conftest import Desk
from tests.tools import devices

GOLDEN = Path(__file__).with_name("golden")


def _photo(device: devices.Device) -> dict[str, bytes]:
    """Return a photo, and the arrival of its picture."""
    of = {"type": "visit", "id": "0197b3b2-7c1e-7f60-8a51-2f6d1c0a4e12"}
    body = {"of": of, "taken_at": "2031-06-01T09:30:00-06:00", "caption": "the crest, from above"}
    photo = device.make("photo.taken", "0197b3b2-7c1e-7f60-8a51-2f6d1c0a4e13", body, blobs=["2" * 64])
    picture = {"size": 412_345, "media_type": "image/jpeg"}
    arrived = device.make("attachment.arrived", "2" * 64, picture)
    return {"photo.taken": photo.encode(), "attachment.arrived": arrived.encode()}


def texts() -> dict[str, bytes]:
    """Return one text of each kind."""
    found: dict[str, bytes] = {}
    with tempfile.TemporaryDirectory() as folder:
        store = Store(Path(folder) / "example")
        load(store)
        for row in chain.rows(store.read()):
            found.setdefault(json.loads(row.raw)["kind"], row.raw)
        store.close()
        store = Store(Path(folder) / "desk")
        desk, device = Desk(store), devices.Device("maren")
        body = {"name": "N", "roles": ["analyst"], "active": False}
        desk.ledger.state("person.changed", "maren", body)
        desk.ledger.state("settings.changed", "programme", {"settings": {"replicates": 2}, "reason": "trial"})
        failed = {"software": "weirbook 0.1.0", "what": "fit", "error": "hopeless", "fields": {}}
        desk.ledger.state("sum.failed", "curve", failed)
        for row in chain.rows(store.read()):
            found.setdefault(json.loads(row.raw)["kind"], row.raw)
        store.close()
    settled = {"decision": "set aside", "reason": "the label was wrong"}
    about = "0197b3b2-7c1e-7f60-8a51-2f6d1c0a4e11"
    found["entry.settled"] = device.make("entry.settled", about, settled).encode()
    found |= _photo(device)
    issued = {
        "number": "2031-0001",
        "result": "run-1:223D38",
        "sample": "sample-1",
        "digest": "0" * 64,
        "data_digest": "1" * 64,
        "meaning": "authorised",
        "issued_at": "2031-06-01T20:05:00+00:00",
        "software": "weirbook 0.1.0",
    }
    found["certificate.issued"] = device.make("certificate.issued", "2031-0001", issued).encode()
    return found


if __name__ == "__main__":
    GOLDEN.mkdir(exist_ok=True)
    made = texts()
    for kind in sorted(set(table()) & set(made)):
        path = GOLDEN / f"{kind}.{table()[kind].version}.json"
        if not path.exists():
            path.write_bytes(made[kind])
    print("missing:", sorted(set(table()) - set(made)), "settings:", len(DEFAULTS))
