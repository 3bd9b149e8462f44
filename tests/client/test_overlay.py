"""What a tablet shows of its own unsent entries is what the server will say of them."""

from __future__ import annotations

import json
import shutil
import subprocess
from pathlib import Path
from typing import Any

import pytest

from app.web.factory import create_app
from tests.client import bottle

SCRIPT = Path(__file__).with_name("overlay.mjs")
UNITS = json.loads((Path(__file__).parents[2] / "static" / "units.json").read_text(encoding="utf-8"))
HEADERS = {"X-Weirbook": "1"}
DEVICE = {"device": bottle.DEVICE, "incarnation": bottle.INCARNATION}

# Known on the server alone: its own sums, and the holding time by the rule of the programme's zone.
ONLY_THE_SERVER = {
    "recipe": {"derived"},
    "calibration": {"fitted", "due"},
    "sample": {"hold_until"},
    "meter": {"samples"},
    "container": {"clock"},
    "study": {"gaps", "plan"},
}
# What a flow and a check amount to is worked out beside them on the tablet, and stated by the server.
WORKED_OUT = {
    "visit": ("flows", {"status", "l_s", "rating", "words", "error_percent", "volume_l", "meter_percent"}),
    "meter": ("checks", {"ok", "words"}),
    "calibration": ("checks", {"judged"}),
    "instrument": ("checks", {"ok", "words"}),
}
TYPES = (
    "round",
    "visit",
    "sampler",
    "meter",
    "discharger",
    "point",
    "recipe",
    "lot",
    "instrument",
    "container",
    "calibration",
    "sample",
    "bottle",
    "run",
    "interferents",
    "study",
)


class Place:
    """A server in this process, with one person who holds all roles."""

    def __init__(self, folder: Path) -> None:
        self.client = create_app(folder, fast_passwords=True).test_client()
        programme = {"name": "Valley", "laboratory": "Valley laboratory", "zone": "America/Chicago"}
        person = {"name": "Mara", "sign_in": "mara", "password": "correct horse battery"}
        answer = self.client.post(
            "/api/start", json={"programme": programme, "person": person}, headers=HEADERS
        )
        self.state: dict[str, Any] = answer.get_json()
        assert answer.status_code == 200, self.state

    def push(self, texts: list[str]) -> list[dict[str, Any]]:
        """Push a device's entries and return the answers."""
        given = {"protocol": 1, "build": "test", "epoch": self.state["epoch"], **DEVICE, "entries": texts}
        answer = self.client.post("/api/push", json=given, headers=HEADERS)
        assert answer.status_code == 200, answer.get_json()
        found: list[dict[str, Any]] = answer.get_json()["answers"]
        return found

    def records(self) -> list[dict[str, Any]]:
        """Pull every record."""
        query = f"/api/pull?epoch={self.state['epoch']}&after=0&limit=2000"
        found: list[dict[str, Any]] = self.client.get(query, headers=HEADERS).get_json()["records"]
        return found


def compared(records: list[dict[str, Any]]) -> dict[str, Any]:
    """Return what both sides must agree on, by type and id."""
    found = {}
    for record in records:
        if record["type"] in TYPES:
            hidden = ONLY_THE_SERVER.get(record["type"], set())
            body = {name: value for name, value in record["body"].items() if name not in hidden}
            rows, extra = WORKED_OUT.get(record["type"], ("", set()))
            if rows:
                body[rows] = [{k: v for k, v in row.items() if k not in extra} for row in body[rows]]
            found[f"{record['type']} {record['id']}"] = {"parent": record["parent"], "body": body}
    return found


def test_the_tablet_shows_what_the_server_will_say(tmp_path: Path) -> None:
    """Every kind that the overlay knows, through the server's handlers and through the tablet's."""
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the tablet's view is not compared with the server's records")
    place = Place(tmp_path)
    before = place.records()
    texts = bottle.texts(place.state["person"]["id"])
    given = json.dumps({"records": before, "texts": texts, "units": UNITS})
    run = subprocess.run(
        [node, "--no-warnings", str(SCRIPT)], input=given, capture_output=True, text=True, check=True
    )
    shown = json.loads(run.stdout)
    answers = place.push(texts)
    assert {one["result"] for one in answers} == {"stored"}, [
        one for one in answers if one["result"] != "stored"
    ]
    assert shown["untouched"], "the overlay changed the server's records"
    here, there = compared(shown["records"]), compared(place.records())
    assert sorted(here) == sorted(there)
    for name in there:
        assert here[name] == there[name], name
