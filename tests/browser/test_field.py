"""Field: dangers first, an expectation that readings shift, a dilution with its reason, a hand-over."""

from __future__ import annotations

import json
import re
from collections.abc import Callable
from typing import Any

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, tablet
from tests.browser.server import Server

CODS = (1400, 2600, 1900, 3100, 900, 2200, 1700, 2400, 4100, 1500)
RECIPE = {
    "name": "High range",
    "source": "of the test",
    "sample_ml": "2.5",
    "digestion_solution_ml": "1.5",
    "acid_reagent_ml": "3.5",
    "dichromate_g_per_l": "10.216",
    "mercury_sulfate_g_per_l": "33.3",
    "silver_sulfate_g_per_l": "10.12",
    "wavelength_nm": "600",
    "working_low": "50",
    "working_high": "900",
    "temperature_c": "150",
    "minutes": "120",
    "order": ["digestion solution", "acid reagent", "sample"],
}


def _past(point: str, number: int, cod: int) -> tuple[str, str, dict[str, Any]]:
    conductivity = {"text": str(round(900 * (cod / 1500) ** 0.7)), "unit": "uS/cm"}
    body = {
        "point": point,
        "collected_at": f"2026-{number // 2 + 1:02d}-{10 + number % 2:02d}T10:00:00-06:00",
        "cod": {"text": str(cod), "unit": "mg/L"},
        "expanded_u": None,
        "field": {"conductivity_us_cm": conductivity},
        "activity": None,
        "source": "earlier records",
    }
    return "result.recorded", f"result{number}", body


def _open(page: Page, server: Server, recipe: dict[str, Any], cods: tuple[int, ...]) -> str:
    """Open the card of a point with results and a recipe; return the point's id."""
    tablet.begin(page, server.url)
    point = tablet.register_point(page)
    past = [_past(point, number, cod) for number, cod in enumerate(cods)]
    tablet.state_all(page, [("recipe.adopted", "recipe", recipe), *past])
    tablet.settled(page)
    page.goto(f"/field/point/{point}")
    expect(page.get_by_text("Expected COD today")).to_be_visible(timeout=15000)
    return point


@pytest.fixture
def card(server: Server, context_factory: Callable[..., BrowserContext]) -> Page:
    """Open the card of a point with ten results and a recipe, on a phone."""
    page = context_factory(**chromium.PHONE, base_url=server.url).new_page()
    _open(page, server, RECIPE, CODS)
    return page


def _number(page: Page) -> int:
    text = page.locator(".big").inner_text()
    return int("".join(each for each in text if each.isdigit()))


def test_the_card_cautions_first_and_says_what_to_expect(card: Page) -> None:
    hazards = card.get_by_label("Dangers at this point")
    expect(hazards).to_contain_text("Never put your head in")
    below = card.get_by_text("Expected COD today").bounding_box()
    above = hazards.bounding_box()
    assert above and below and above["y"] < below["y"]
    assert 1200 < _number(card) < 3500  # the ten results lie between 900 and 4100
    expect(card.get_by_role("img", name="Limit 1\u202f500 mg/L")).to_be_visible()


def test_a_reading_shifts_the_expectation_at_once(card: Page) -> None:
    before = _number(card)
    card.get_by_role("button", name="Enter Conductivity").click()
    card.get_by_label("Conductivity", exact=True).fill("2,4")
    card.get_by_label("Unit of Conductivity").select_option("mS/cm")
    expect(card.get_by_text("read as 2.4 mS/cm")).to_be_visible()
    expect(card.get_by_text("Expected COD with these readings")).to_be_visible()
    assert _number(card) > before  # conductivity rises with COD in this point's past


def test_another_dilution_needs_its_reason_and_both_go_into_the_entry(card: Page) -> None:
    card.get_by_role("button", name="Choose another dilution").click()
    card.get_by_role("radio", name="1:20").click()
    card.get_by_label("Visible solids").check()
    card.get_by_role("button", name="Take the sample").click()
    card.get_by_role("button", name="No printed label").click()
    card.get_by_role("button", name="Save the sample").click()
    expect(card.get_by_text("Say why this dilution")).to_be_visible()
    card.get_by_label("Why this one").fill("thick today")
    card.get_by_role("button", name="Save the sample").click()
    expect(card.get_by_text("Saved on this tablet")).to_be_visible()
    body = json.loads(tablet.outbox(card)[-1]["text"])["body"]
    plan = body["plan"]
    assert (plan["dilution_factor"], plan["reason"], plan["chosen_by"]) == (20, "thick today", "person")
    assert body["solids"] is True
    assert plan["steps"] == [{"pipette_ml": 10, "flask_ml": 200}], "10 mL or more of a sample with solids"
    assert 0 < plan["p_in_range"] < 1 and plan["low"] < plan["median"] < plan["high"]
    tablet.settled(card)
    assert tablet.outbox(card)[-1]["state"] == "server"


