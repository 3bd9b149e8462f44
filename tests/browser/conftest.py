"""Browser, server and judge for the browser tests.

Playwright is driven by these fixtures alone, with Debian's own Chromium. Each
test gets fresh contexts; an uncaught error or a breach of the content security
policy on any of their pages fails it, and so does a traceback of the server.
"""

from __future__ import annotations

import atexit
from collections.abc import Callable, Iterator
from contextlib import suppress
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, BrowserContext, Error, Page, Playwright, sync_playwright

from tests.browser import chromium
from tests.browser.server import ROOT, Server, free_port
from tests.browser.watch import Axe, Watch, kill_browser

AXE = ROOT / "build" / "client" / "node_modules" / "axe-core" / "axe.min.js"


@pytest.fixture(scope="session")
def driver() -> Iterator[Playwright]:
    """Start Playwright once."""
    with sync_playwright() as started:
        yield started


@pytest.fixture(scope="session")
def browser(driver: Playwright) -> Iterator[Browser]:
    """Start one browser for the run; it keeps nothing between contexts."""
    started = driver.chromium.launch(executable_path=chromium.find(), args=chromium.FLAGS)
    yield started
    started.close()


@pytest.fixture
def watch() -> Iterator[Watch]:
    """Fail the test when a page threw or broke its policy."""
    watching = Watch()
    yield watching
    if watching.faults:
        pytest.fail("The page misbehaved:\n" + "\n".join(watching.faults), pytrace=False)


@pytest.fixture
def context_factory(browser: Browser, watch: Watch) -> Iterator[Callable[..., BrowserContext]]:
    """Make watched contexts: ``context_factory(**chromium.PHONE, base_url=server.url)``."""
    made: list[BrowserContext] = []

    def make(**options: Any) -> BrowserContext:
        context = watch.context(browser.new_context(**options))
        made.append(context)
        return context

    yield make
    for context in made:
        context.close()


@pytest.fixture
def page(context_factory: Callable[..., BrowserContext]) -> Page:
    """Open one empty page at the size of a desk's screen."""
    return context_factory(**chromium.DESK).new_page()


class Profile:
    """A browser of its own on a folder, so that it can be killed and opened again."""

    def __init__(self, driver: Playwright, watch: Watch, folder: Path, options: dict[str, Any]) -> None:
        self.folder = folder
        self._driver, self._watch, self._options = driver, watch, options
        self.context: BrowserContext | None = None

    def open(self) -> Page:
        """Start the browser on its folder and return its first page."""
        self.context = self._watch.context(
            self._driver.chromium.launch_persistent_context(
                self.folder, executable_path=chromium.find(), args=chromium.FLAGS, **self._options
            )
        )
        return self.context.pages[0]

    def kill(self) -> None:
        """SIGKILL the whole browser, as an empty battery would."""
        if not kill_browser(self.folder):
            raise RuntimeError(f"No browser runs on {self.folder}.")
        self.close()

    def close(self) -> None:
        """Close the browser, alive or dead."""
        if self.context is not None:
            with suppress(Error):  # if it was killed, nothing is left to close
                self.context.close()
            self.context = None


@pytest.fixture
def profile_factory(driver: Playwright, watch: Watch, tmp_path: Path) -> Iterator[Callable[..., Profile]]:
    """Make browsers with a lasting profile: ``page = profile_factory(**chromium.PHONE).open()``."""
    made: list[Profile] = []

    def make(**options: Any) -> Profile:
        made.append(Profile(driver, watch, tmp_path / f"profile-{len(made)}", options))
        return made[-1]

    yield make
    for profile in made:
        profile.close()


@pytest.fixture
def server(tmp_path: Path) -> Iterator[Server]:
    """Start a real server on an empty store; ``kill()`` and ``start()`` keep port and store."""
    one = Server(tmp_path / "store", free_port(), tmp_path / "server.log")
    atexit.register(one.kill)
    one.start()
    yield one
    one.stop()
    atexit.unregister(one.kill)
    assert "Traceback" not in one.said(), one.said()[-5000:]


@pytest.fixture(scope="session")
def axe() -> Axe:
    """Judge a page's accessibility: ``assert axe(page) == []``."""
    if not AXE.is_file():
        pytest.fail(
            f"axe-core is missing at {AXE.relative_to(ROOT)}: run `make install-test`.", pytrace=False
        )
    return Axe(AXE)
