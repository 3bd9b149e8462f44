"""The tools of the browser tests can fail: each is shown something that it must find."""

from __future__ import annotations

from collections.abc import Callable
from urllib.error import URLError
from urllib.request import urlopen

import pytest
from playwright.sync_api import BrowserContext, Page, Route

from tests.browser.server import Server
from tests.browser.watch import Axe, Watch

ORIGIN = "http://localhost:1"
GOOD = "<!doctype html><html lang=en><title>t</title><main><h1>Weir</h1></main></html>"


def show(page: Page, html: str, policy: str = "script-src 'self'") -> None:
    """Let a page load ``html`` under a policy, from no server at all."""

    def answer(route: Route) -> None:
        route.fulfill(body=html, headers={"Content-Type": "text/html", "Content-Security-Policy": policy})

    page.route(f"{ORIGIN}/**", answer)
    page.goto(f"{ORIGIN}/")


def test_a_quiet_page_leaves_no_fault(page: Page, watch: Watch, axe: Axe) -> None:
    show(page, GOOD)
    assert axe(page) == []
    assert watch.faults == []


def test_a_breach_of_the_policy_is_noticed(page: Page, watch: Watch) -> None:
    show(page, GOOD + "<script>document.title = 'ran'</script>")
    page.wait_for_timeout(100)
    assert page.title() == "t"
    assert len(watch.faults) == 1 and watch.faults[0].startswith("policy: ")
    watch.faults.clear()


def test_an_uncaught_error_and_an_unhandled_rejection_are_noticed(page: Page, watch: Watch) -> None:
    show(page, GOOD + "<script>Promise.reject(new Error('two')); throw new Error('one')</script>", "")
    page.wait_for_timeout(100)
    assert sorted(fault.split("\n")[0] for fault in watch.faults) == ["uncaught: one", "uncaught: two"]
    watch.faults.clear()


def test_axe_finds_a_field_without_a_label(page: Page, axe: Axe) -> None:
    show(page, GOOD.replace("<h1>", "<input><h1>"))
    assert [fault.split(" ")[0] for fault in axe(page)] == ["label"]


def test_a_killed_browser_opens_again_with_what_it_had_stored(profile_factory: Callable) -> None:
    tablet = profile_factory()
    page = tablet.open()
    show(page, GOOD)
    page.evaluate(
        """() => new Promise((done, fail) => {
            const request = indexedDB.open("kept", 1);
            request.onupgradeneeded = () => request.result.createObjectStore("rows");
            request.onerror = fail;
            request.onsuccess = () => {
                const change = request.result.transaction("rows", "readwrite", { durability: "strict" });
                change.objectStore("rows").put("here", 1);
                change.oncomplete = done;
            };
        })"""
    )
    tablet.kill()
    page = tablet.open()
    show(page, GOOD)
    assert page.evaluate("() => indexedDB.databases().then(all => all.map(one => one.name))") == ["kept"]


def test_two_contexts_share_nothing(context_factory: Callable[..., BrowserContext]) -> None:
    first, second = context_factory().new_page(), context_factory().new_page()
    for each in (first, second):
        show(each, GOOD)
    first.evaluate("() => localStorage.setItem('a', '1')")
    assert second.evaluate("() => localStorage.getItem('a')") is None


def test_a_killed_server_is_gone_and_comes_back_on_its_port(server: Server) -> None:
    server.kill()
    with pytest.raises(URLError):
        urlopen(f"{server.url}/healthz", timeout=2)
    server.start()
    with urlopen(f"{server.url}/healthz", timeout=5) as answer:
        assert answer.status == 200


def test_a_second_server_is_not_started_over_a_first(server: Server) -> None:
    with pytest.raises(RuntimeError, match="already listens"):
        server.start()
