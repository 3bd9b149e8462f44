"""Push and pull over HTTP: each entry is answered, nothing is dropped, nothing is counted twice."""

from __future__ import annotations

import hashlib
import json
from typing import Any

import pytest
from flask import Flask

from app import __version__
from tests.tools import devices
from tests.tools.devices import CODES, Device
from tests.web.conftest import Browser
from tests.web.test_errors_and_headers import assert_canonical


def test_a_retry_is_answered_duplicate_with_the_same_position(browser: Browser, device: Device) -> None:
    """F13: the answer was lost after the commit."""
    texts = devices.setting_up(device)
    first = browser.push(texts).get_json()["answers"]
    again = browser.push(texts).get_json()["answers"]
    assert {one["result"] for one in first} == {"stored"}
    assert {one["result"] for one in again} == {"duplicate"}
    assert [one["position"] for one in first] == [one["position"] for one in again]


def test_a_batch_is_acknowledged_with_the_digest_of_what_came(browser: Browser, device: Device) -> None:
    """F20: a captive portal's page cannot echo it."""
    texts = devices.setting_up(device)
    answer = browser.push(texts).get_json()
    assert answer["weirbook"] == __version__
    assert answer["digest"] == hashlib.sha256("".join(texts).encode()).hexdigest()
    assert answer["expect_n"] == len(texts) + 1


@pytest.mark.parametrize(
    "poison", ["", "{", "null", "[]", '"x"', "{}", '{"id": 1}', "\ud800", "0" * 300_000, "[" * 3000]
)
def test_a_poison_entry_at_the_head_is_held_and_the_others_pass(
    browser: Browser, device: Device, poison: str
) -> None:
    """F15, F16."""
    texts = devices.setting_up(device)
    answer = browser.push([poison, *texts], device=device.id, incarnation=device.incarnation)
    results = [one["result"] for one in answer.get_json()["answers"]]
    assert results == ["held", *["stored"] * len(texts)]
    held = [body for (kind, _), body in browser.records().items() if kind == "held"]
    assert [(one["code"], one["state"]) for one in held] == [("unreadable", "held")]
    again = browser.push([poison], device=device.id, incarnation=device.incarnation).get_json()["answers"]
    assert [(one["result"], one["code"]) for one in again] == [("duplicate", "unreadable")]


def test_an_invalid_body_is_held_with_every_bad_field(browser: Browser, device: Device) -> None:
    assert set(browser.results(devices.setting_up(device))) == {"stored"}
    text = devices.sample(device, "s", "AAAAAC", activity="asleep", collected_at="2031-05-29T08:00:00")
    (answer,) = browser.push([text]).get_json()["answers"]
    assert answer["result"] == "held"
    assert answer["code"] == "invalid"
    assert set(answer["fields"]) == {"bottle", "activity", "collected_at"}


def test_the_same_id_with_other_content_is_held(browser: Browser, device: Device) -> None:
    """F49."""
    first = devices.setting_up(device)[0]
    changed = json.loads(first)
    changed["body"]["name"] = "Another name"
    assert browser.results([first]) == ["stored"]
    (answer,) = browser.push([json.dumps(changed)]).get_json()["answers"]
    assert (answer["result"], answer["code"]) == ("held", "id_conflict")
    assert browser.records()["discharger", "hollin"]["name"] == "Hollin Vale Creamery"


def test_a_copied_device_is_a_fork_and_both_streams_are_kept(browser: Browser, device: Device) -> None:
    """F47."""
    twin = Device(device.by, id=device.id, incarnation=device.incarnation)
    assert browser.results(devices.setting_up(device)[:1]) == ["stored"]
    first_of_twin = twin.make("discharger.registered", "other", {"name": "B", "sector": None, "address": ""})
    (answer,) = browser.push([first_of_twin]).get_json()["answers"]
    assert (answer["result"], answer["code"]) == ("held", "device_fork")
    texts = {body["text"] for (kind, _), body in browser.records().items() if kind == "held"}
    assert texts == {first_of_twin}


def test_a_gap_in_a_devices_numbers_is_told(browser: Browser, device: Device) -> None:
    """F31, as the device sees it: expect_n is the first number that did not arrive."""
    texts = devices.setting_up(device)
    assert browser.push([texts[0], texts[2]]).get_json()["expect_n"] == 2
    assert browser.push([texts[1]]).get_json()["expect_n"] == 4


@pytest.mark.parametrize(
    ("kind", "version", "code"),
    [
        ("moon.landed", 1, "unknown_kind"),
        ("discharger.registered", 99, "newer_version"),
        ("person.added", 1, "not_permitted"),
        ("run.calculated", 1, "not_permitted"),
        ("certificate.issued", 1, "not_permitted"),
    ],
)
def test_what_the_server_does_not_take_is_held_by_its_reason(
    browser: Browser, device: Device, kind: str, version: int, code: str
) -> None:
    """F51 from the server's side; the kinds that only the server states cannot be pushed."""
    text = device.make(kind, "x", {}, version=version)
    (answer,) = browser.push([text]).get_json()["answers"]
    assert (answer["result"], answer["code"]) == ("held", code)


