"""A server that is killed at any moment has stored whatever it acknowledged."""

from __future__ import annotations

import http.client
import http.cookiejar
import json
import threading
import urllib.request
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from app.journal import chain
from app.journal.store import Store
from tests.browser.server import Server, free_port
from tests.tools import devices
from tests.tools.devices import Device
from tests.web.conftest import PASSWORD

ROUNDS = 4


class Sender:
    """A device that pushes as fast as it can and remembers what was acknowledged."""

    def __init__(self, url: str) -> None:
        self.url = url
        policy = http.cookiejar.DefaultCookiePolicy(secure_protocols=("http", "https"))
        jar = http.cookiejar.CookieJar(policy)
        self.opener = urllib.request.build_opener(urllib.request.HTTPCookieProcessor(jar))
        self.acknowledged: list[str] = []
        self.count = 0

    def ask(self, path: str, given: Any = None) -> Any:
        """Send one request."""
        headers = {"X-Weirbook": "1", "Content-Type": "application/json"}
        data = None if given is None else json.dumps(given).encode()
        request = urllib.request.Request(self.url + path, data=data, headers=headers)
        with self.opener.open(request, timeout=10) as answer:
            return json.loads(answer.read())

    def until_it_dies(self, device: Device, epoch: str) -> None:
        """Push single entries until the server is gone."""
        common = {
            "protocol": 1,
            "build": "t",
            "epoch": epoch,
            "device": device.id,
            "incarnation": device.incarnation,
        }
        try:
            while True:
                self.count += 1
                body = {"name": f"Firm {self.count}", "sector": None, "address": ""}
                texts = [device.make("discharger.registered", f"f{self.count}", body)]
                told = self.ask("/api/push", common | {"entries": texts})
                self.acknowledged += [one["id"] for one in told["answers"]]
        except (OSError, http.client.HTTPException, ValueError):
            return


@pytest.fixture
def server(tmp_path: Path) -> Iterator[Server]:
    one = Server(tmp_path / "store", free_port(), tmp_path / "server.log")
    one.start()
    yield one
    one.stop()


@pytest.mark.faults
def test_acknowledged_is_stored_however_often_the_server_is_killed(server: Server) -> None:
    """F26: SIGKILL at moments nobody chose; acknowledged entries are all there, the chain is whole."""
    sender = Sender(server.url)
    start = {
        "programme": {"name": "P", "laboratory": "L", "zone": "UTC"},
        "person": {"name": "N", "sign_in": "n", "password": PASSWORD},
    }
    state = sender.ask("/api/start", start)
    device = devices.Device(state["person"]["id"])
    for round_ in range(ROUNDS):
        thread = threading.Thread(target=sender.until_it_dies, args=(device, state["epoch"]))
        thread.start()
        enough = len(sender.acknowledged) + 15 + 20 * round_
        while len(sender.acknowledged) < enough and thread.is_alive():
            thread.join(0.005)
        server.kill()
        thread.join()
        server.start()
    server.stop()
    store = Store(server.store)
    stored = {row[0] for row in store.read().execute("SELECT id FROM journal").fetchall()}
    assert len(sender.acknowledged) >= 60
    assert set(sender.acknowledged) <= stored
    assert chain.first_bad(store.read()) is None
    store.close()
    server.start()
