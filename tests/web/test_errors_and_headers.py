"""One error body for every endpoint, the headers on every answer, and no way in from another site."""

from __future__ import annotations

from typing import Any

import pytest
from flask import Flask
from werkzeug.test import TestResponse

from app.web import security
from tests.web.conftest import BASE, HEADERS, Browser


def assert_canonical(answer: TestResponse, status: int, code: str | None = None) -> dict[str, Any]:
    """Hold an answer to the one error body."""
    body = answer.get_json()
    assert answer.status_code == status, answer.text
    assert set(body) == {"error", "fields", "code"}
    assert isinstance(body["error"], str)
    assert len(body["error"]) > 10
    assert all(isinstance(line, str) for lines in body["fields"].values() for line in lines)
    assert code is None or body["code"] == code
    found: dict[str, Any] = body
    return found


API = [
    ("POST", "/api/start"),
    ("POST", "/api/session"),
    ("POST", "/api/people"),
    ("POST", "/api/push"),
    ("POST", "/api/certificates"),
]


@pytest.mark.parametrize(("method", "path"), API)
def test_wrong_json_is_told_in_the_one_body(browser: Browser, person: str, method: str, path: str) -> None:
    for given in ({}, [], "text", 7, {"unknown": 1}):
        assert_canonical(browser.ask(method, path, given), 422, "invalid_input")


@pytest.mark.parametrize(("method", "path"), API)
def test_what_is_no_json_is_told_in_the_one_body(
    browser: Browser, person: str, method: str, path: str
) -> None:
    for kind in ("application/json", "text/plain", "application/x-www-form-urlencoded"):
        answer = browser.ask(method, path, data=b"{not json", headers=HEADERS | {"Content-Type": kind})
        assert answer.status_code in (400, 415, 422)
        assert_canonical(answer, answer.status_code)


def test_every_bad_field_is_named_at_once(browser: Browser) -> None:
    given = {"programme": {"name": " ", "zone": "Mars/Olympus"}, "person": {"name": "", "password": 7}}
    body = assert_canonical(browser.ask("POST", "/api/start", given), 422)
    assert set(body["fields"]) == {
        "programme.name",
        "programme.laboratory",
        "programme.zone",
        "person.name",
        "person.sign_in",
        "person.password",
    }


def test_addresses_that_are_not_there(browser: Browser, person: str) -> None:
    assert_canonical(browser.get("/api/nothing"), 404, "not_found")
    assert_canonical(browser.get("/static/nothing.js"), 404, "not_found")
    assert_canonical(browser.get("/api/certificates/2031-0001.pdf"), 404, "not_found")
    assert_canonical(browser.ask("PUT", "/api/push", {}), 405)


def test_a_body_that_is_too_large_is_refused_before_it_is_read(browser: Browser, person: str) -> None:
    answer = browser.ask("POST", "/api/push", data=b"[" * (17 * 1024 * 1024), content_type="application/json")
    assert_canonical(answer, 413, "too_large")


def test_an_unforeseen_failure_shows_no_traceback(app: Flask, browser: Browser, monkeypatch: Any) -> None:
    def fail(*_: object) -> None:
        raise ZeroDivisionError("secret")

    monkeypatch.setattr("app.web.sessions.find", fail)
    answer = browser.get("/api/state")
    assert_canonical(answer, 500, "failed")
    assert "secret" not in answer.text
    assert "Traceback" not in answer.text


@pytest.mark.parametrize(
    "path", ["/", "/field/point/x", "/api/state", "/static/main.js", "/sw.js", "/api/nothing"]
)
def test_the_headers_are_on_every_answer(browser: Browser, path: str) -> None:
    answer = browser.get(path)
    for name, value in security.HEADERS.items():
        assert answer.headers[name] == value
    assert "unsafe" not in answer.headers["Content-Security-Policy"]
    assert "Access-Control-Allow-Origin" not in answer.headers
    if path.startswith("/api/"):
        assert answer.headers["Cache-Control"] == "no-store"


@pytest.mark.parametrize(
    "headers",
    [
        {},
        {"X-Weirbook": "1", "Sec-Fetch-Site": "cross-site"},
        {"X-Weirbook": "1", "Sec-Fetch-Site": "same-site"},
        {"X-Weirbook": "1", "Origin": "https://elsewhere.example"},
        {"X-Weirbook": "1", "Origin": "null"},
    ],
)
def test_a_write_from_another_site_is_refused(browser: Browser, person: str, headers: dict[str, str]) -> None:
    before = browser.records()
    for method, path in (*API, ("DELETE", "/api/session")):
        assert_canonical(browser.ask(method, path, {}, headers=headers), 403, "not_permitted")
    assert browser.records() == before


def test_our_own_origin_may_write(browser: Browser) -> None:
    headers = {"X-Weirbook": "1", "Origin": BASE, "Sec-Fetch-Site": "same-origin"}
    assert browser.ask("DELETE", "/api/session", {}, headers=headers).status_code == 200


def test_a_foreign_host_name_is_refused(browser: Browser) -> None:
    answer = browser.client.get("/api/state", base_url="https://rebound.example")
    assert answer.status_code == 400
    assert_canonical(answer, 400)


def test_the_api_document_names_every_route(app: Flask, browser: Browser) -> None:
    document = browser.get("/api/openapi.json").get_json()
    assert document["openapi"] == "3.1.0"
    routes = {rule.rule for rule in app.url_map.iter_rules() if rule.rule.startswith("/api/")}
    plain = {"/api/openapi.json"}
    assert {path.replace("{", "<").replace("}", ">") for path in document["paths"]} == routes - plain
