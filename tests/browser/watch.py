"""What a page must never do: throw, or break its own content security policy."""

from __future__ import annotations

import os
import signal
from pathlib import Path
from typing import Any

from playwright.sync_api import BrowserContext, ConsoleMessage, Page

POLICY = "Content Security Policy"


class Watch:
    """Collects the faults of every page of a browser context.

    What a service worker throws inside itself reaches no page and is not seen
    here: a test of the worker must look at what the worker did. A test
    that provokes a fault on purpose takes it out of ``faults`` again.
    """

    def __init__(self) -> None:
        self.faults: list[str] = []

    def context(self, context: BrowserContext) -> BrowserContext:
        """Watch all pages of a context, present and future, from their first line on."""
        context.on("weberror", lambda found: self.faults.append(f"uncaught: {found.error}"))
        context.on("console", self._console)
        return context

    def _console(self, message: ConsoleMessage) -> None:
        if POLICY in message.text:
            self.faults.append(f"policy: {message.text}")


class Axe:
    """axe-core, put into a page to judge it."""

    def __init__(self, script: Path) -> None:
        self._script = script.read_text("utf-8")

    def __call__(self, page: Page, within: str = "html") -> list[str]:
        """Return one line for each thing that axe holds against the page."""
        page.evaluate(self._script)
        found: dict[str, Any] = page.evaluate(
            "(within) => axe.run(within, {resultTypes: ['violations']})", within
        )
        return [
            f"{each['id']} ({each['impact']}): {each['help']}: {node['target']} {node['html'][:160]}"
            for each in found["violations"]
            for node in each["nodes"]
        ]


def kill_browser(profile: Path) -> int:
    """SIGKILL every process of the browser that runs on a profile folder; return how many."""
    wanted = f"--user-data-dir={profile}".encode()
    killed = 0
    for entry in Path("/proc").iterdir():
        if not entry.name.isdigit():
            continue
        try:
            if wanted in (entry / "cmdline").read_bytes().split(b"\0"):
                os.kill(int(entry.name), signal.SIGKILL)
                killed += 1
        except (OSError, ProcessLookupError):
            continue
    return killed
