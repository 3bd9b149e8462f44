"""A detection limit study to its result; a result with its budget, letters and corrected value, to paper."""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from pathlib import Path
from zoneinfo import ZoneInfo

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from app.chemistry.detection_study import months_later
from tests.browser import chromium, told
from tests.browser.server import Server
from tests.browser.test_offline import PATIENT_MS, open_field
from tests.browser.test_whole_path import _records, _text_of, without_controls
from tests.tools import devices
from tests.tools.devices import CODES

CODE = CODES[0]
SPIKES = ("9.2", "10.8", "8.7", "11,1", "9.9", "10.4", "8.5")
BLANKS = ("0.3", "-1.1", "0.8", "1.5", "-0.4", "0.9", None)


@pytest.fixture
def page(server: Server, context_factory: Callable[..., BrowserContext]) -> Page:
    """Open the client of a laboratory that is set up."""
    context = context_factory(**chromium.PHONE, base_url=server.url, timezone_id="America/Denver")
    told.set_up(context)
    page = context.new_page()
    open_field(page)
    return page


def _add(page: Page, tube: str, text: str | None, day: str, batch: str) -> None:
    page.get_by_role("radio", name=tube).click()
    page.get_by_label("Day", exact=True).fill(day)
    page.get_by_label("Batch").fill(batch)
    if text is None:
        page.get_by_label("It gave no number").check()
    else:
        page.get_by_label("Result", exact=True).fill(text)
    page.get_by_role("button", name="Save the result").click()
    if text is not None:
        expect(page.get_by_label("Result", exact=True)).to_have_value("")


def _study(page: Page) -> None:
    """Plan a study, with a spike outside the procedure first, and type its fourteen results."""
    days = [f"{datetime.now(UTC) - timedelta(days=back):%Y-%m-%d}" for back in (12, 11, 3)]
    page.goto("/bench/studies")
    expect(page.get_by_text("No study yet")).to_be_visible()
    page.get_by_role("link", name="Plan a study").click()
    page.get_by_label("Name").fill("High range, first study")
    page.get_by_label("Estimated limit").fill("4")
    page.get_by_label("Spike", exact=True).fill("50")
    for i, day in enumerate(days, start=1):
        page.get_by_label(f"Day {i}").fill(day)
    page.get_by_role("button", name="Save the plan of the study").click()
    expect(page.get_by_role("alert")).to_contain_text("8.0 to 40.0 mg/L")
    page.get_by_label("Spike", exact=True).fill("10")
    page.get_by_role("button", name="Save the plan of the study").click()
    page.wait_for_url("**/bench/study/**")
    expect(page.get_by_text("spikes still missing: 7 of 7")).to_be_visible(timeout=PATIENT_MS)
    for tube, texts in (("spike", SPIKES), ("blank", BLANKS)):
        for i, text in enumerate(texts):
            _add(page, tube, text, days[i % 3], f"Run {i % 3 + 1}")
    page.get_by_role("button", name="Calculate the detection limit").click(timeout=PATIENT_MS)


def _measure(page: Page) -> None:
    page.goto(f"/bench/measure/{CODE}")
    page.get_by_role("button", name="Save the values").click()
    expect(page.get_by_role("alert")).to_contain_text("Type at least one value")
    page.get_by_label("Chloride", exact=True).fill("6,0")
    page.get_by_label("Unit of Chloride").select_option("g/L")
    page.get_by_label("Nitrite, as N", exact=True).fill("12")
    page.get_by_label("How it was measured").fill("strip; photometer")
    page.get_by_role("button", name="Save the values").click()
    page.wait_for_url("**/bench")


def _digest(page: Page) -> None:
    """Tell a run whose sample holds much chloride; the day is after the study's."""
    person = page.context.request.get("/api/state").json()["person"]["id"]
    bench = devices.Device(person)
    texts = [devices.sample(bench, "s", CODE), devices.planned(bench, "r", CODE), *devices.heated(bench, "r")]
    texts += [*devices.read(bench, "r"), *devices.closed(bench, "r")]
    assert {one["result"] for one in told.push(page.context.request, texts)} == {"stored"}


