"""A rack with control, duplicate and spike; a spike that fails is decided upon; a baseline is frozen."""

from __future__ import annotations

import re
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from typing import Any

from playwright.sync_api import BrowserContext, expect

from tests.browser import chromium, told
from tests.browser.server import Server
from tests.browser.test_bench import _digest, _sent, _type
from tests.browser.test_offline import PATIENT_MS, open_field
from tests.browser.test_whole_path import CODE, _records, confirm, receive
from tests.tools import devices

READINGS = {1: "0.011", 2: "0.010", 3: "0.012", 4: "0.2012", 5: "0.163", 6: "0.179", 7: "0.181", 8: "0.180"}
LATER = {9: "0.182", 10: "0.226", 11: "0.2021"}
CHART = "ver:high:photometer"


def verified(person: str, count: int) -> list[str]:
    """Return runs of three blanks and a verification, that a chart can be frozen from."""
    device = devices.Device(person, now=datetime.now(UTC) - timedelta(days=20))
    tubes: list[dict[str, Any]] = [{"position": p, "role": "blank"} for p in (1, 2, 3)]
    tubes.append({"position": 4, "role": "verification", "expected": "500"})
    texts = []
    for i in range(count):
        run, read = f"early-{i:02}", ("0.011", "0.010", "0.012", f"0.20{(i * 7) % 5 + 10}")
        texts += [devices.planned(device, run, CODE, tubes=tubes, name=f"Early run {i + 1}")]
        texts += [*devices.heated(device, run), *devices.read(device, run, read)]
    return texts


def test_a_rack_with_its_controls_and_a_chart_with_a_frozen_baseline(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    context = context_factory(**chromium.DESK, base_url=server.url, timezone_id="America/Denver")
    person = told.set_up(context)
    texts = verified(person, 20)
    for i in range(0, len(texts), 200):
        answers = told.push(context.request, texts[i : i + 200])
        assert {one["result"] for one in answers} == {"stored"}
    told.push(context.request, [devices.sample(devices.Device(person), "sample-1", CODE)])
    page = context.new_page()
    open_field(page)
    page.goto(f"/bench/charts/{CHART}")
    page.get_by_text("Freeze a baseline").click(timeout=PATIENT_MS)
    page.get_by_role("button", name="Freeze these limits").click()
    expect(page.get_by_role("alert")).to_contain_text("Give the baseline a name")
    page.get_by_label("Name of the baseline").fill("early runs")
    page.get_by_label("First run").select_option(label="Early run 2")
    page.get_by_role("button", name="Freeze these limits").click()
    expect(page.get_by_role("alert")).to_contain_text("19 results: a baseline needs at least 20")
    page.get_by_label("First run").select_option(label="Early run 1")
    page.get_by_role("button", name="Freeze these limits").click()
    expect(page.get_by_text("“early runs”: 20 results, Early run 1 to Early run 20")).to_be_visible(
        timeout=PATIENT_MS
    )
    expect(page.get_by_role("img", name=re.compile("Action limits .* of “early runs”"))).to_be_visible()

    receive(page)
    page.goto("/bench/plan")
    page.get_by_label(re.compile(CODE)).first.check()
    page.get_by_label(f"Dilution of {CODE}").select_option("5")
    expect(page.get_by_text("11 of 25 positions")).to_be_visible()
    expect(page.get_by_text("Adds 196 mg/L in the tube")).to_be_visible()
    page.get_by_role("button", name="Save the plan").click()
    expect(page.get_by_role("alert")).to_contain_text("Type the known value of the laboratory control")
    page.get_by_label("Known value of the control").fill("400")
    page.get_by_label("Made from").fill("glucose and glutamic acid")
    page.get_by_text("Places in the block").click()
    page.get_by_role("button", name=re.compile("^Position 9,")).click()
    page.get_by_role("button", name=re.compile("^Position 10,")).click()
    expect(page.get_by_role("button", name=f"Position 9, {CODE} spike, to read")).to_be_visible()
    page.get_by_role("button", name="Place them by themselves again").click()
    page.get_by_role("button", name="Save the plan").click()
    page.wait_for_url("**/bench/run/**")
    _digest(page)
    for position, text in (READINGS | LATER).items():
        _type(page, position, text)
    page.get_by_role("button", name="All read: calculate").click()

    spike = page.get_by_role("listitem").filter(has_text=f"Spike {CODE} spike")
    expect(spike).to_contain_text("does not hold", timeout=PATIENT_MS)
    expect(spike).to_contain_text("the control holds, so the matrix of this sample is in doubt")
    expect(page.get_by_role("listitem").filter(has_text="Laboratory control position 5")).to_contain_text(
        "holds"
    )
    expect(page.get_by_text("start values until 20 own sets exist; 0 so far")).to_be_visible()
    expect(page.get_by_text("the setting until 20 own controls exist; 0 so far")).to_be_visible()
    confirm(page, "Waste container")
    fired = page.get_by_role("listitem").filter(has_text="verification, position 11")
    expect(fired).to_contain_text("beyond the action limit of 'early runs'")
    for i in range(2):
        page.get_by_role("radio", name="accept with a note").nth(i).click()
    page.get_by_label("Reason").last.fill("lamp warmed up late")
    page.get_by_role("button", name="Close the run").click()
    expect(page.get_by_role("alert")).to_contain_text(f"Give the reason for: spike {CODE} spike.")
    page.get_by_label("Reason").first.fill("fat in the sample; flagged")
    page.get_by_role("button", name="Close the run").click()
    expect(page.get_by_role("heading", name="Closed")).to_be_visible()
    _sent(page)

    records = _records(page)
    (run,) = [body for (kind, _), body in records.items() if kind == "run" and body["checks"][1:][4:]]
    roles = [tube["role"] for tube in run["tubes"]]
    assert roles == [
        *["blank"] * 3,
        "verification",
        "control",
        *["sample"] * 3,
        "duplicate",
        "spike",
        "verification",
    ]
    assert (run["state"], run["without"]) == ("closed", [])
    assert [one["what"] for one in run["closed"]["decisions"]] == ["spike", "control chart"]
    assert [one["bottle"] for (kind, _), one in records.items() if kind == "result"] == [CODE]
    chart = records["chart", CHART]
    assert [point["base"] for point in chart["points"]] == [True] * 20 + [False] * 2
    assert [bool(point["fired"]) for point in chart["points"]][-2:] == [False, True]
    page.goto("/settings")
    expect(page.get_by_role("heading", name="The laboratory's own")).to_be_visible()
