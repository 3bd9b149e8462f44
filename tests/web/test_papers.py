"""Papers that print: labels with free codes, run sheet, custody form, waste label."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from app.compliance import codes
from tests.tools import devices
from tests.tools.devices import CODES, Device
from tests.web.conftest import Browser
from tests.web.test_certificates import text_of


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_labels_carry_codes_that_are_free_and_valid(
    browser: Browser, device: Device, tmp_path: Path, paper: str
) -> None:
    browser.push(devices.whole_path(device.by))
    words = text_of(browser.get(f"/api/papers/labels.pdf?count=24&paper={paper}").get_data(), tmp_path)
    found = {word for word in re.findall(rf"\b[{codes.ALPHABET}]{{6}}\b", words)}
    assert len(found) == 24
    assert all(codes.check(code) == code for code in found)
    assert CODES[0] not in found


def test_the_run_sheet_shows_the_rack_and_the_gates(browser: Browser, device: Device, tmp_path: Path) -> None:
    browser.push(devices.whole_path(device.by))
    words = text_of(browser.get("/api/papers/run/run-1.pdf").get_data(), tmp_path)
    for told in (CODES[0], "Run of 30 May, morning", "D-31-014", "20 mL made up to 100 mL", "hood"):
        assert told in words


def test_the_custody_form_names_bottle_holder_and_temperature(
    browser: Browser, device: Device, tmp_path: Path
) -> None:
    browser.push(devices.whole_path(device.by))
    words = text_of(browser.get("/api/papers/hand-over/hand-1.pdf").get_data(), tmp_path)
    for told in (CODES[0], "Hollin Vale Creamery", "laboratory refrigerator", "Maren Ostby"):
        assert told in words


def test_the_waste_label_says_contents_hazards_codes_and_amounts(
    browser: Browser, device: Device, tmp_path: Path
) -> None:
    browser.push(devices.whole_path(device.by))
    words = text_of(browser.get("/api/papers/container/waste.pdf").get_data(), tmp_path)
    for told in ("Container 12", "mercury", "0.24 g", "D002", "D007", "D009", "D011"):
        assert told in words  # 7 tubes x 33.776 mg of mercury: CHK-9.1


def test_an_empty_container_has_a_label_without_codes(
    browser: Browser, device: Device, tmp_path: Path
) -> None:
    browser.push(devices.setting_up(device))
    words = text_of(browser.get("/api/papers/container/waste.pdf").get_data(), tmp_path)
    assert "Container 12" in words
    assert "D009" not in words


def test_a_preparation_sheet_is_told_and_printed(browser: Browser, device: Device, tmp_path: Path) -> None:
    browser.push(devices.whole_path(device.by))
    query = "digestion_ml=1000&acid_ml=500&stock=1000&levels=0,100&dichromate=0.99"
    told = browser.get(f"/api/papers/preparation/high?{query}").get_json()
    assert told["weigh"][0]["substance"].startswith("potassium dichromate")
    assert told["weigh"][0]["amount"] == pytest.approx(10.216 / 0.99)
    assert [one["cod"] for one in told["standards"]] == [0, 100]
    words = text_of(browser.get(f"/api/papers/preparation/high.pdf?{query}").get_data(), tmp_path)
    assert "10.319 g" in words
    assert browser.get("/api/papers/preparation/high?levels=1,x&stock=10").status_code == 422
    assert browser.get("/api/papers/preparation/nothing").status_code == 404


def test_a_lot_has_its_labels(browser: Browser, device: Device, tmp_path: Path) -> None:
    browser.push(devices.whole_path(device.by))
    words = text_of(browser.get("/api/papers/lot/lot-1.pdf").get_data(), tmp_path)
    for told in ("D-31-014", "Digestion solution", "Acid reagent", "Fatal if swallowed"):
        assert told in words
