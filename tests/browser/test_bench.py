"""The bench's side paths: what goes wrong, what a person decides, and what is digested again.

The straight way from the bottle to the certificate is in test_whole_path.py, the
bench without a server in test_bench_offline.py.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from typing import Any

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, told
from tests.browser.server import Server
from tests.browser.test_offline import PATIENT_MS, open_field
from tests.browser.test_whole_path import CODE, GATES, _records, confirm, plan, receive, without_controls
from tests.tools import devices

Contexts = Callable[..., BrowserContext]
SPENT = ("0.421", "0.418")


@pytest.fixture
def bench(server: Server, context_factory: Contexts) -> Page:
    """Open the bench of a laboratory that is set up, with one bottle taken."""
    context = context_factory(**chromium.DESK, base_url=server.url, timezone_id="America/Denver")
    person = told.set_up(context)
    told.push(context.request, [devices.sample(devices.Device(person), "sample-1", CODE)])
    page = context.new_page()
    open_field(page)
    page.goto("/bench")
    expect(page.get_by_text(CODE)).to_be_visible(timeout=PATIENT_MS)
    return page


def _sent(page: Page) -> None:
    expect(page.get_by_text("Everything is on the server.")).to_be_attached(timeout=PATIENT_MS)


def _heat(page: Page) -> None:
    """Confirm every gate before the heat; the probe is a little over the recipe's 150 degrees C."""
    for title in GATES:
        confirm(page, title)
    page.get_by_label("Independent probe").fill("150,4")
    confirm(page, "Block at temperature")
    page.get_by_role("button", name="Start heating now").click()
    expect(page.get_by_role("timer")).to_be_visible()


def _digest(page: Page) -> None:
    """Heat with a reload in the middle, cool, open."""
    _heat(page)
    begun = datetime.now(UTC)
    page.clock.set_fixed_time(begun + timedelta(minutes=60))
    page.reload()
    expect(page).to_have_title(re.compile(r"^(59|1:00|1:01):\d\d heating"))
    page.clock.set_fixed_time(begun + timedelta(minutes=125))
    page.reload()
    expect(page).to_have_title(re.compile("^The digestion is over"))
    page.get_by_role("button", name="The tubes are out of the block").click()
    expect(page.get_by_role("heading", name="Cooling")).to_be_visible()
    page.clock.set_fixed_time(begun + timedelta(minutes=150))
    page.reload()
    confirm(page, "Cooled")


def _at(page: Page, position: int) -> None:
    expect(page.get_by_role("heading", name=re.compile(f"Position {position}:"))).to_be_visible()


def _type(page: Page, position: int, text: str, colour: str = "") -> None:
    _at(page, position)
    if colour:
        page.get_by_role("radio", name=colour).click()
    page.get_by_label("Absorbance").fill(text)
    page.get_by_label("Absorbance").press("Enter")


def _run(page: Page) -> dict[str, Any]:
    (run,) = (body for (kind, _), body in _records(page).items() if kind == "run")
    return dict(run)


def _correct_the_first(page: Page) -> None:
    """Go back with the arrow; a correction is refused without its reason."""
    _at(page, 2)
    page.get_by_label("Absorbance").press("ArrowUp")
    _type(page, 1, "0.011")
    expect(page.get_by_text("say why the reading changes")).to_be_visible()
    page.get_by_label("Why it changes").fill("typed a digit twice")
    page.get_by_label("Why it changes").press("Enter")


def _leave_out(page: Page, position: int) -> None:
    """Leave a tube out; no cause stands there by itself."""
    _at(page, position)
    page.get_by_role("button", name="Leave this tube out").click()
    page.get_by_role("button", name="Leave it out").click()
    expect(page.get_by_text("Choose the cause that was seen.")).to_be_visible()
    page.get_by_label("Cause").select_option("cap leaked")
    page.get_by_role("button", name="Leave it out").click()
    expect(page.get_by_text("Left out: cap leaked")).to_be_visible()


