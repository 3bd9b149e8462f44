"""The journal: pushes beside the bare limit of the same bytes, a rebuild, a pull, all in one run.

The bare limit is what nobody can do without: parsing the same texts, the same
marshmallow validation, and one raw sqlite3 insert of the same bytes in one
FULL transaction.
"""

from __future__ import annotations

import json
import sqlite3
import statistics
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path

from app.journal import chain, kinds
from app.journal.entry import Envelope
from app.journal.kinds import ROLES
from app.journal.kinds.settings import DEFAULTS
from app.journal.store import Store
from app.records.ledger import Ledger
from app.records.pull import page
from app.records.rebuild import rebuild
from tests.bench.measure import Measure
from tests.tools import devices

BATCH, BATCHES = 100, 20


def _started(folder: Path) -> tuple[Store, Ledger, devices.Device]:
    store = Store(folder)
    ledger = Ledger(store)
    body = {"name": "P", "laboratory": "L", "zone": "UTC", "units": "metric", "example": False}
    ledger.state("programme.started", "programme", body | {"settings": DEFAULTS})
    ledger.state("person.added", "maren", {"name": "Maren", "roles": list(ROLES)})
    device = devices.Device("maren")
    ledger.push(devices.setting_up(device), "maren", device.id, device.incarnation)
    return store, ledger, device


def _bare(connection: sqlite3.Connection, texts: list[str]) -> None:
    envelope = Envelope()
    rows = []
    for text in texts:
        entry = json.loads(text)
        envelope.load(entry)
        kinds.check(entry["kind"], entry["body"])
        rows.append((entry["id"], text))
    connection.execute("BEGIN IMMEDIATE")
    connection.executemany("INSERT INTO bare VALUES (?, ?)", rows)
    connection.commit()


def _batches(device: devices.Device) -> list[list[str]]:
    made = iter(range(10**6))
    return [
        [devices.received(device, devices.CODES[next(made) % 30]) for _ in range(BATCH)]
        for _ in range(BATCHES)
    ]


def measures() -> Iterator[Measure]:
    """Push two thousand entries, each batch beside the bare limit; rebuild and pull what they made."""
    with tempfile.TemporaryDirectory() as folder:
        store, ledger, device = _started(Path(folder) / "store")
        bare = sqlite3.connect(Path(folder) / "bare.db")
        bare.executescript(
            "pragma journal_mode=wal; pragma synchronous=full; CREATE TABLE bare (id TEXT, raw TEXT);"
        )
        ratios, seconds = [], 0.0
        for texts in _batches(device):
            began = time.perf_counter()
            _bare(bare, texts)
            limit = time.perf_counter() - began
            began = time.perf_counter()
            ledger.push(texts, "maren", device.id, device.incarnation)
            took = time.perf_counter() - began
            ratios.append(limit / took)
            seconds += took
        bare.close()
        yield Measure("push of 100 entries, share of the bare limit", statistics.median(ratios), 0.5, "")
        yield Measure("push, entries a second, one core", BATCH * BATCHES / seconds, 100, "a second")
        began = time.perf_counter()
        done = rebuild(store)
        rate = done.entries / (time.perf_counter() - began)
        if done.before != done.after or chain.first_bad(store.read()) is not None:
            raise RuntimeError("what was timed did not rebuild")
        yield Measure("rebuild of a million entries, at this rate", 1_000_000 / rate, 120, "s", False)
        began = time.perf_counter()
        count = len(page(store.read(), 0, 2000).records)
        yield Measure(
            "pull of 10,000 records, at this rate",
            10_000 / count * (time.perf_counter() - began),
            2,
            "s",
            False,
        )
        store.close()
