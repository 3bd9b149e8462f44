"""What every test may use, and what the run says about the browser."""

from __future__ import annotations

import os
from collections.abc import Iterator
from pathlib import Path

import pytest
from hypothesis import settings

from tests.browser import chromium

ROOT = Path(__file__).resolve().parents[1]
BROWSER_TESTS = ROOT / "tests" / "browser"
WITHOUT_BROWSER = "no Chromium was found"

# Two cores shared with a browser make single examples slow now and then: no deadline.
settings.register_profile("here", deadline=None)
settings.register_profile("ci", deadline=None, derandomize=True, print_blob=True)
settings.load_profile("ci" if os.environ.get("CI") else "here")


@pytest.fixture(scope="session")
def shared() -> Path:
    """Return the folder of outside cases and data beside the checkout; it is no part of the project."""
    folder = ROOT.parent / "shared"
    if not folder.is_dir():
        pytest.skip("the folder ../shared beside the checkout is absent: its outside cases are not run")
    return folder


def pytest_report_header() -> str:
    """Say at the start which browser will be driven."""
    found = chromium.find()
    if found:
        return f"browser: {found}"
    if chromium.required():
        return "browser: NO CHROMIUM FOUND, and WEIRBOOK_BROWSER=required: its tests will fail"
    return "browser: NO CHROMIUM FOUND: the browser tests will be skipped"


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Mark what lies in tests/browser; one second try is given there, and told at the end."""
    for item in items:
        if item.path.is_relative_to(BROWSER_TESTS):
            item.add_marker(pytest.mark.browser)
            item.add_marker(pytest.mark.flaky(reruns=1))


def pytest_runtest_setup(item: pytest.Item) -> None:
    """Skip a browser test, or fail it where a browser is demanded, when there is none."""
    if item.get_closest_marker("browser") is None or chromium.find():
        return
    if chromium.required():
        pytest.fail("no Chromium was found, and WEIRBOOK_BROWSER=required", pytrace=False)
    pytest.skip(WITHOUT_BROWSER)


@pytest.hookimpl(wrapper=True, tryfirst=True)
def pytest_terminal_summary(
    terminalreporter: pytest.TerminalReporter, config: pytest.Config
) -> Iterator[None]:
    """Say last of all, too loudly to miss, what was not tested."""
    yield
    skipped = terminalreporter.stats.get("skipped", [])
    again = terminalreporter.stats.get("rerun", [])
    if again:
        terminalreporter.section("FAILED ONCE AND WAS TRIED AGAIN", sep="!", yellow=True, bold=True)
        for report in again:
            terminalreporter.write_line(f"{report.nodeid}\n{report.longreprtext[-3000:]}")
    left_out = sum(WITHOUT_BROWSER in str(report.longrepr) for report in skipped)
    if left_out:
        terminalreporter.section("NOT EVERYTHING WAS TESTED", sep="!", red=True, bold=True)
        terminalreporter.write_line(
            f"{left_out} BROWSER TESTS WERE SKIPPED: no Chromium was found on this machine. Install one "
            "(on Debian: chromium) or name it in WEIRBOOK_CHROMIUM, and run `make test` again.",
            red=True,
            bold=True,
        )
