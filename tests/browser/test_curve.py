"""A bent series: the line is advised against, the parabola is chosen, a second source confirms it."""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import date, timedelta

from playwright.sync_api import BrowserContext, expect

from tests.browser import chromium, told
from tests.browser.server import Server

# Bent as a filter photometer bends: 0.00042 x - 6e-8 x2, each level read twice, 0.2 mAU apart.
LEVELS = (0, 50, 100, 250, 500, 750, 900)


def _seen(cod: int) -> str:
    middle = 0.00042 * cod - 6e-8 * cod * cod
    return f"{middle - 1e-4:.4f} {middle + 1e-4:.4f}"


def test_a_bent_series_earns_its_parabola_and_is_confirmed(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    context = context_factory(**chromium.PHONE, base_url=server.url)
    told.set_up(context)
    page = context.new_page()
    page.goto("/bench/stores/calibration")
    page.get_by_role("heading", name="Enter a calibration").wait_for()
    page.get_by_label("Holds until").fill((date.today() + timedelta(days=60)).isoformat())
    for level, cod in enumerate(LEVELS, start=1):
        page.get_by_label(f"Absorbances of level {level}").fill("x" if cod == 500 else _seen(cod))
    page.get_by_role("button", name="Save on this tablet").click()
    expect(page.get_by_role("alert")).to_contain_text("Not a number: x.")
    page.get_by_label("Absorbances of level 5").fill("19.0")
    page.get_by_label("COD of level 4").fill("-250")
    page.get_by_role("button", name="Save on this tablet").click()
    expect(page.get_by_role("alert")).to_contain_text("No absorbance between -1 and 5: 19.0.")
    expect(page.get_by_role("alert")).to_contain_text("cannot hold less than 0")
    page.get_by_label("COD of level 4").fill("250")
    page.get_by_label("Absorbances of level 5").fill(_seen(500))
    page.get_by_role("button", name="Save on this tablet").click()
    expect(page.get_by_text("they have earned a quadratic")).to_be_visible(timeout=15000)
    expect(page.get_by_text("Mandel's test, F")).to_be_visible()
    expect(page.get_by_text("No standard of another source was read")).to_be_visible()
    expect(page.get_by_text(f"second source due on {date.today().isoformat()}")).to_be_visible()
    page.get_by_role("button", name="Another curve from these standards").click()
    page.get_by_role("radio", name="quadratic").click()
    page.get_by_role("button", name="Save on this tablet").click()
    expect(page.get_by_text("quadratic, equal weights")).to_be_visible()
    expect(page.get_by_text("Nothing speaks against this curve")).to_be_visible(timeout=15000)
    page.get_by_text("Every standard, read back").click()
    cells = page.get_by_role("row").filter(has_text="900").first.get_by_role("cell")
    expect(cells.nth(3)).to_have_text(re.compile(r"\d+\.\d"))
    expect(cells.nth(4)).to_have_text(re.compile(r"0\.\d\d"))
    assert page.evaluate("document.documentElement.scrollWidth") <= chromium.PHONE["viewport"]["width"]
    page.get_by_text("Record a check of this curve").click()
    page.get_by_label("Standard", exact=True).fill("ampoule K-3")
    page.get_by_label("Its COD").fill("400")
    page.get_by_label("Absorbances, AU").fill("0.1584 0,1582")
    page.get_by_role("button", name="Save the check").click()
    expect(page.get_by_text("○ holds")).to_be_visible(timeout=15000)
    page.goto("/bench/stores")
    row = page.get_by_role("link").filter(has_text="quadratic, equal weights")
    expect(row).not_to_contain_text("▲")
