"""The exchange: what counts as an acknowledgement, what is held, what a restored server gets again."""

from __future__ import annotations

import hashlib
import json
import shutil
from collections.abc import Callable
from typing import Any

from playwright.sync_api import BrowserContext, Page, Response, Route, expect

from tests.browser import tablet
from tests.browser.server import Server


def test_two_tabs_number_their_entries_without_a_gap_or_a_twin(
    context_factory: Callable[..., BrowserContext], server: Server
) -> None:
    context = context_factory(base_url=server.url)
    first, second = context.new_page(), context.new_page()
    tablet.begin(first, server.url)
    second.goto("/field")
    many = """async (name) => {
      const { newId, state } = await import("/static/parts/journal.js");
      await Promise.all(Array.from({ length: 20 }, (_, i) => state("instrument.added", newId(),
        { name: `${name} ${i}`, what: "meter", positions: null })));
    }"""
    first.evaluate(f"(name) => {{ globalThis.made = ({many})(name); }}", "first")
    second.evaluate(many, "second")
    first.evaluate("() => globalThis.made")
    texts = [row["text"] for row in tablet.outbox(first)]
    assert [json.loads(text)["n"] for text in texts] == list(range(1, 41))
    digests = [None, *(hashlib.sha256(text.encode()).hexdigest() for text in texts)]
    assert [json.loads(text)["prev"] for text in texts] == digests[:-1]
    tablet.settled(first)
    expect(second.get_by_text("Everything is on the server.")).to_be_attached()


def _sent_through(page: Page, answer: Callable[[Route], None]) -> list[dict[str, Any]]:
    page.route("**/api/push", answer)
    tablet.register_point(page)
    page.wait_for_timeout(1500)
    return tablet.outbox(page)


def test_a_captive_portals_page_is_no_acknowledgement(
    context_factory: Callable[..., BrowserContext], server: Server
) -> None:
    page = context_factory(base_url=server.url, service_workers="block").new_page()
    tablet.begin(page, server.url)
    rows = _sent_through(page, lambda route: route.fulfill(body="<h1>Welcome to the café</h1>"))
    assert {row["state"] for row in rows} == {"tablet"}
    expect(page.get_by_text("3 entries on this tablet only")).to_be_visible()


def test_an_answer_to_another_batch_is_no_acknowledgement(
    context_factory: Callable[..., BrowserContext], server: Server
) -> None:
    page = context_factory(base_url=server.url, service_workers="block").new_page()
    tablet.begin(page, server.url)

    def another(route: Route) -> None:
        body = route.fetch().json()
        route.fulfill(json=body | {"digest": "0" * 64})

    assert {row["state"] for row in _sent_through(page, another)} == {"tablet"}
    page.unroute("**/api/push")
    page.goto("/settings")
    page.get_by_role("button", name="Exchange now").click()
    expect(page.get_by_text("Everything is on the server.")).to_be_attached(timeout=15000)


def test_a_held_entry_is_kept_and_shown_with_its_reason(
    context_factory: Callable[..., BrowserContext], server: Server
) -> None:
    page = context_factory(base_url=server.url).new_page()
    tablet.begin(page, server.url)
    tablet.state_all(
        page,
        [
            (
                "lot.made",
                "l",
                {"recipe": "nowhere", "name": "A", "made_on": "2026-01-01", "expires_on": "2027-01-01"},
            )
        ],
    )
    page.get_by_role("link", name="1 entry needs attention.").click()
    expect(page.get_by_role("listitem").filter(has_text="Lot made")).to_contain_text("needs attention")


def test_recording_goes_on_when_the_session_has_ended(
    context_factory: Callable[..., BrowserContext], server: Server
) -> None:
    """F59: a 401 on push; capture goes on, the queue is intact, the entries go out under their author."""
    context = context_factory(base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    point = tablet.register_point(page)
    tablet.settled(page)
    author = json.loads(tablet.outbox(page)[0]["text"])["by"]
    context.clear_cookies()
    page.goto("/field")
    tablet.take_sample(page, point)
    words = "to send and receive. Recording goes on without it. 1 on this tablet only."
    expect(page.get_by_text(words)).to_be_visible()
    tablet.sign_in(page, server.url)
    tablet.settled(page)
    assert {row["state"] for row in tablet.outbox(page)} == {"server"}
    assert {json.loads(row["text"])["by"] for row in tablet.outbox(page)} == {author}
    epoch = context.request.get("/api/state").json()["epoch"]
    there = context.request.get(f"/api/pull?epoch={epoch}&after=0").json()["records"]
    assert [one["body"]["by"] for one in there if one["type"] == "sample"] == [author]


def _entries(response: Response) -> int:
    """Return how many entries a push carried."""
    return len((response.request.post_data_json or {}).get("entries", []))


def test_a_server_restored_from_an_old_copy_gets_what_it_lost(
    context_factory: Callable[..., BrowserContext], server: Server
) -> None:
    """The copy is older than the tablet's acknowledged entries: they go out again."""
    context = context_factory(base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    tablet.settled(page)
    server.stop()
    shutil.copytree(server.store, server.store.with_name("copy"))
    server.start()
    point = tablet.register_point(page)
    page.goto("/settings")
    page.get_by_role("button", name="Exchange now").click()
    tablet.settled(page)
    server.kill()
    shutil.rmtree(server.store)
    shutil.copytree(server.store.with_name("copy"), server.store)
    server.start()
    other = context_factory(base_url=server.url).new_page()
    tablet.sign_in(other, server.url)
    expect(other.get_by_text("No discharge points yet")).to_be_visible()
    with page.expect_response(lambda found: "/api/push" in found.url and _entries(found) == 3):
        page.goto("/field")
    tablet.settled(page)
    other.goto(f"/field/point/{point}")
    expect(other.get_by_role("heading", name="Hollin Vale Creamery")).to_be_visible(timeout=15000)
