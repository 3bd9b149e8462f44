"""Field without a network: what is saved on the tablet survives, and reaches the server."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any

from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, told
from tests.browser.conftest import Profile
from tests.browser.server import Server
from tests.tools.devices import CODES

PATIENT_MS = 20_000


def open_field(page: Page) -> None:
    """Open the Field place and wait until the service worker has the shell and the point is here."""
    page.goto("/field")
    page.get_by_text("Hollin Vale Creamery").first.wait_for()
    page.evaluate("() => navigator.serviceWorker.ready.then(() => true)")


DRAFTS_HOLD = """(text) => new Promise((found) => {
  const opening = indexedDB.open("weirbook");
  opening.onsuccess = () => {
    const asked = opening.result.transaction("drafts").objectStore("drafts").getAll();
    asked.onsuccess = () => { opening.result.close(); found(JSON.stringify(asked.result).includes(text)); };
  };
})"""


ENTER_AND_TAP = """() => {
  document.querySelector("form").requestSubmit();
  document.querySelector("form button.main").click();
}"""


def wait_until_kept(page: Page, text: str) -> None:
    """Wait until the last keystroke is in the store: what is drawn is a moment ahead of it."""
    for _ in range(100):
        if page.evaluate(DRAFTS_HOLD, text):
            return
        page.wait_for_timeout(50)
    raise AssertionError(f"no draft holds {text}")


def take_sample(page: Page, code: str) -> None:
    """Log a sample at the point, as an inspector does, until it says that it is saved."""
    page.goto("/field/point/outlet-b/take")
    page.get_by_label("Bottle", exact=True).fill(code)
    page.get_by_label("Conductivity", exact=True).fill("1,84")
    page.get_by_label("Unit of Conductivity").select_option("mS/cm")
    page.get_by_label("On ice or in a refrigerator").check()
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_text("Saved on this tablet")).to_be_visible()


def sign_in(page: Page) -> None:
    """Sign in; the killed browser may have lost its cookie, never an entry."""
    page.goto("/sign-in")
    page.get_by_label("Sign-in name").fill("maren")
    page.get_by_label("Password", exact=True).fill(told.PASSWORD)
    page.get_by_role("button", name="Sign in").click()
    page.wait_for_url("**/field**")


def where(page: Page, code: str) -> str:
    """Return what the list of samples says of where an entry is."""
    page.goto("/field/samples")
    row = page.locator("li, a").filter(has_text=code).first
    return row.inner_text()


def test_the_client_can_be_installed(server: Server, profile_factory: Callable[..., Profile]) -> None:
    profile = profile_factory(**chromium.PHONE, base_url=server.url)
    page = profile.open()
    told.start_programme(page.context.request)
    page.goto("/field")
    page.evaluate("() => navigator.serviceWorker.ready.then(() => true)")
    session = page.context.new_cdp_session(page)
    assert session.send("Page.getInstallabilityErrors")["installabilityErrors"] == []


def test_a_sample_outlives_the_browser_and_the_dead_server(
    server: Server, profile_factory: Callable[..., Profile]
) -> None:
    """F01, F21: server dead, browser killed after "saved", a cold start, then the entry arrives once."""
    options: dict[str, Any] = {**chromium.PHONE, "base_url": server.url}
    profile = profile_factory(**options)
    page = profile.open()
    told.set_up(page.context)
    open_field(page)
    server.kill()
    take_sample(page, CODES[3])
    profile.kill()

    page = profile.open()
    assert "on this tablet" in where(page, CODES[3])
    assert page.evaluate("() => navigator.onLine") is True
    server.start()
    sign_in(page)
    page.goto("/field/samples")
    row = page.locator("li, a").filter(has_text=CODES[3]).first
    expect(row).to_contain_text("on the server", timeout=PATIENT_MS)
    pulled = page.context.request.get(
        f"/api/pull?epoch={page.context.request.get('/api/state').json()['epoch']}&after=0"
    ).json()
    samples = [one["body"] for one in pulled["records"] if one["type"] == "sample"]
    assert [(one["bottle"], one["field"]["conductivity_us_cm"]) for one in samples] == [
        (CODES[3], {"text": "1,84", "unit": "mS/cm"})
    ]


def test_what_is_typed_outlives_the_browser(server: Server, profile_factory: Callable[..., Profile]) -> None:
    """F04: a form that was never saved is there again, character for character."""
    profile = profile_factory(**chromium.PHONE, base_url=server.url)
    page = profile.open()
    told.set_up(page.context)
    open_field(page)
    page.goto("/field/point/outlet-b/take")
    page.get_by_label("Note").fill("foam, smells of “Käse” — 2 cm")
    page.get_by_label("pH", exact=True).fill("7,")
    expect(page.get_by_text("is not a number")).to_be_visible()
    wait_until_kept(page, '"7,"')
    profile.kill()
    page = profile.open()
    page.goto("/field/point/outlet-b/take")
    expect(page.get_by_label("Note")).to_have_value("foam, smells of “Käse” — 2 cm")
    expect(page.get_by_label("pH", exact=True)).to_have_value("7,")


def test_two_taps_make_one_entry(server: Server, context_factory: Callable[..., BrowserContext]) -> None:
    """F11: a double tap, and Enter with a tap, make one entry each."""
    context = context_factory(**chromium.DESK, base_url=server.url)
    told.set_up(context)
    page = context.new_page()
    open_field(page)
    page.goto("/field/point/outlet-b/take")
    page.get_by_label("Bottle", exact=True).fill(CODES[4])
    page.get_by_role("button", name="Save the sample").dblclick()
    expect(page.get_by_text("Saved on this tablet")).to_be_visible()
    page.goto("/field/point/outlet-b/take")
    page.get_by_label("Bottle", exact=True).fill(CODES[5])
    page.evaluate(ENTER_AND_TAP)
    expect(page.get_by_text("Saved on this tablet")).to_be_visible()
    page.goto("/waiting")
    expect(page.get_by_text(re.compile("Sample taken"))).to_have_count(2)


def test_a_bottle_that_is_taken_is_refused_with_words_and_the_form_is_kept(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    context = context_factory(**chromium.DESK, base_url=server.url)
    told.tell_everything(context)
    page = context.new_page()
    open_field(page)
    page.goto("/field/point/outlet-b/take")
    page.get_by_label("Bottle", exact=True).fill(CODES[0])
    page.get_by_label("Note").fill("kept")
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_text(f"Bottle {CODES[0]} already holds another sample")).to_be_visible()
    expect(page.get_by_label("Note")).to_have_value("kept")
