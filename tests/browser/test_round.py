"""An inspector's round on a phone without a network: seven stops, each with an outcome, and nothing lost."""

from __future__ import annotations

import json
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from typing import Any

from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, tablet
from tests.browser.server import Server

FIRMS = (
    "Aldern Dairy",
    "Brise Laundry",
    "Corv Plating",
    "Dunmere Malt",
    "Eddow Paper",
    "Farl Dyes",
    "Gant Foods",
)


def _points(page: Page) -> dict[str, str]:
    """Register a firm with one outlet each; the first endangers by gas."""
    made: list[tuple[str, str, dict[str, Any]]] = []
    for i, firm in enumerate(FIRMS):
        hazards = ["gases"] if i == 0 else ["traffic"]
        outlet = {"name": "Outlet", "access": "", "hazards": hazards, "sample_kind": "grab"}
        made.append(("discharger.registered", f"d{i}", {"name": firm, "sector": None, "address": ""}))
        made.append(
            (
                "point.registered",
                f"p{i}",
                outlet | {"discharger": f"$d{i}", "flow_device": "90° V-notch weir"},
            )
        )
    ids = tablet.state_all(page, made)
    return {firm: ids[f"p{i}"] for i, firm in enumerate(FIRMS)}


def _yesterdays_sampler(page: Page, point: str) -> None:
    started = (datetime.now(UTC) - timedelta(hours=24)).isoformat(timespec="seconds")
    body: dict[str, Any] = {"point": point, "visit": None, "started_at": started, "paced_by": "time"}
    body |= {"every_minutes": "15", "planned": 96, "cooling": "ice", "seal": "4483", "lock": ""}
    body |= dict.fromkeys(("every_volume", "expected_volume", "aliquot", "bottle_volume", "temperature"))
    tablet.state_all(page, [("sampler.set", "s", body | {"intake": "", "tubing": ""})])


def _plan(page: Page, firms: tuple[str, ...]) -> None:
    page.goto("/field/round/new")
    page.get_by_label("Name").fill("South round")
    for firm in firms:
        page.get_by_label("Add a stop").fill(firm[:5])
        page.get_by_role("button", name=f"+ {firm}, Outlet").click()
    page.get_by_role("button", name="Save the round").click()
    expect(page.locator("#main").get_by_text("0 of 7 stops done")).to_be_visible()


def _arrive(page: Page, firm: str) -> None:
    page.get_by_role("link", name=firm).click()
    page.get_by_label("I introduced myself").check()
    page.get_by_role("button", name="I am here").click()
    expect(page.get_by_role("heading", name="Leave")).to_be_visible()


def _sign(page: Page, name: str) -> None:
    page.get_by_label("Name", exact=True).last.fill(name)
    pad = page.get_by_role("img", name="Field to sign in")
    pad.scroll_into_view_if_needed()
    box = pad.bounding_box()
    assert box
    page.mouse.move(box["x"] + 20, box["y"] + 20)
    page.mouse.down()
    for step in range(1, 5):
        page.mouse.move(box["x"] + 20 + 25 * step, box["y"] + 20 + 15 * (step % 2))
    page.mouse.up()
    expect(page.get_by_role("img", name="Signed")).to_be_visible()


def _leave(page: Page, outcome: str = "", reason: str = "") -> None:
    if outcome:
        page.get_by_role("radio", name=outcome).click()
    if reason:
        page.get_by_label("What happened").fill(reason)
    page.get_by_label("They declined to sign").check()
    page.get_by_role("button", name="End the visit").click()
    expect(page.get_by_role("heading", name="South round")).to_be_visible()


def _bottle(page: Page) -> str:
    page.get_by_role("button", name="No printed label").click()
    code: str = page.get_by_label("Bottle", exact=True).input_value()
    return code


def _grab(page: Page) -> str:
    page.get_by_role("link", name="Take a sample").click()
    code = _bottle(page)
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_role("listitem").filter(has_text=code)).to_be_visible()
    return code


def _gas(page: Page, h2s: str) -> None:
    for label, text in (
        ("Oxygen", "20,9"),
        ("Combustible gas", "0"),
        ("Hydrogen sulfide", h2s),
        ("Carbon monoxide", "0"),
    ):
        page.get_by_label(label).fill(text)
    page.get_by_role("button", name="Save the gas reading").click()


def _first_stop(page: Page) -> str:
    """Gas alarms, a person confirms, a flow is measured, a sample is split and signed for."""
    _arrive(page, FIRMS[0])
    expect(page.get_by_text("No sample yet: no gas reading was taken")).to_be_visible()
    _gas(page, "12")
    expect(page.get_by_text("hydrogen sulfide 12 ppm is at or above 10 ppm")).to_be_visible()
    expect(page.get_by_role("link", name="Take a sample")).to_have_count(0)
    _gas(page, "1")
    page.get_by_label("What was done since the alarm").fill("aired for five minutes")
    page.get_by_role("button", name="I confirm: sampling from outside goes on").click()
    page.get_by_role("button", name="Measure the flow").click()
    page.get_by_label("Head above the crest", exact=True).fill("1")
    page.get_by_label("Unit of Head above the crest").select_option("in")
    expect(page.get_by_text("Outside the rating of 0.20 to 1.25 ft")).to_be_visible()
    page.get_by_label("Head above the crest", exact=True).fill("6")
    page.get_by_label("The gauge may be off by", exact=True).fill("0,24")
    expect(page.get_by_text("12.6 L/s")).to_be_visible()  # 200.32 gal/min, USBR manual ch. 7
    expect(page.get_by_text("−9.6 % to +10.2 %")).to_be_visible()
    page.get_by_role("button", name="Save the flow").click()
    code = _grab(page)
    page.get_by_role("link", name="Split").click()
    page.get_by_label("Who got the other part").fill("L. Marsden")
    _sign(page, "L. Marsden")
    page.get_by_role("button", name="Save the split").click()
    expect(page.get_by_text("split, receipt signed")).to_be_visible()
    _leave(page)
    return code


