"""No default account, roles checked at each request, sessions that end."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from flask import Flask

from app.journal.kinds import ROLES
from tests.web.conftest import PASSWORD, Browser
from tests.web.test_errors_and_headers import assert_canonical

OPEN = {
    "shell.alive",
    "shell.manifest",
    "shell.ready",
    "shell.service_worker",
    "shell.shell",
    "shell.words",
    "static",
    "verify.verify",
    "sessions.get_state",
    "sessions.Session",
    "programme.start",
    "programme.example",
    "api-docs.openapi_json",
}
NEEDS = {
    "programme.add_person": {"administrator"},
    "certificates.Certificates": {"coordinator"},
    "certificates.pdf": set(ROLES),
    "papers.labels": set(ROLES),
    "papers.run_sheet": set(ROLES),
    "papers.custody": set(ROLES),
    "programme.devices": {"coordinator", "administrator"},
    "store_papers.preparation": set(ROLES),
    "store_papers.preparation_paper": set(ROLES),
    "store_papers.reagent_label": set(ROLES),
    "papers.waste_label": set(ROLES),
    "attachments.how_much": set(ROLES),
    "attachments.put_part": set(ROLES),
    "attachments.whole": set(ROLES),
    "sync.push": set(ROLES),
    "sync.pull": set(ROLES),
    "sync.tablet_file": {"administrator"},
}
REQUESTS = {
    "programme.add_person": ("POST", "/api/people"),
    "certificates.Certificates": ("POST", "/api/certificates"),
    "certificates.pdf": ("GET", "/api/certificates/2031-0001.pdf"),
    "papers.labels": ("GET", "/api/papers/labels.pdf?count=0"),
    "papers.run_sheet": ("GET", "/api/papers/run/none.pdf"),
    "papers.custody": ("GET", "/api/papers/hand-over/none.pdf"),
    "papers.waste_label": ("GET", "/api/papers/container/none.pdf"),
    "programme.devices": ("GET", "/api/devices"),
    "store_papers.preparation": ("GET", "/api/papers/preparation/none"),
    "store_papers.preparation_paper": ("GET", "/api/papers/preparation/none.pdf"),
    "store_papers.reagent_label": ("GET", "/api/papers/lot/none.pdf"),
    "attachments.how_much": ("HEAD", "/api/blobs/none"),
    "attachments.put_part": ("PUT", "/api/blobs/none"),
    "attachments.whole": ("GET", "/api/blobs/none"),
    "sync.push": ("POST", "/api/push"),
    "sync.pull": ("GET", "/api/pull"),
    "sync.tablet_file": ("POST", "/api/tablet-file"),
}


def sign_in(browser: Browser, name: str, password: str = PASSWORD) -> int:
    """Sign in and return the status."""
    return browser.ask("POST", "/api/session", {"sign_in": name, "password": password}).status_code


def add(browser: Browser, name: str, *roles: str) -> str:
    """Add a person; the sign-in name is the name."""
    given = {"name": name, "sign_in": name, "password": PASSWORD, "roles": list(roles)}
    answer = browser.ask("POST", "/api/people", given)
    assert answer.status_code == 201, answer.text
    id_: str = answer.get_json()["person"]
    return id_


def test_every_route_has_an_entry_in_the_table(app: Flask) -> None:
    assert {rule.endpoint for rule in app.url_map.iter_rules()} == OPEN | set(NEEDS)


@pytest.mark.parametrize("endpoint", sorted(NEEDS))
@pytest.mark.parametrize("role", ROLES)
def test_only_the_roles_of_the_table_pass(
    browser: Browser, person: str, another: Callable[[], Browser], endpoint: str, role: str
) -> None:
    add(browser, "somebody", role)
    other = another()
    method, path = REQUESTS[endpoint]
    given = {} if method == "POST" else None
    refused = other.ask(method, path, given)
    assert refused.status_code == 401
    if method != "HEAD":  # it has no body to say why in
        assert_canonical(refused, 401, "sign_in_needed")
    assert sign_in(other, "somebody") == 200
    answer = other.ask(method, path, given)
    if role in NEEDS[endpoint]:
        assert answer.status_code in (200, 404, 422)
    else:
        assert_canonical(answer, 403, "not_permitted")


def test_an_empty_store_lets_nobody_in(browser: Browser) -> None:
    for name in ("admin", "administrator", "root", "visitor", "maren"):
        assert_canonical(browser.ask("POST", "/api/session", {"sign_in": name, "password": name}), 422)
    assert browser.get("/api/state").get_json()["started"] is False


def test_a_programme_starts_once(browser: Browser, person: str, another: Callable[[], Browser]) -> None:
    with pytest.raises(AssertionError, match="already"):
        another().start()
    assert_canonical(another().ask("POST", "/api/example", {}), 409, "conflict")


def test_unknown_name_and_wrong_password_are_told_alike(browser: Browser, person: str) -> None:
    wrong = browser.ask("POST", "/api/session", {"sign_in": "maren", "password": "wrong"})
    unknown = browser.ask("POST", "/api/session", {"sign_in": "nobody", "password": "wrong"})
    assert wrong.get_json() == unknown.get_json()
    assert sign_in(browser, "MAREN") == 200


def test_a_short_password_is_refused_and_nothing_is_begun(browser: Browser) -> None:
    given = {
        "programme": {"name": "P", "laboratory": "L", "zone": "UTC"},
        "person": {"name": "N", "sign_in": "n", "password": "elevenchars"},
    }
    body = assert_canonical(browser.ask("POST", "/api/start", given), 422)
    assert "person.password" in body["fields"]
    assert browser.get("/api/state").get_json()["started"] is False


def test_the_cookie_is_strict_and_only_its_digest_is_kept(app: Flask, browser: Browser, person: str) -> None:
    answer = browser.ask("POST", "/api/session", {"sign_in": "maren", "password": PASSWORD})
    cookie = answer.headers["Set-Cookie"]
    assert cookie.startswith("__Host-weirbook=")
    for part in ("Secure", "HttpOnly", "SameSite=Strict", "Path=/"):
        assert part in cookie
    token = cookie.split("=", 1)[1].split(";")[0]
    kept = app.extensions["weirbook"].store.read().execute("SELECT token_digest FROM session").fetchall()
    assert token not in {row[0] for row in kept}


def test_signing_out_ends_the_session(browser: Browser, person: str) -> None:
    assert browser.ask("DELETE", "/api/session", {}).get_json()["person"] is None
    assert_canonical(browser.get("/api/pull?epoch=x&after=0"), 401)


def test_a_person_who_left_is_out_at_the_next_request(
    app: Flask, browser: Browser, person: str, another: Callable[[], Browser]
) -> None:
    id_ = add(browser, "leaver", "inspector")
    other = another()
    assert sign_in(other, "leaver") == 200
    body = {"name": "leaver", "roles": ["inspector"], "active": False}
    app.extensions["weirbook"].ledger.state("person.changed", id_, body, person)
    assert other.get("/api/state").get_json()["person"] is None
    assert_canonical(other.ask("POST", "/api/push", {}), 401)


def test_a_sign_in_name_is_given_once(browser: Browser, person: str) -> None:
    add(browser, "imke", "inspector")
    given = {"name": "Other", "sign_in": "IMKE ", "password": PASSWORD, "roles": ["analyst"]}
    assert_canonical(browser.ask("POST", "/api/people", given), 422)
    assert [body["name"] for (kind, _), body in browser.records().items() if kind == "person"] == [
        "Maren Ostby",
        "imke",
    ]


def test_the_example_opens_only_on_this_machine(browser: Browser) -> None:
    answer = browser.ask("POST", "/api/example", {}, environ_overrides={"REMOTE_ADDR": "192.168.7.7"})
    assert_canonical(answer, 403, "not_permitted")
    assert browser.get("/api/state").get_json()["started"] is False
    state = browser.ask("POST", "/api/example", {}).get_json()
    assert state["example"] is True
    assert state["person"]["name"] == "Visitor"
    assert browser.ask("POST", "/api/example", {}).status_code == 200
