"""Photos in parts: kept as they come, whole only with their digest, shown only when whole."""

from __future__ import annotations

import hashlib
import random
from typing import Any

import pytest
from flask import Flask
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from werkzeug.test import TestResponse

from app.journal import attachments
from app.records.rebuild import digest_of_records, rebuild
from tests.tools import devices
from tests.tools.devices import Device
from tests.web.conftest import HEADERS, Browser
from tests.web.test_errors_and_headers import assert_canonical

JPEG = b"\xff\xd8\xff" + random.Random(5).randbytes(300_000)


def digest(data: bytes) -> str:
    return hashlib.sha256(data).hexdigest()


def put(browser: Browser, name: str, at: int, data: bytes, size: int) -> TestResponse:
    headers = HEADERS | {"X-Offset": str(at), "X-Size": str(size), "Content-Type": "application/octet-stream"}
    return browser.ask("PUT", f"/api/blobs/{name}", data=data, headers=headers)


def head(browser: Browser, name: str) -> tuple[int, str]:
    answer = browser.ask("HEAD", f"/api/blobs/{name}")
    return int(answer.headers["X-Have"]), answer.headers["X-Complete"]


def photo(device: Device, id_: str, blobs: list[str], of: tuple[str, str] = ("sample", "s")) -> str:
    body: dict[str, Any] = {"of": {"type": of[0], "id": of[1]}, "caption": "the crest, from above"}
    return device.make("photo.taken", id_, body | {"taken_at": "2031-06-01T09:30:00-06:00"}, blobs=blobs)


@pytest.fixture
def taken(browser: Browser, device: Device) -> Device:
    """Take the sample that the photos are of."""
    texts = [*devices.setting_up(device), devices.sample(device, "s", devices.CODES[0])]
    assert set(browser.results(texts)) == {"stored"}
    return device


def test_a_photo_cut_at_seventy_per_cent_goes_on_where_it_broke(browser: Browser, taken: Device) -> None:
    """The server tells what it has; nothing is sent twice, and the whole is checked by its digest."""
    name, cut = digest(JPEG), int(len(JPEG) * 0.7)
    assert browser.results([photo(taken, "p", [name])]) == ["stored"]
    assert head(browser, name) == (0, "0")
    assert put(browser, name, 0, JPEG[:cut], len(JPEG)).get_json()["have"] == cut
    assert head(browser, name) == (cut, "0")
    assert_canonical(browser.get(f"/api/blobs/{name}"), 404, "not_found")
    assert browser.records()["photo", "p"]["arrived"] is False
    answer = put(browser, name, cut, JPEG[cut:], len(JPEG)).get_json()
    assert (answer["have"], answer["complete"]) == (len(JPEG), True)
    assert head(browser, name) == (len(JPEG), "1")
    shown = browser.get(f"/api/blobs/{name}")
    assert (shown.data, shown.mimetype) == (JPEG, "image/jpeg")
    assert browser.records()["photo", "p"]["arrived"] is True


def test_the_picture_may_arrive_before_its_entry(app: Flask, browser: Browser, taken: Device) -> None:
    name = digest(JPEG)
    put(browser, name, 0, JPEG, len(JPEG))
    assert browser.results([photo(taken, "p", [name]), photo(taken, "q", [name])]) == ["stored", "stored"]
    records = browser.records()
    assert records["photo", "p"]["arrived"] and records["photo", "q"]["arrived"]
    store = app.extensions["weirbook"].store
    before = digest_of_records(store.read())
    assert rebuild(store).after == before


def test_bytes_with_another_digest_are_dropped_and_asked_for_again(browser: Browser, taken: Device) -> None:
    name = digest(JPEG)
    assert_canonical(put(browser, name, 0, JPEG[:-1] + b"x", len(JPEG)), 422, "attachment")
    assert head(browser, name) == (0, "0")
    assert put(browser, name, 0, JPEG, len(JPEG)).get_json()["complete"] is True


def test_a_part_out_of_place_changes_nothing(browser: Browser, taken: Device) -> None:
    name = digest(JPEG)
    assert_canonical(put(browser, name, 5, JPEG[5:], len(JPEG)), 409, "out_of_place")
    put(browser, name, 0, JPEG[:100], len(JPEG))
    assert_canonical(put(browser, name, 0, JPEG[:100], len(JPEG)), 409, "out_of_place")
    assert_canonical(put(browser, name, 100, JPEG[100:], len(JPEG) - 1), 409, "out_of_place")
    assert_canonical(put(browser, name, 100, b"", len(JPEG)), 409, "out_of_place")
    assert head(browser, name) == (100, "0")


def test_only_pictures_of_a_bounded_size_are_taken(browser: Browser, taken: Device) -> None:
    page = b"<script>alert(1)</script>"
    assert_canonical(put(browser, digest(page), 0, page, len(page)), 415, "not_a_picture")
    assert_canonical(put(browser, digest(JPEG), 0, JPEG, attachments.MOST_BYTES + 1), 413, "too_large")
    assert_canonical(browser.ask("PUT", f"/api/blobs/{digest(JPEG)}", data=JPEG), 422)
    assert_canonical(put(browser, "x" * 64, 0, JPEG, len(JPEG)), 404, "not_found")


def test_nothing_is_told_to_a_stranger(app: Flask, browser: Browser, taken: Device) -> None:
    name = digest(JPEG)
    put(browser, name, 0, JPEG, len(JPEG))
    stranger = Browser(app)
    assert_canonical(stranger.get(f"/api/blobs/{name}"), 401)
    assert stranger.ask("HEAD", f"/api/blobs/{name}").status_code == 401
    assert_canonical(put(stranger, name, 0, JPEG, len(JPEG)), 401)


def test_a_photo_without_room_says_so_and_one_of_nothing_is_held(browser: Browser, taken: Device) -> None:
    texts = [photo(taken, "p", []), photo(taken, "q", [], of=("visit", "nowhere"))]
    assert browser.results(texts) == ["stored", "held"]
    assert browser.records()["photo", "p"]["digest"] is None


@settings(max_examples=25, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(st.data())
def test_however_it_is_cut_and_repeated_the_whole_is_the_same(
    browser: Browser, taken: Device, data: st.DataObject
) -> None:
    """Whatever parts come, in whatever order and how often: what is told is a beginning of the picture."""
    picture = b"\xff\xd8\xff" + data.draw(st.binary(min_size=1, max_size=40))
    name = digest(picture)
    for _ in range(data.draw(st.integers(0, 8))):
        at = data.draw(st.integers(0, len(picture)))
        length = data.draw(st.integers(0, len(picture) - at))
        put(browser, name, at, picture[at : at + length], len(picture))
    here, complete = head(browser, name)
    assert complete == "1" or put(browser, name, here, picture[here:], len(picture)).get_json()["complete"]
    assert browser.get(f"/api/blobs/{name}").data == picture