def test_a_code_that_is_wrong_or_in_use_is_refused_before_saving(card: Page) -> None:
    point = card.url
    code = tablet.take_sample(card, point.split("/point/")[1])
    card.goto(f"{point}/take")
    for typed, words in [
        ("", "Scan or type"),
        (code[:-1] + "Q", "compare with the label"),
        (code, "already holds"),
    ]:
        card.get_by_label("Bottle").fill(typed)
        card.get_by_role("button", name="Save the sample").click()
        expect(card.get_by_text(words)).to_be_visible()


def test_bottles_are_handed_over_and_say_who_has_them(card: Page) -> None:
    code = tablet.take_sample(card, card.url.split("/point/")[1])
    card.get_by_role("link", name="Hand over").click()
    expect(card.get_by_label(code)).to_be_checked()
    card.get_by_label("To", exact=True).fill("Ada of the laboratory")
    card.get_by_label("Temperature of the ice box", exact=True).fill("4,5")
    card.get_by_role("button", name="Hand over 1 bottle").click()
    row = card.get_by_role("listitem").filter(has_text=code)
    expect(row).to_contain_text("handed over (Ada of the laboratory)")


NARROW = RECIPE | {"name": "Narrow range", "working_low": "150", "working_high": "400"}
NINE = re.compile(r"nine in ten between ([\d\u202f]+) and ([\d\u202f]+)")


def _ends(page: Page) -> tuple[int, int]:
    found = NINE.search(page.get_by_label("Expectation").inner_text())
    assert found
    low, high = (int(text.replace("\u202f", "")) for text in found.groups())
    return low, high


def _dilution(page: Page) -> str:
    return page.locator(".dilute strong").inner_text()


def test_without_a_signal_readings_move_the_range_the_plan_and_what_is_still_worth_measuring(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """A narrow method at a point whose COD follows conductivity; then whether the plan deserves it."""
    context = context_factory(**chromium.PHONE, base_url=server.url)
    page = context.new_page()
    point = _open(page, server, NARROW, (*CODS, 1200, 3600, 800, 2900, 1600, 2050))
    worth = page.locator(".worth")
    words = re.compile("Conductivity measured now would narrow the range from .* to .*")
    expect(worth).to_contain_text(words, timeout=15000)  # the last outlook has been pulled
    context.set_offline(True)
    page.reload()
    expect(worth).to_contain_text(words)
    low, high = _ends(page)
    before = _dilution(page)

    page.get_by_role("button", name="Enter Conductivity").click()
    reading = page.get_by_label("Conductivity", exact=True)
    reading.fill("1050")
    expect(page.get_by_text("Expected COD with these readings")).to_be_visible()
    usual = _ends(page)
    assert usual[1] / usual[0] < high / low, "a usual reading narrows the range"
    reading.fill("600")
    expect(page.get_by_text("read as 600")).to_be_visible()
    assert _ends(page)[1] < high
    assert _dilution(page) != before, "a weak sample is diluted less"
    expect(worth).not_to_contain_text("Conductivity")
    reading.fill("600000")
    expect(page.get_by_text("Conductivity lies far outside what was seen here")).to_be_visible()
    assert _ends(page)[1] < 1_000_000, "its pull is bounded"
    page.get_by_label("Visible solids").check()
    expect(page.get_by_text(re.compile("Bring [\\d\u202f]+ mL or more"))).to_be_visible()

    page.get_by_role("link", name="How far to trust this").click()
    expect(page).to_have_url(re.compile(f"/review/trust/{point}"))
    judged = page.get_by_role("row", name="The plan").inner_text()
    assert re.search(r"\d+\sof\s11", judged), judged
    expect(page.get_by_text("Judged by the server on")).to_be_visible()
    page.get_by_role("link", name="All points together").click()
    expect(page.get_by_role("link", name="Hollin Vale Creamery")).to_contain_text("of 11 right")
