"""A published recipe is adopted; a range that its dichromate cannot carry is warned of; the sheet prints."""

from __future__ import annotations

from collections.abc import Callable

from playwright.sync_api import BrowserContext, expect

from tests.browser import chromium, tablet
from tests.browser.server import Server


def test_a_recipe_from_its_published_form_to_the_preparation_sheet(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    context = context_factory(**chromium.PHONE, base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    page.goto("/bench/stores/recipe")
    page.get_by_role("button", name="Save on this tablet").click()
    expect(page.get_by_role("alert")).to_contain_text("Still missing: name, source, sample, ml")
    page.get_by_label("Begin from a published form").select_option("Standard Methods 5220 D, low range")
    page.get_by_label("Tube", exact=True).select_option("20 x 150 mm")
    page.get_by_label("Working range from").fill("10")
    expect(page.get_by_text("Oxidant capacity 100.0 mg/L in the tube.")).to_be_visible()
    page.get_by_label("Working range to").fill("95")
    expect(page.get_by_text("above 90 % of the capacity: readings over 90 mg/L")).to_be_visible()
    page.get_by_label("Digestion solution made up to").fill("500")
    expect(page.get_by_text("Oxidant capacity 200.1 mg/L")).to_be_visible()
    page.get_by_label("Digestion solution made up to").fill("1000")
    page.get_by_role("button", name="Save on this tablet").click()
    tablet.settled(page)
    page.get_by_role("link", name="Standard Methods 5220 D, low range").click()
    expect(page.get_by_text("absorbance falls with COD")).to_be_visible()
    expect(page.get_by_text("▲ The range ends at 95 mg/L, above 90 % of the capacity")).to_be_visible()
    page.get_by_text("Purity on the bottles").click()
    page.get_by_label("potassium dichromate").fill("99,5")
    page.get_by_label("Standards, mg/L").fill("0 10 50 90")
    page.get_by_role("button", name="What to weigh and measure").click()
    expect(page.get_by_text("1.0271 g")).to_be_visible()  # 1.022 g/L at 99.5 %
    expect(page.get_by_text("acid into water").first).to_be_visible()
    paper = page.get_by_role("link", name="Print this sheet").get_attribute("href")
    assert paper is not None
    assert context.request.get(paper).headers["content-type"] == "application/pdf"