def test_an_entry_of_an_unknown_person_is_held(browser: Browser, person: str) -> None:
    stranger = Device("nobody-we-know")
    (answer,) = browser.push(devices.setting_up(stranger)[:1]).get_json()["answers"]
    assert (answer["result"], answer["code"]) == ("held", "unknown_person")


def test_the_author_stays_whoever_carries(app: Flask, browser: Browser, device: Device) -> None:
    """F60: another person signs in on the tablet; author and carrier are kept apart."""
    given = {"name": "Rowan", "sign_in": "rowan", "password": "correct horse battery", "roles": ["inspector"]}
    carrier = browser.ask("POST", "/api/people", given).get_json()["person"]
    texts = devices.setting_up(device)[:1]
    browser.ask("POST", "/api/session", {"sign_in": "rowan", "password": "correct horse battery"})
    assert browser.results(texts) == ["stored"]
    row = (
        app.extensions["weirbook"]
        .store.read()
        .execute("SELECT author, carrier FROM journal ORDER BY position DESC LIMIT 1")
        .fetchone()
    )
    assert row == (device.by, carrier)


def test_the_gates_of_the_protocol_blame_the_right_side(browser: Browser, person: str) -> None:
    assert_canonical(browser.push([], protocol=0), 426, "client_too_old")
    assert_canonical(browser.push([], protocol=2), 409, "server_too_old")


def test_a_cursor_of_another_state_begins_anew(browser: Browser, person: str) -> None:
    assert_canonical(browser.get("/api/pull?epoch=other&after=0"), 409, "reset")
    assert_canonical(browser.get("/api/pull?epoch=x&after=-1"), 422)
    assert_canonical(browser.get("/api/pull"), 422)


@pytest.mark.parametrize("limit", [1, 2, 3, 7, 1000])
def test_pages_neither_skip_nor_repeat(browser: Browser, device: Device, limit: int) -> None:
    """F30, F37, F44: whatever the page's size, the pages add up to all records, once each."""
    browser.push(devices.whole_path(device.by))
    epoch = browser.get("/api/state").get_json()["epoch"]
    after, more, seen = 0, True, []
    while more:
        page = browser.get(f"/api/pull?epoch={epoch}&after={after}&limit={limit}").get_json()
        seen += [(one["type"], one["id"]) for one in page["records"]]
        assert page["next"] > after or not page["more"]
        after, more = page["next"], page["more"]
    assert len(seen) == len(set(seen))
    assert set(seen) == set(browser.records())
    empty = browser.get(f"/api/pull?epoch={epoch}&after={after}&limit={limit}").get_json()
    assert (empty["records"], empty["next"], empty["more"]) == ([], after, False)


def test_typed_texts_come_back_as_they_were_typed(browser: Browser, device: Device) -> None:
    """The store, the journal and the answer hold the text."""
    browser.push(devices.setting_up(device))
    typed = ["1,5", "< 0.5", "1.50", "-0.0", "1e3", "0012", "9007199254740993"]
    for i, text in enumerate(typed):
        field: dict[str, Any] = {"turbidity_ntu": devices.measured(text, "NTU")}
        browser.push([devices.sample(device, f"s{i}", CODES[i], field=field)])
    records = browser.records()
    kept = [body["field"] for (kind, _), body in records.items() if kind == "sample"]
    held = [
        json.loads(body["text"])["body"]["field"] for (kind, _), body in records.items() if kind == "held"
    ]
    assert sorted(field["turbidity_ntu"]["text"] for field in kept + held) == sorted(typed)


def test_a_tablets_file_is_held_under_its_author_with_its_carrier(
    app: Flask, browser: Browser, device: Device
) -> None:
    """What is brought in a file is not in force until a coordinator says so; bytes and author stay."""
    texts = devices.setting_up(device)
    answers = browser.ask("POST", "/api/tablet-file", {"entries": texts}).get_json()["answers"]
    assert {(one["result"], one["code"]) for one in answers} == {("held", "from_file")}
    held = [body for (kind, _), body in browser.records().items() if kind == "held"]
    assert sorted(one["text"] for one in held) == sorted(texts)
    assert {(one["by"], one["carrier"]) for one in held} == {(device.by, device.by)}
    assert not any(kind == "point" for kind, _ in browser.records())
    again = browser.ask("POST", "/api/tablet-file", {"entries": texts}).get_json()["answers"]
    assert {one["result"] for one in again} == {"duplicate"}
    stranger = Browser(app).ask("POST", "/api/tablet-file", {"entries": texts})
    assert stranger.status_code == 401
