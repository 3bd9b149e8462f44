"""Two builds of the client from one address: what a page gets, when it changes, what may never be."""

from __future__ import annotations

import shutil
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, tablet
from tests.browser.server import ROOT, Server, free_port

LATE = "static/parts/late.js"
IMPORT_LATE = 'async () => (await import("/static/parts/late.js")).build'
CACHED_LATE = """async () => {
  const found = await caches.match("/static/parts/late.js");
  return (await found.text()).match(/"(.*)"/u)[1];
}"""
UPDATED = "async () => { await (await navigator.serviceWorker.getRegistration()).update().catch(() => {}); }"


def _build(house: Path, name: str) -> None:
    """Change a module that no screen has loaded yet, so that the build is another."""
    (house / LATE).write_text(f'export const build = "{name}";\n', "utf-8")


@pytest.fixture
def house(tmp_path: Path) -> Path:
    """A copy of the programme whose client can be changed."""
    for name in ("app", "static", "seed_scenarios"):
        shutil.copytree(ROOT / name, tmp_path / "house" / name, ignore=shutil.ignore_patterns("__pycache__"))
    _build(tmp_path / "house", "one")
    return tmp_path / "house"


@pytest.fixture
def server(tmp_path: Path, house: Path) -> Iterator[Server]:
    one = Server(tmp_path / "store", free_port(), tmp_path / "server.log", house)
    one.start()
    yield one
    one.stop()
    assert "Traceback" not in one.said(), one.said()[-5000:]


def _deploy(server: Server, house: Path, name: str) -> None:
    server.stop()
    _build(house, name)
    server.start()


def _offered(page: Page) -> None:
    page.evaluate(UPDATED)
    expect(page.get_by_text("A new version is ready.")).to_be_visible(timeout=15000)


def test_an_update_is_whole_asked_for_and_never_under_a_typed_form(
    server: Server, house: Path, context_factory: Callable[..., BrowserContext]
) -> None:
    """F54, F55, F56, F57: the life of an update.

    Deployed while a page is open, a module loaded late is of the page's own build;
    a typed form holds the update back; one press then ends on the new build with the store
    untouched; a deploy with a missing file leaves the old build at work without a network.
    """
    page = context_factory(**chromium.DESK, base_url=server.url).new_page()
    tablet.begin(page, server.url)
    tablet.settled(page)
    _deploy(server, house, "two")
    _offered(page)
    assert page.evaluate(IMPORT_LATE) == "one"
    page.reload()
    assert page.evaluate(IMPORT_LATE) == "one"
    _a_typed_form_holds_the_update_back(page)
    _one_press_ends_on_the_new_build(page)
    _a_broken_deploy_leaves_the_old_build(page, server, house)


def _a_typed_form_holds_the_update_back(page: Page) -> None:
    point = tablet.register_point(page)
    tablet.settled(page)
    page.goto(f"/field/point/{point}/take")
    page.get_by_label("Note").fill("half a sentence")
    expect(page.get_by_text("A new version is ready.")).to_be_visible()
    page.get_by_role("button", name="Use it now").click()
    expect(page.get_by_text("It waits: a form holds something that is not saved.")).to_be_visible()
    assert page.evaluate(IMPORT_LATE) == "one"
    page.get_by_role("button", name="No printed label").click()
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_text("Saved on this tablet")).to_be_visible()


def _one_press_ends_on_the_new_build(page: Page) -> None:
    before = tablet.outbox(page)
    with page.expect_navigation():
        page.get_by_role("button", name="Use it now").click()
    assert page.evaluate(IMPORT_LATE) == "two"
    expect(page.get_by_text("A new version is ready.")).to_have_count(0)
    assert [row["text"] for row in tablet.outbox(page)] == [row["text"] for row in before]
    assert len(before) == 4
    assert page.evaluate("async () => (await caches.keys()).length") == 1


def _a_broken_deploy_leaves_the_old_build(page: Page, server: Server, house: Path) -> None:
    _deploy(server, house, "three")
    (house / "static/parts/gone.js").symlink_to("nowhere.js")
    page.evaluate(UPDATED)
    page.wait_for_timeout(1500)
    server.kill()
    page.reload()
    page.get_by_role("heading", name="My samples").wait_for()
    assert page.evaluate(CACHED_LATE) == "two"
    assert page.evaluate("async () => (await caches.keys()).length") == 1
    expect(page.get_by_text("A new version is ready.")).to_have_count(0)
    (house / "static/parts/gone.js").unlink()
    server.start()
    _offered(page)
