"""One bottle, from the discharge point to the signed certificate, through the screens.

The server is killed between logging and receipt, the browser is killed after
"saved on this tablet", and the page is reloaded in mid-digestion.
"""

from __future__ import annotations

import json
import re
import subprocess
import sys
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

from playwright.sync_api import Page, expect

from tests.browser import chromium, told
from tests.browser.conftest import Profile
from tests.browser.server import ROOT, Server
from tests.browser.test_offline import PATIENT_MS, open_field, sign_in, take_sample, where
from tests.tools.devices import CODES

CODE = CODES[5]
READINGS = ("0.011", "0.010", "0,012", "0.2015", "0.179", "0.181", "0.180", "0.2021")
GATES = ("Hood on", "Chloride within the limit", "Order of addition", "Caps tight, tubes sound")


def receive(page: Page) -> None:
    """Receive the bottle at the bench."""
    page.goto("/bench/receive")
    page.get_by_label("Bottle", exact=True).fill(CODE)
    expect(page.get_by_text("Hollin Vale Creamery, Outlet B")).to_be_visible()
    page.get_by_label("Temperature on receipt").fill("3,8")
    page.get_by_label("pH, strip on a poured portion").fill("1.7")
    expect(page.get_by_role("radio", name="accepted")).to_have_attribute("aria-checked", "true")
    page.get_by_role("button", name="Save the receipt").click()
    page.wait_for_url("**/bench")


def without_controls(page: Page) -> None:
    """Leave control, duplicate and spike out of the rack, with the reason."""
    for name in ("Laboratory control", "Duplicate", "Spike"):
        page.get_by_label(name, exact=True).uncheck()
        page.get_by_label(f"Why no {name.lower()}").fill("a single bottle, tried out")


def plan(page: Page) -> None:
    """Plan a run with the bottle at 1:5; the rack fills itself."""
    page.goto("/bench/plan")
    page.get_by_label(re.compile(CODE)).first.check()
    page.get_by_label(f"Dilution of {CODE}").select_option("5")
    without_controls(page)
    expect(page.get_by_text("8 of 25 positions")).to_be_visible()
    page.get_by_role("button", name="Save the plan").click()
    page.wait_for_url("**/bench/run/**")


def confirm(page: Page, title: str) -> None:
    """Confirm one gate."""
    page.get_by_role("button", name=f"Confirm: {title}").click()
    expect(page.get_by_role("button", name=f"Confirm: {title}")).to_have_count(0)


def digest(page: Page) -> None:
    """Pass the gates, heat, reload in the middle, cool."""
    for title in GATES:
        confirm(page, title)
    probe = page.get_by_label("Independent probe")
    probe.fill("141")
    page.get_by_role("button", name="Confirm: Block at temperature").click()
    expect(page.get_by_text("not 150 within 2")).to_be_visible()
    probe.fill("150,4")
    confirm(page, "Block at temperature")
    page.get_by_role("button", name="Start heating now").click()
    expect(page.get_by_role("timer")).to_be_visible()
    begun = datetime.now(UTC)  # the page's clock ran freely until here
    page.clock.set_fixed_time(begun + timedelta(minutes=60))
    page.reload()
    expect(page.get_by_role("timer")).to_contain_text(re.compile(r"(59|1:00|1:01):\d\d"))
    page.clock.set_fixed_time(begun + timedelta(minutes=125))
    page.reload()
    page.get_by_role("button", name="The tubes are out of the block").click()
    expect(page.get_by_role("timer")).to_contain_text(re.compile(r"(19|20):\d\d"))
    page.clock.set_fixed_time(begun + timedelta(minutes=150))
    page.reload()
    confirm(page, "Cooled")


def read(page: Page) -> None:
    """Type every reading by the keyboard: number, Enter, number, Enter."""
    for position, text in enumerate(READINGS, start=1):
        expect(page.get_by_role("heading", name=re.compile(f"Position {position}:"))).to_be_visible()
        page.get_by_label("Absorbance").fill(text)
        page.get_by_label("Absorbance").press("Enter")
    page.get_by_role("button", name="All read: calculate").click()


def close(page: Page) -> None:
    """Choose the waste container and close the run."""
    expect(page.get_by_text("3 tubes agree.")).to_be_visible(timeout=PATIENT_MS)
    confirm(page, "Waste container")
    page.get_by_role("button", name="Close the run").click()
    expect(page.get_by_role("heading", name="Closed")).to_be_visible(timeout=PATIENT_MS)


def certify(page: Page) -> str:
    """Accept the result beside its limit and issue the certificate; return its number."""
    page.goto("/review")
    page.get_by_role("link", name=re.compile("to review")).first.click()
    page.get_by_role("button", name="Accept").click()
    page.get_by_role("button", name="Issue the certificate").click(timeout=PATIENT_MS)
    heading = page.get_by_role("heading", name=re.compile(r"Certificate \d{4}-\d{4}"))
    expect(heading).to_be_visible(timeout=PATIENT_MS)
    return heading.inner_text().removeprefix("Certificate ")


def _records(page: Page) -> dict[tuple[str, str], Any]:
    state = page.context.request.get("/api/state").json()
    pulled = page.context.request.get(f"/api/pull?epoch={state['epoch']}&after=0&limit=2000").json()
    return {(one["type"], one["id"]): one["body"] for one in pulled["records"]}


def _text_of(pdf: bytes, folder: Path) -> str:
    path = folder / "certificate.pdf"
    path.write_bytes(pdf)
    command = ["pdftotext", "-layout", str(path), "-"]
    return subprocess.run(command, capture_output=True, text=True, check=True).stdout


def _calculate(given: dict[str, Any]) -> dict[str, Any]:
    run = subprocess.run(
        [sys.executable, "-m", "app", "calculate"],
        input=json.dumps(given),
        capture_output=True,
        text=True,
        check=True,
        cwd=ROOT,
    )
    answer: dict[str, Any] = json.loads(run.stdout)
    return answer


def test_one_bottle_from_the_discharge_point_to_the_certificate(
    server: Server, profile_factory: Callable[..., Profile], tmp_path: Path
) -> None:
    profile = profile_factory(**chromium.DESK, base_url=server.url, timezone_id="America/Denver")
    page = profile.open()
    told.set_up(page.context)
    open_field(page)
    server.kill()
    take_sample(page, CODE)
    profile.kill()
    page = profile.open()
    assert "on this tablet" in where(page, CODE)
    server.start()
    sign_in(page)
    page.goto("/field/samples")
    expect(page.locator("li").filter(has_text=CODE).first).to_contain_text(
        "on the server", timeout=PATIENT_MS
    )

    receive(page)
    plan(page)
    digest(page)
    read(page)
    close(page)
    number = certify(page)

    pdf = page.context.request.get(f"/api/certificates/{number}.pdf").body()
    assert pdf == page.context.request.get(f"/api/certificates/{number}.pdf").body()
    records = _records(page)
    run = next(body for (kind, _), body in records.items() if kind == "run")
    result = next(body for (kind, _), body in records.items() if kind == "result")
    answer = _calculate(run["input"])
    assert answer == run["answer"]
    (sample,) = answer["samples"]
    reported = f"{sample['reported']['cod']:.0f}", f"{sample['reported']['expanded_u']:.0f}"
    assert (result["shown"], result["shown_u"]) == reported
    words = re.sub(r"\s+", " ", _text_of(pdf, tmp_path))
    assert f"{reported[0]} ± {reported[1]} mg/L" in words
    assert number in words
    assert CODE in words
    verified = page.context.request.get(f"/verify/{number}")
    assert records["certificate", number]["data_digest"] in verified.text()