def test_a_study_to_its_limit_and_a_result_with_what_stands_beside_it(page: Page, tmp_path: Path) -> None:
    _study(page)
    expect(page.get_by_role("heading", name="Detection limit", exact=True)).to_be_visible(timeout=PATIENT_MS)
    expect(page.get_by_text("t(0.99, 6) = 3.143")).to_be_visible()
    expect(page.get_by_text("6 of 7 blanks gave a number: the highest counts, 1.50 mg/L")).to_be_visible()
    again = months_later(datetime.now(ZoneInfo("America/Denver")).date(), 13).strftime("%Y-%m")
    due = page.get_by_role("listitem").filter(has_text="calculate the detection limit again")
    expect(due).to_contain_text(f"by {again}")
    (study,) = (body for (kind, _), body in _records(page).items() if kind == "study")
    assert study["limits"][0]["mg_l"] == pytest.approx(3.225, abs=0.01)
    assert study["limits"][0]["input"]["blanks"].count(None) == 1

    _digest(page)
    _measure(page)
    page.goto(f"/review/result/r:{CODE}")
    expect(page.get_by_text("chloride over 1000 mg/L in the tube")).to_be_visible(timeout=PATIENT_MS)
    expect(page.get_by_text("1200 mg/L chloride in the tube is masked")).to_be_visible()
    result = _records(page)["result", f"r:{CODE}"]
    rows = page.get_by_role("row")
    expect(rows.filter(has_text="Reported, uncorrected")).to_contain_text("2\u202f220")
    expect(rows.filter(has_text="nitrite, 12 mg N/L")).to_contain_text("− 13.7")
    expect(rows.filter(has_text="Corrected, for information")).to_contain_text("2\u202f200")
    expect(page.get_by_text("3.2 mg/L in the tube, 16 mg/L after this dilution")).to_be_visible()
    budget = page.get_by_role("heading", name="Where the uncertainty comes from").locator("..")
    factor = f"{result['expanded_u'] / result['u']:.2f}"
    expect(budget).to_contain_text(f"coverage factor {factor} for 95 %")
    expect(budget.locator("svg")).to_have_count(5)

    page.get_by_role("button", name="Accept").click()
    page.get_by_role("button", name="Issue the certificate").click(timeout=PATIENT_MS)
    heading = page.get_by_role("heading", name=re.compile(r"Certificate \d{4}-\d{4}"))
    expect(heading).to_be_visible(timeout=PATIENT_MS)
    number = heading.inner_text().removeprefix("Certificate ")
    pdf = page.context.request.get(f"/api/certificates/{number}.pdf").body()
    words = re.sub(r"\s+", " ", _text_of(pdf, tmp_path))
    assert f"{result['shown']} ± {result['shown_u']} mg/L C" in words
    assert "chloride over 1000 mg/L in the tube, masked by mercury" in words
    assert "nitrite 12 mg N/L taken out: 2200 mg/L" in words
    assert "16 mg/L after dilution" in words
    assert f"coverage factor {factor}" in words


def test_chloride_over_what_the_mercury_masks_stops_the_plan_and_asks_at_the_gate(page: Page) -> None:
    person = page.context.request.get("/api/state").json()["person"]["id"]
    bench = devices.Device(person)
    page.goto("/field/point/outlet-b/take")
    page.get_by_label("Bottle", exact=True).fill(CODE)
    page.get_by_label("Chloride strip").fill("9000")
    page.get_by_role("button", name="Save the sample").click()
    page.wait_for_url("**/field/samples")
    told.push(page.context.request, [devices.received(bench, CODE)])
    page.goto("/bench/plan")
    page.get_by_label(re.compile(CODE)).first.check(timeout=PATIENT_MS)
    page.get_by_label(f"Dilution of {CODE}").select_option("2")
    without_controls(page)
    expect(page.get_by_text("4500 mg/L chloride in the tube is more than the 1998 mg/L")).to_be_visible()
    page.get_by_role("button", name="Save the plan").click()
    expect(page.get_by_role("alert")).to_contain_text("dilute at least 4.5 times")
    page.get_by_label(f"Dilution of {CODE}").select_option("5")
    expect(page.get_by_text("1800 mg/L chloride in the tube is masked")).to_be_visible()
    page.get_by_role("button", name="Save the plan").click()
    page.wait_for_url("**/bench/run/**")

    told.push(page.context.request, [devices.beside(bench, CODE, chloride="> 20000")])
    page.reload()
    page.get_by_role("button", name="Confirm: Hood on").click()
    gate = page.get_by_role("button", name="Confirm: Chloride within the limit")
    expect(page.get_by_text("Over 4000 mg/L chloride in the tube")).to_be_visible(timeout=PATIENT_MS)
    gate.click()
    expect(page.get_by_role("alert")).to_contain_text("say why it is digested all the same")
    page.get_by_label("Why it is digested all the same").fill("twice the mercury(II) sulfate")
    gate.click()
    expect(gate).to_have_count(0)
    expect(page.get_by_text("Everything is on the server.")).to_be_attached(timeout=PATIENT_MS)
    (run,) = (body for (kind, _), body in _records(page).items() if kind == "run")
    assert run["gates"]["chloride_within_limit"]["note"] == "twice the mercury(II) sulfate"