def _draft_survives(page: Page, url: str) -> None:
    page.get_by_role("link", name=FIRMS[3]).click()
    page.get_by_label("State of production").fill("line 2 down, „washdown“ – 1,5 h")
    page.wait_for_timeout(300)
    page.reload()
    expect(page.get_by_label("State of production")).to_have_value("line 2 down, „washdown“ – 1,5 h")
    page.get_by_role("link", name="Back").click()


def _pick_up(page: Page) -> str:
    _arrive(page, FIRMS[3])
    page.get_by_role("link", name="Pick the composite up").click()
    expect(page.get_by_text("24.0 h from beginning to end")).to_be_visible()
    page.get_by_label("Aliquots taken").fill("92")
    expect(page.get_by_text("95.8 % of 96")).to_be_visible()
    page.get_by_label("Missed ones, and why").fill("four, ice on the intake")
    code = _bottle(page)
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_role("listitem").filter(has_text=code)).to_contain_text("composite")
    _leave(page)
    return code


def _set_sampler(page: Page) -> None:
    _arrive(page, FIRMS[4])
    page.get_by_role("link", name="Set a sampler up").click()
    page.get_by_role("radio", name="Flow").click()
    for label, text in (("One aliquot each", "500"), ("Discharge expected", "25700")):
        page.get_by_label(label, exact=True).fill(text)
        page.get_by_label(f"Unit of {label}").select_option("gal")
    page.get_by_label("One aliquot", exact=True).fill("150")
    page.get_by_label("The bottle holds", exact=True).fill("10")
    expect(page.get_by_text("51 aliquots, 7.65 L.")).to_be_visible()
    page.get_by_role("button", name="The sampler runs").click()
    expect(page.get_by_text("A sampler runs here: 51 aliquots planned")).to_be_visible()
    _leave(page)


def _duplicate(page: Page) -> None:
    _arrive(page, FIRMS[5])
    first = _grab(page)
    page.get_by_role("link", name="Take a sample").click()
    page.get_by_role("radio", name="Field duplicate").click()
    _bottle(page)
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_text("Say which sample it repeats")).to_be_visible()
    page.get_by_label("Repeats").select_option(label=page.locator("option", has_text=first).inner_text())
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_text("duplicate", exact=False).first).to_be_visible()
    _leave(page)


def _records(context: BrowserContext, type_: str) -> list[dict[str, Any]]:
    state = context.request.get("/api/state").json()
    pulled = context.request.get(f"/api/pull?epoch={state['epoch']}&after=0&limit=2000").json()
    return [one["body"] for one in pulled["records"] if one["type"] == type_ and one["body"]]


def test_a_round_of_seven_stops_without_a_network(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    context = context_factory(**chromium.PHONE, base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    points = _points(page)
    _yesterdays_sampler(page, points[FIRMS[3]])
    tablet.settled(page)
    context.set_offline(True)
    _plan(page, FIRMS)
    first = _first_stop(page)
    _arrive(page, FIRMS[1])
    page.get_by_role("radio", name="Entry refused").click()
    page.get_by_role("button", name="End the visit").click()
    expect(page.get_by_text("a visit without a sample is never a blank")).to_be_visible()
    _leave(page, "Entry refused", "shift lead: “not today”; credentials shown, section read out")
    _arrive(page, FIRMS[2])
    _leave(page, "No flow", "weir dry, line closed for repair")
    _draft_survives(page, server.url)
    composite = _pick_up(page)
    _set_sampler(page)
    page.get_by_role("button", name=f"Move {FIRMS[6]}, Outlet up").click()
    expect(page.locator(".stops > li").nth(5)).to_contain_text(FIRMS[6])
    _duplicate(page)
    page.get_by_label("Add a stop").fill("Aldern")
    page.get_by_role("button", name="+ Aldern Dairy, Outlet").click()
    _arrive(page, FIRMS[6])
    _leave(page, "Unsafe", "lightning over the pond")
    expect(page.locator("#main").get_by_text("7 of 8 stops done")).to_be_visible()
    made = [json.loads(row["text"]) for row in tablet.outbox(page)]
    context.set_offline(False)
    page.goto("/field/rounds")
    tablet.settled(page)
    assert _records(context, "held") == []
    visits = {one["point"]: one for one in _records(context, "visit")}
    outcomes = [visits[points[firm]]["outcome"] for firm in FIRMS]
    expected = ["sampled", "refused", "no flow", "sampled", "sampler set", "sampled", "unsafe"]
    assert outcomes == expected
    samples = {one["bottle"]: one for one in _records(context, "sample")}
    assert samples[first]["split"]["signature"]["strokes"].startswith("M")
    assert samples[composite]["composite"]["taken"] == 92
    assert len(samples) == 4
    assert {one["purpose"] for one in samples.values()} == {"sample", "duplicate"}
    assert len(_records(context, "round")[0]["stops"]) == 8
    assert sum(entry["kind"] == "visit.begun" for entry in made) == 7
