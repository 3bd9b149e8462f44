"""A programme set up from nothing, through the screens alone."""

from __future__ import annotations

from collections.abc import Callable

from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, told
from tests.browser.server import Server
from tests.tools.devices import STANDARDS

PATIENT_MS = 20_000


def start(page: Page) -> None:
    """Fill the first page; a short password is refused and the form keeps what was typed."""
    page.goto("/")
    page.get_by_role("button", name="Start my own programme").click()
    page.get_by_label("Programme (the authority)").fill("Esker Valley Sewer Authority")
    page.get_by_label("Laboratory").fill("Esker Valley Laboratory")
    page.get_by_label("Your name").fill("Maren Ostby")
    page.get_by_label("Sign-in name").fill("maren")
    page.get_by_label("Password", exact=True).fill("too short")
    page.get_by_role("button", name="Start", exact=True).click()
    expect(page.get_by_text("At least 12 characters.").first).to_be_visible()
    expect(page.get_by_label("Your name")).to_have_value("Maren Ostby")
    page.get_by_label("Password", exact=True).fill(told.PASSWORD)
    page.get_by_role("button", name="Start", exact=True).click()
    page.wait_for_url("**/field")


def register(page: Page) -> None:
    """Register a discharger with a point and a limit."""
    page.goto("/review/register")
    page.get_by_label("Discharger", exact=True).fill("Hollin Vale Creamery")
    page.get_by_label("Sector").select_option("dairy")
    page.get_by_label("Point", exact=True).fill("Outlet B")
    page.get_by_label("Traffic").check()
    page.get_by_role("button", name="Save on this tablet").click()
    page.wait_for_url("**/limit")
    page.get_by_label("Limit", exact=True).fill("1 500")
    expect(page.get_by_text("read as 1\u202f500 mg/L")).to_be_visible()
    page.get_by_label("In force from").fill("2024-01-01")
    page.get_by_label("Source").fill("permit 14, part 2")
    page.get_by_role("button", name="Save on this tablet").click()
    expect(page.get_by_role("cell", name="permit 14, part 2")).to_be_visible()


def stock(page: Page) -> None:
    """Adopt a published recipe; add a lot, the instruments and a container."""
    page.goto("/bench/stores/recipe")
    page.get_by_label("Begin from a published form").select_option("EPA 410.4, manual")
    expect(page.get_by_label("Name", exact=True)).to_have_value("EPA 410.4, manual")
    page.get_by_role("button", name="Save on this tablet").click()
    page.wait_for_url("**/stores")  # the form shows the same number while it is typed
    expect(page.get_by_text("capacity 998.5 mg/L")).to_be_visible(timeout=PATIENT_MS)
    page.goto("/bench/stores/lot")
    page.get_by_label("Name on the bottle").fill("HR-1")
    page.get_by_label("Expires on").fill("2099-01-01")
    page.get_by_role("button", name="Save on this tablet").click()
    page.wait_for_url("**/stores")
    for kind, name in (("photometer", "Photometer 2"), ("block", "Block 1")):
        page.goto("/bench/stores/instrument")
        page.get_by_role("radio", name=kind).click()
        page.get_by_label("Name", exact=True).fill(name)
        page.get_by_role("button", name="Save on this tablet").click()
        page.wait_for_url("**/stores")
    page.goto("/bench/stores/container")
    page.get_by_label("Name", exact=True).fill("Container 1")
    page.get_by_role("button", name="Save on this tablet").click()
    page.wait_for_url("**/stores")


def calibrate(page: Page) -> None:
    """Type the standards as they were read."""
    page.goto("/bench/stores/calibration")
    page.get_by_label("Holds until").fill("2099-01-01")
    for level, (cod, readings) in enumerate(STANDARDS, start=1):
        page.get_by_label(f"COD of level {level}").fill(cod)
        page.get_by_label(f"Absorbances of level {level}").fill(" ".join(readings))
    page.get_by_role("button", name="Save on this tablet").click()
    page.wait_for_url("**/curve/*")
    expect(page.get_by_text("Relative standard error")).to_be_visible(timeout=PATIENT_MS)
    expect(page.get_by_role("img", name="Absorbance against COD")).to_be_visible()


def test_a_programme_is_set_up_from_nothing_through_the_screens(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    page = context_factory(**chromium.DESK, base_url=server.url).new_page()
    start(page)
    expect(page.get_by_text("registers").or_(page.get_by_text("Register")).first).to_be_visible()
    register(page)
    stock(page)
    calibrate(page)
    page.goto("/field")
    page.get_by_text("Hollin Vale Creamery").first.click()
    expect(page.get_by_text("Expected COD today")).to_be_visible(timeout=PATIENT_MS)
    expect(page.get_by_text("limit 1\u202f500").first).to_be_visible()
    page.goto("/waiting")
    expect(page.get_by_text("needs attention")).to_have_count(0)
    page.goto("/review/people")
    page.get_by_label("Name", exact=True).fill("Rowan Teague")
    page.get_by_label("Sign-in name").fill("rowan")
    page.get_by_label("First password").fill(told.PASSWORD)
    page.get_by_role("button", name="Add", exact=True).click()
    expect(page.get_by_role("cell", name="Rowan Teague")).to_be_visible(timeout=PATIENT_MS)


def test_the_example_opens_with_one_press(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    page = context_factory(**chromium.PHONE, base_url=server.url).new_page()
    page.goto("/")
    page.get_by_role("button", name="Look around with an example").click()
    expect(page.get_by_text("Quarrelbank Brewing")).to_be_visible(timeout=PATIENT_MS)
    page.goto("/bench")
    expect(page.get_by_text("heating,")).to_be_visible()
    page.goto("/review")
    expect(page.get_by_text("1 held entry to settle")).to_be_visible()
