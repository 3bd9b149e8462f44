"""Certificates: only of what is decided, no gaps, the same bytes for ever, calculate's digits."""

from __future__ import annotations

import hashlib
import json
import re
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from app.documents.verify import embedded_data
from tests.tools import devices
from tests.tools.devices import CODES, Device
from tests.web.conftest import Browser
from tests.web.test_errors_and_headers import assert_canonical

RESULT = f"run-1:{CODES[0]}"


def issue(browser: Browser, result: str = RESULT) -> Any:
    """Ask for a certificate."""
    return browser.ask("POST", "/api/certificates", {"result": result, "meaning": "authorised"})


def text_of(pdf: bytes, folder: Path) -> str:
    """Read a PDF's text back."""
    path = folder / "c.pdf"
    path.write_bytes(pdf)
    command = ["pdftotext", "-layout", str(path), "-"]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    return " ".join(done.stdout.split())


def test_the_paper_says_the_digits_of_calculate(browser: Browser, device: Device, tmp_path: Path) -> None:
    assert set(browser.results(devices.whole_path(device.by))) == {"stored"}
    number = issue(browser).get_json()["number"]
    run = browser.records()["run", "run-1"]
    done = subprocess.run(
        [sys.executable, "-m", "app", "calculate"],
        input=json.dumps(run["input"]),
        capture_output=True,
        text=True,
        check=True,
    )
    answer = json.loads(done.stdout)
    assert answer == run["answer"]
    (sample,) = answer["samples"]
    pdf = browser.get(f"/api/certificates/{number}.pdf").get_data()
    told = f"{sample['reported']['cod']:.0f} ± {sample['reported']['expanded_u']:.0f} mg/L"
    assert told in text_of(pdf, tmp_path)
    inside = embedded_data(pdf)
    assert inside["result"]["reported"] == f"{sample['reported']['cod']:.0f}"
    assert inside["number"] == number


def test_what_was_issued_is_the_same_bytes_for_ever(browser: Browser, device: Device) -> None:
    browser.push(devices.whole_path(device.by))
    made = issue(browser).get_json()
    first = browser.get(f"/api/certificates/{made['number']}.pdf").get_data()
    browser.push([devices.setting_up(device)[1]])
    assert browser.get(f"/api/certificates/{made['number']}.pdf").get_data() == first
    assert hashlib.sha256(first).hexdigest() == made["digest"]
    assert browser.records()["certificate", made["number"]]["digest"] == made["digest"]
    again = assert_canonical(issue(browser), 422)
    assert "already" in again["error"]


def test_numbers_have_no_gaps_when_an_attempt_fails(browser: Browser, device: Device) -> None:
    assert_canonical(issue(browser, "nothing"), 422)
    browser.push(devices.whole_path(device.by))
    first = issue(browser).get_json()["number"]
    assert_canonical(issue(browser), 422)
    other = devices.whole_path(device.by, CODES[1], "run-2")[9:]
    texts = [text.replace('"sample-1"', '"sample-2"').replace('"hand-1"', '"hand-2"') for text in other]
    assert set(browser.results(texts)) == {"stored"}
    second = issue(browser, f"run-2:{CODES[1]}").get_json()["number"]
    year, count = first.split("-")
    assert (count, second) == ("0001", f"{year}-0002")


@pytest.mark.parametrize("left_out", ["result.reviewed", "run.closed"])
def test_an_undecided_result_is_not_certified(browser: Browser, device: Device, left_out: str) -> None:
    texts = [t for t in devices.whole_path(device.by) if json.loads(t)["kind"] != left_out]
    browser.push(texts)
    body = assert_canonical(issue(browser), 422)
    assert "result" in body["fields"]
    assert not [1 for kind, _ in browser.records() if kind == "certificate"]


def test_anybody_can_verify_a_number(browser: Browser, device: Device) -> None:
    browser.push(devices.whole_path(device.by))
    made = issue(browser).get_json()
    browser.ask("DELETE", "/api/session", {})
    page = browser.get(f"/verify/{made['number']}")
    assert page.status_code == 200
    assert made["data_digest"] in page.text
    assert "valid" in page.text
    unknown = browser.get("/verify/<b>2031-9999")
    assert unknown.status_code == 404
    assert "<b>" not in unknown.text
    assert_canonical(browser.get(f"/api/certificates/{made['number']}.pdf"), 401)


def test_the_paper_names_qualifiers_and_the_corrected_value_beside_the_reported_one(
    browser: Browser, device: Device, tmp_path: Path
) -> None:
    """The reported number is the uncorrected one; chloride is a letter, never a subtraction."""
    told = devices.whole_path(device.by)
    device = Device(device.by)
    assert set(browser.results(told[:-1])) == {"stored"}
    browser.push([devices.beside(device, CODES[0], chloride="6000", nitrite="12"), told[-1]])
    result = browser.records()["result", RESULT]
    number = issue(browser).get_json()["number"]
    pdf = browser.get(f"/api/certificates/{number}.pdf").get_data()
    words = text_of(pdf, tmp_path)
    assert f"{result['shown']} ± {result['shown_u']} mg/L C" in words, "the letter stands at the number"
    assert "chloride over 1000 mg/L in the tube, masked by mercury" in words
    corrected = result["corrected"]["shown"]
    assert f"nitrite 12 mg N/L taken out: {corrected} mg/L" in words
    assert "The reported result is the uncorrected one" in words
    assert float(corrected) == pytest.approx(result["cod"] - 12 * 1.1422, abs=5.01), "to three figures"
    inside = embedded_data(pdf)
    assert inside["result"]["reported"] == result["shown"]
    assert [one["name"] for one in inside["corrected"]["corrections"]] == ["nitrite"]
    assert "Bias carries" in words
    assert "coverage factor 1.96 from the normal distribution" in words


def test_a_bound_on_paper_has_its_detection_limit_and_no_budget(
    browser: Browser, device: Device, tmp_path: Path
) -> None:
    told = devices.whole_path(device.by)
    low = [text.replace('"0.179"', '"0.012"').replace('"0.181"', '"0.013"') for text in told]
    low = [text.replace('"0.180"', '"0.0125"') for text in low]
    start = len(devices.setting_up(Device(device.by)))
    assert set(browser.results([*low[:start], *devices.study(Device(device.by))])) == {"stored"}
    assert set(browser.results(low[start:])) == {"stored"}
    number = issue(browser).get_json()["number"]
    words = text_of(browser.get(f"/api/certificates/{number}.pdf").get_data(), tmp_path)
    assert "< 100 mg/L" in words
    assert re.search(r"16 mg/L after dilution, 3.2 mg/L in( [A-Za-z ,]*)? the tube, calculated", words)
    assert "2031-06-01" in words
    assert "Uncertainty budget" not in words
