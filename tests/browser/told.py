"""A server with a programme and one bottle's story, told through the API as a device would."""

from __future__ import annotations

import json
from typing import Any

from playwright.sync_api import APIRequestContext, BrowserContext

from tests.tools import devices

HEADERS = {"X-Weirbook": "1", "Content-Type": "application/json"}
PASSWORD = "correct horse battery"
START = {
    "programme": {
        "name": "Esker Valley Sewer Authority",
        "laboratory": "Esker Valley Laboratory",
        "zone": "America/Denver",
    },
    "person": {"name": "Maren Ostby", "sign_in": "maren", "password": PASSWORD},
}


def start_programme(request: APIRequestContext) -> dict[str, Any]:
    """Start a programme; the context is signed in as its first administrator."""
    answer = request.post("/api/start", headers=HEADERS, data=START)
    assert answer.ok, answer.text()
    state: dict[str, Any] = answer.json()
    return state


def push(request: APIRequestContext, texts: list[str]) -> list[dict[str, Any]]:
    """Push entries of one device and return the answers."""
    state, first = request.get("/api/state").json(), json.loads(texts[0])
    given = {
        "protocol": 1,
        "build": "test",
        "epoch": state["epoch"],
        "device": first["device"],
        "incarnation": first["incarnation"],
        "entries": texts,
    }
    answer = request.post("/api/push", headers=HEADERS, data=given)
    assert answer.ok, answer.text()
    answers: list[dict[str, Any]] = answer.json()["answers"]
    return answers


def set_up(context: BrowserContext) -> str:
    """Start a programme with its point, recipe and stores; return the person's id."""
    person: str = start_programme(context.request)["person"]["id"]
    answers = push(context.request, devices.setting_up(devices.Device(person)))
    assert {one["result"] for one in answers} == {"stored"}
    return person


def tell_everything(context: BrowserContext) -> str:
    """Start a programme and tell one bottle's whole way to the accepted result; return the person's id."""
    person: str = start_programme(context.request)["person"]["id"]
    for texts in (devices.whole_path(person), devices.visiting(person)):
        answers = push(context.request, texts)
        assert {one["result"] for one in answers} == {"stored"}, answers
    return person