def test_an_over_range_sample_is_decided_upon_and_waits_at_the_advised_dilution(bench: Page) -> None:
    page = bench
    receive(page)
    plan(page)
    _digest(page)
    _type(page, 1, "0.111")
    _correct_the_first(page)
    for position, text in ((2, "0.010"), (3, "0,012"), (4, "0.2015"), (5, SPENT[0]), (6, SPENT[1])):
        _type(page, position, text, "green" if position > 4 else "")
    _leave_out(page, 7)
    page.get_by_role("button", name=re.compile("^Position 8,")).click()
    _type(page, 8, "0.2021")
    page.get_by_role("button", name="All read: calculate").click()

    expect(page.get_by_role("heading", name=f"{CODE} is over range")).to_be_visible(timeout=PATIENT_MS)
    expect(page.get_by_text("Both tubes went green: the dichromate is spent")).to_be_visible()
    confirm(page, "Waste container")
    page.get_by_role("button", name="Close the run").click()
    expect(page.get_by_text(f"Give the reason for: over {CODE}.")).to_be_visible()
    page.get_by_label("Reason").fill("diluted too little")
    page.get_by_role("button", name="Close the run").click()
    expect(page.get_by_role("heading", name="Closed")).to_be_visible()
    _sent(page)

    run = _run(page)
    assert run["heating"]["temperature"] == {"text": "150.4", "unit": "Cel"}, "the probe's, not the recipe's"
    first, *others = run["tubes"]
    assert [one["absorbance"]["text"] for one in first["readings"]] == ["0.111", "0.011"]
    assert first["readings"][1]["reason"] == "typed a digit twice"
    assert [tube["colour"] for tube in others] == [None, None, None, "green", "green", None, None]
    (stated,) = [body for (kind, _), body in _records(page).items() if kind == "result"]
    advised = stated["next_dilution"]["dilution_factor"]
    assert advised > 5
    expect(page.get_by_text(f"Repeat at 1:{advised:g}.")).to_be_visible()

    page.goto("/bench")
    waits = page.get_by_role("navigation", name="Bottles that wait")
    expect(waits).to_contain_text(f"to repeat after {run['name']}")
    expect(waits).to_contain_text(f"next: 1:{advised:g}")
    page.goto("/bench/plan")
    page.get_by_label(re.compile(CODE)).first.check()
    expect(page.get_by_label(f"Dilution of {CODE}")).to_have_value(f"{advised:g}")
    without_controls(page)
    page.get_by_role("button", name="Save the plan").click()
    page.wait_for_url("**/bench/run/**")
    _sent(page)
    records = _records(page)
    again = [body for (kind, _), body in records.items() if kind == "run" and body["state"] == "planned"]
    assert {tube["dilution"]["factor"] for tube in again[0]["tubes"] if tube["bottle"]} == {advised}
    assert len(records["bottle", CODE]["results"]) == 1, "the first result is kept"
    page.goto("/bench")
    expect(page.get_by_text("No bottle waits")).to_be_visible()


def test_an_interrupted_digestion_fails_with_its_reason_and_its_bottle_waits_again(bench: Page) -> None:
    page = bench
    receive(page)
    plan(page)
    _heat(page)
    page.get_by_role("button", name="It was interrupted").click()
    page.get_by_role("button", name="The run failed").click()
    expect(page.get_by_text("Say what interrupted it")).to_be_visible()
    page.get_by_label("What happened").fill("power lost for twenty minutes")
    page.get_by_role("button", name="The run failed").click()
    expect(page.get_by_role("heading", name="The run failed")).to_be_visible()
    _sent(page)
    run = _run(page)
    assert (run["state"], run["heating"]["reason"]) == ("failed", "power lost for twenty minutes")
    page.goto("/bench")
    expect(page.get_by_role("navigation", name="Bottles that wait")).to_contain_text("its run failed")
    page.goto("/bench/plan")
    page.get_by_label(re.compile(CODE)).first.check()
    expect(page.get_by_label(f"Dilution of {CODE}")).to_have_value("5")
    without_controls(page)
    page.get_by_role("button", name="Save the plan").click()
    page.wait_for_url("**/bench/run/**")
    _sent(page)
    assert len(_records(page)["bottle", CODE]["runs"]) == 2


