"""An application on an empty store, and a client that speaks as the browser does."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from contextlib import suppress
from pathlib import Path
from typing import Any

import pytest
from flask import Flask
from werkzeug.test import TestResponse

from app.web.factory import create_app
from tests.tools import devices

HEADERS = {"X-Weirbook": "1", "Sec-Fetch-Site": "same-origin"}
PASSWORD = "correct horse battery"
BASE = "https://localhost"


class Browser:
    """A client with cookies and the header that our own pages send."""

    def __init__(self, app: Flask) -> None:
        self.app = app
        self.client = app.test_client()

    def ask(self, method: str, path: str, given: Any = None, **options: Any) -> TestResponse:
        """Send one request."""
        options.setdefault("headers", HEADERS)
        options.setdefault("buffered", True)
        if given is not None:
            options["json"] = given
        return self.client.open(path, method=method, base_url=BASE, **options)

    def get(self, path: str, **options: Any) -> TestResponse:
        """Get something."""
        return self.ask("GET", path, **options)

    def start(self) -> str:
        """Start a programme; return the administrator's id."""
        answer = self.ask(
            "POST",
            "/api/start",
            {
                "programme": {"name": "Esker Valley", "laboratory": "Laboratory", "zone": "America/Denver"},
                "person": {"name": "Maren Ostby", "sign_in": "Maren", "password": PASSWORD},
            },
        )
        assert answer.status_code == 200, answer.text
        person: str = answer.get_json()["person"]["id"]
        return person

    def push(self, texts: list[str], **changed: Any) -> TestResponse:
        """Push entries as one device."""
        first: dict[str, Any] = {"device": "d", "incarnation": "i"}
        with suppress(ValueError, TypeError, IndexError, RecursionError):
            first = first | json.loads(texts[0])
        given = {
            "protocol": 1,
            "build": "test",
            "epoch": self.get("/api/state").get_json()["epoch"],
            "device": first["device"],
            "incarnation": first["incarnation"],
            "entries": texts,
        }
        return self.ask("POST", "/api/push", given | changed)

    def results(self, texts: list[str]) -> list[str]:
        """Push and return what became of each entry."""
        answer = self.push(texts)
        assert answer.status_code == 200, answer.text
        return [one["result"] for one in answer.get_json()["answers"]]

    def records(self) -> dict[tuple[str, str], Any]:
        """Pull everything."""
        epoch = self.get("/api/state").get_json()["epoch"]
        answer = self.get(f"/api/pull?epoch={epoch}&after=0&limit=2000").get_json()
        return {(one["type"], one["id"]): one["body"] for one in answer["records"]}


@pytest.fixture
def app(tmp_path: Path) -> Iterator[Flask]:
    """Make the application."""
    made = create_app(tmp_path / "store", fast_passwords=True)
    yield made
    made.extensions["weirbook"].store.close()


@pytest.fixture
def browser(app: Flask) -> Browser:
    """Open a browser that nobody has signed in on."""
    return Browser(app)


@pytest.fixture
def person(browser: Browser) -> str:
    """Start a programme in the browser."""
    return browser.start()


@pytest.fixture
def device(person: str) -> devices.Device:
    """Make a device of the administrator, who holds every role."""
    return devices.Device(person)


@pytest.fixture
def another(app: Flask) -> Callable[[], Browser]:
    """Open further browsers on the same application."""
    return lambda: Browser(app)
