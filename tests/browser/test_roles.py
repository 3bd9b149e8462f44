"""A person sees before typing which places belong to another role; what is stated there is held, not lost."""

from __future__ import annotations

from collections.abc import Callable

from playwright.sync_api import BrowserContext, expect

from tests.browser import chromium, told
from tests.browser.server import Server
from tests.browser.test_offline import PATIENT_MS
from tests.browser.test_whole_path import CODE
from tests.tools import devices


def test_an_inspector_is_told_at_the_bench_and_a_receipt_is_held(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    office = context_factory(**chromium.DESK, base_url=server.url)
    person = told.set_up(office)
    told.push(office.request, [devices.sample(devices.Device(person), "sample-1", CODE)])
    given = {"name": "Rowan Teague", "sign_in": "rowan", "password": told.PASSWORD, "roles": ["inspector"]}
    assert office.request.post("/api/people", headers=told.HEADERS, data=given).ok

    tablet = context_factory(**chromium.PHONE, base_url=server.url)
    page = tablet.new_page()
    page.goto("/")
    page.get_by_label("Sign-in name").fill("rowan")
    page.get_by_label("Password", exact=True).fill(told.PASSWORD)
    page.get_by_role("button", name="Sign in").click()
    page.wait_for_url("**/field")
    expect(page.get_by_text("You are here as")).to_have_count(0)
    page.goto("/bench/receive")
    expect(page.get_by_text("You are here as inspector.")).to_be_visible()
    page.get_by_label("Bottle", exact=True).fill(CODE)
    page.get_by_role("button", name="Save the receipt").click()
    expect(page.get_by_text("1 entry needs attention.")).to_be_visible(timeout=PATIENT_MS)
    page.goto("/waiting")
    expect(page.get_by_text("Only analyst may state this")).to_be_visible()

    desk = office.new_page()
    desk.goto("/review/held")
    expect(desk.get_by_role("heading", name="Bottle received, held")).to_be_visible(timeout=PATIENT_MS)
    desk.get_by_label("Reason").fill("an analyst receives it again")
    desk.get_by_role("button", name="Set it aside").click()
    expect(desk.get_by_role("heading", name="Bottle received, set aside")).to_be_visible(timeout=PATIENT_MS)