@pytest.mark.parametrize(
    ("change", "words", "decision"),
    [
        ({"temperature": "7,2"}, "7,2 °C on receipt, above 6 °C", "qualified"),
        ({"ph": "2,4"}, "pH 2,4, not below 2", "qualified"),
        ({"container": "leaking"}, "container leaking", "rejected"),
        ({"agrees": ""}, "label and record differ", "on hold"),
    ],
    ids=["warm", "not-acid", "leaking", "label"],
)
def test_a_bottle_that_no_tablet_told_of_is_received_with_what_speaks_against_it(
    bench: Page, change: dict[str, str], words: str, decision: str
) -> None:
    page, code = bench, devices.CODES[9]
    page.goto("/bench/receive")
    page.get_by_label("Bottle", exact=True).fill(code)
    expect(page.get_by_text("The entry of this sample has not arrived yet")).to_be_visible()
    page.get_by_label("Temperature on receipt").fill(change.get("temperature", "3,8"))
    page.get_by_label("pH, strip on a poured portion").fill(change.get("ph", "1.7"))
    if "container" in change:
        page.get_by_role("radio", name=change["container"]).click()
    if "agrees" in change:
        page.get_by_label("Label, custody form and plan agree").uncheck()
    expect(page.get_by_role("listitem").filter(has_text=words)).to_be_visible()
    expect(page.get_by_role("radio", name=decision)).to_have_attribute("aria-checked", "true")
    page.get_by_role("button", name="Save the receipt").click()
    page.wait_for_url("**/bench")
    _sent(page)
    received = _records(page)["bottle", code]["received"]
    assert (received["decision"], received["reasons"]) == (decision, [words])


def test_a_dilution_that_no_known_glassware_makes_is_not_planned(bench: Page) -> None:
    page = bench
    receive(page)
    _sent(page)
    changed = {"settings": {"dilutions": [1, 3, 5]}, "reason": "a series of our own"}
    programme = next(id_ for kind, id_ in _records(page) if kind == "programme")
    told_of = page.context.request.get("/api/state").json()["person"]["id"]
    told.push(page.context.request, [devices.Device(told_of).make("settings.changed", programme, changed)])
    page.goto("/bench/plan")
    page.get_by_label(re.compile(CODE)).first.check()
    page.get_by_label(f"Dilution of {CODE}").select_option("3", timeout=PATIENT_MS)
    expect(
        page.get_by_text("No class A pipette and flask are known here that make 1:3").first
    ).to_be_visible()
    without_controls(page)
    page.get_by_role("button", name="Save the plan").click()
    expect(page.get_by_role("alert")).to_contain_text("choose another dilution")
    assert "/bench/plan" in page.url
    page.get_by_label(f"Dilution of {CODE}").select_option("5")
    page.get_by_role("button", name="Save the plan").click()
    page.wait_for_url("**/bench/run/**")


@pytest.mark.parametrize(
    "path",
    ["", "/receive", "/plan", "/measure", "/studies", "/studies/new", "/stores", "/stores/calibration"]
    + [f"/stores/{what}" for what in ("lot", "instrument", "container", "recipe")],
)
def test_first_aid_is_one_tap_away_on_every_screen_of_the_bench(bench: Page, path: str) -> None:
    bench.goto(f"/bench{path}")
    bench.get_by_role("link", name="Emergency and first aid").click()
    expect(bench.get_by_role("heading", name="Emergency and first aid")).to_be_visible()
