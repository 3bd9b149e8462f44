"""Three devices, a network that loses requests and answers, a server that is restarted at any moment.

Whatever happens: what was acknowledged is stored, what was made is stored or
still queued, nothing is stored twice, and a rebuild gives the same records.
"""

from __future__ import annotations

import json
import tempfile
from pathlib import Path
from typing import Any

from hypothesis import settings
from hypothesis import strategies as st
from hypothesis.stateful import RuleBasedStateMachine, initialize, invariant, rule

from app.journal import chain
from app.journal.kinds import ROLES
from app.journal.kinds.settings import DEFAULTS
from app.journal.store import Store
from app.records.ledger import Ledger
from app.records.rebuild import digest_of_records, rebuild
from tests.tools import devices
from tests.tools.devices import CODES, Device

TABLETS = st.integers(min_value=0, max_value=2)
FATES = st.sampled_from(["arrives", "request lost", "answer lost", "sent twice"])


class Exchange(RuleBasedStateMachine):
    """F14 to F18 and F26 in small: the exchange under every order of faults."""

    def __init__(self) -> None:
        super().__init__()
        self.folder = tempfile.TemporaryDirectory()
        self.store = Store(Path(self.folder.name))
        self.queues: list[list[str]] = [[], [], []]
        self.made: dict[str, str] = {}
        self.acknowledged: set[str] = set()
        self.count = 0

    @initialize()
    def begin(self) -> None:
        """Start the programme and its point."""
        ledger = Ledger(self.store)
        body: dict[str, Any] = {
            "name": "P",
            "laboratory": "L",
            "zone": "UTC",
            "units": "metric",
            "example": False,
        }
        ledger.state("programme.started", "programme", body | {"settings": DEFAULTS})
        ledger.state("person.added", "maren", {"name": "Maren", "roles": list(ROLES)})
        self.devices = [Device("maren") for _ in range(3)]
        for text in devices.setting_up(self.devices[0])[:3]:
            self._queue(0, text)

    def _queue(self, tablet: int, text: str) -> None:
        self.made[json.loads(text)["id"]] = text
        self.queues[tablet].append(text)

    @rule(tablet=TABLETS, code=st.integers(min_value=0, max_value=3), broken=st.booleans())
    def record(self, tablet: int, code: int, broken: bool) -> None:
        """Take a sample offline; some entries are invalid, some bottles are used twice."""
        self.count += 1
        changed = {"activity": "asleep"} if broken else {}
        self._queue(tablet, devices.sample(self.devices[tablet], f"s{self.count}", CODES[code], **changed))

    @rule(tablet=TABLETS, code=st.integers(min_value=0, max_value=3))
    def receive(self, tablet: int, code: int) -> None:
        """Receive a bottle, perhaps before anybody knows of its sample."""
        self._queue(tablet, devices.received(self.devices[tablet], CODES[code]))

    @rule(tablet=TABLETS, size=st.integers(min_value=1, max_value=4), fate=FATES)
    def push(self, tablet: int, size: int, fate: str) -> None:
        """Push some of the queue; the network decides."""
        device, batch = self.devices[tablet], self.queues[tablet][:size]
        if not batch or fate == "request lost":
            return
        ledger = Ledger(self.store)
        answers = ledger.push(batch, "maren", device.id, device.incarnation)
        if fate == "sent twice":
            again = ledger.push(batch, "maren", device.id, device.incarnation)
            assert [a.position for a in again] == [a.position for a in answers]
            assert {a.result for a in again} == {"duplicate"}
        if fate == "answer lost":
            return
        assert len(answers) == len(batch)
        self.acknowledged |= {answer.id for answer in answers}
        self.queues[tablet] = self.queues[tablet][len(batch) :]

    @rule()
    def restart(self) -> None:
        """The server goes and comes back."""
        self.store.close()
        self.store = Store(Path(self.folder.name))

    def _stored(self) -> list[str]:
        rows = self.store.read().execute("SELECT id, raw FROM journal WHERE device != 'server'").fetchall()
        for id_, raw in rows:
            assert raw.decode("utf-8") == self.made[id_]
        return [id_ for id_, _ in rows]

    @invariant()
    def nothing_is_lost_or_doubled(self) -> None:
        """Acknowledged is stored; made is stored or queued; once each."""
        stored = self._stored()
        assert len(stored) == len(set(stored))
        assert self.acknowledged <= set(stored)
        queued = {json.loads(text)["id"] for queue in self.queues for text in queue}
        assert set(self.made) == set(stored) | queued

    def teardown(self) -> None:
        """At the end the chain is whole and a rebuild agrees."""
        assert chain.first_bad(self.store.read()) is None
        before = digest_of_records(self.store.read())
        assert rebuild(self.store).after == before
        self.store.close()
        self.folder.cleanup()


Exchange.TestCase.settings = settings(max_examples=25, stateful_step_count=30, deadline=None)
TestExchange = Exchange.TestCase
