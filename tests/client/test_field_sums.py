"""The tablet's sums of a stop are the server's: flows, gas alarms, meter checks, pacing, shares by flow."""

from __future__ import annotations

import json
import random
import shutil
import subprocess
from pathlib import Path
from typing import Any

import pytest

from app.compliance.compositing import manual_volumes_ml, pacing
from app.compliance.flow import LARGE_FLUMES, SMALL_FLUMES
from app.compliance.meters import Point, judge
from app.journal import units
from app.journal.kinds.rounds import WEIRS
from app.records.flows import flow_of
from app.records.handlers.rounds import readings_of
from app.safety.gas import gas_alarms
from app.web.shell import words_text

SCRIPT = Path(__file__).with_name("field_sums.mjs")
rng = random.Random(1889)


def length(number: float, unit: str) -> dict[str, str]:
    """Return a typed length, now and then with a comma."""
    text = f"{number:.4g}"
    return {"text": text.replace(".", ",") if rng.random() < 0.3 else text, "unit": unit}


def by_head() -> dict[str, Any]:
    """Return a made-up reading at a weir or flume, in and out of its rating."""
    kind = rng.choice([*WEIRS, "parshall", "parshall"])
    unit, per_ft = rng.choice([("ft", 1.0), ("in", 12.0), ("cm", 30.48), ("m", 0.3048)])
    head = rng.uniform(0.02, 3.0)
    return {
        "device": {
            "type": kind,
            "size": rng.choice([*SMALL_FLUMES, *LARGE_FLUMES]) if kind == "parshall" else None,
            "crest": length(rng.uniform(0.5, 6) * per_ft, unit) if "rect" in kind else None,
            "crest_height": length(rng.uniform(0.5, 4) * per_ft, unit) if "suppressed" in kind else None,
        },
        "head": length(head * per_ft, unit),
        "head_error": length(0.02 * per_ft, unit) if rng.random() < 0.6 else None,
        "tail": length(head * rng.random() * per_ft, unit)
        if kind == "parshall" and rng.random() < 0.6
        else None,
        **dict.fromkeys(("volume", "seconds", "register_start", "register_end", "count")),
        "meter": {"text": "120", "unit": "gpm"} if rng.random() < 0.5 else None,
    }


def counted(start: str, end: str) -> dict[str, Any]:
    """Return two readings of a register of 10 gal a count."""
    device = {"type": "totalizer", "size": None, "crest": None, "crest_height": None}
    body: dict[str, Any] = dict.fromkeys(("head", "head_error", "tail", "volume", "seconds", "meter"))
    count = {"text": "10", "unit": "gal"}
    return body | {"device": device, "register_start": start, "register_end": end, "count": count}


def timed(volume: str, seconds: str) -> dict[str, Any]:
    """Return a bucket and a watch."""
    body = counted("", "") | dict.fromkeys(("register_start", "register_end", "count"))
    return body | {
        "device": body["device"] | {"type": "bucket"},
        "volume": {"text": volume, "unit": "gal"},
        "seconds": seconds,
    }


FLOWS = [by_head() for _ in range(200)]
FLOWS += [counted("998750", "001320"), counted("000010", "000150"), timed("5,00", "12.4")]
GASES = ("oxygen_percent", "lel_percent", "h2s_ppm", "co_ppm")
GAS = [
    dict(zip(GASES, row, strict=True))
    for row in (
        ("20,9", "0", "0", "0"),
        ("19.4", "10", "9.9", "35"),
        ("23.6", "9.9", "10", "34"),
        ("19.5", "0", None, "0"),
        (None, "12", "0", None),
    )
]
CHECKS = [
    ("pH", [("7.00", "7.10"), ("4,01", "4.12")]),
    ("conductivity", [("1413", "1554.3"), ("1413", "1555")]),
    ("temperature", [("20", "19.5")]),
]
SHARES = [(2000.0, [10.0, 30.0, 20.0, 5.0]), (1500.0, [0.0, 2.5])]
PACING = [(25_700.0, 500.0, 150.0, 10.0), (24 * 60.0, 15.0, 100.0, 9.6), (0.3, 0.1, 100.0, 9.0)]


@pytest.fixture(scope="module")
def tablet() -> dict[str, Any]:
    """Return what the tablet's code answers."""
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the tablet's sums of a stop are not compared")
    checks = [
        {"quantity": q, "points": [{"reference": a, "read": b} for a, b in points]} for q, points in CHECKS
    ]
    shares = [{"total": total, "flows": flows} for total, flows in SHARES]
    cases = {"flows": FLOWS, "gas": GAS, "checks": checks, "shares": shares, "pacing": PACING}
    given = json.dumps({"units": units.table(), "words": json.loads(words_text()), "cases": cases})
    run = subprocess.run(
        [node, "--no-warnings", str(SCRIPT)], input=given, capture_output=True, text=True, check=True
    )
    found: dict[str, Any] = json.loads(run.stdout)
    return found


def test_flows_agree_to_the_last_digits(tablet: dict[str, Any]) -> None:
    states = set()
    for body, here in zip(FLOWS, tablet["flows"], strict=True):
        there = flow_of(body)
        states.add(there["status"])
        assert here["status"] == there["status"], body
        for name in ("l_s", "volume_l", "meter_percent"):
            assert (here[name] is None) == (there[name] is None), (name, body)
            assert here[name] is None or here[name] == pytest.approx(there[name], rel=1e-9), body
        assert here["error_percent"] == (
            there["error_percent"] and pytest.approx(there["error_percent"], rel=1e-6)
        ), body
    assert states == {"ok", "out of range", "submerged"}


def test_the_same_gases_alarm(tablet: dict[str, Any]) -> None:
    there = [gas_alarms(reading) for reading in readings_of({"gas": GAS})]
    assert [len(found) for found in tablet["gas"]] == [len(found) for found in there]
    assert [bool(found) for found in there] == [False, True, True, True, True]
    assert ["not measured" in " ".join(found) for found in tablet["gas"]] == [
        "not measured" in " ".join(found) for found in there
    ]


def test_the_same_checks_hold(tablet: dict[str, Any]) -> None:
    for (quantity, points), rows in zip(CHECKS, tablet["checks"], strict=True):
        for (reference, shown), row in zip(points, rows, strict=True):
            point = Point(float(reference.replace(",", ".")), float(shown))
            one = judge(quantity, [point])
            assert row["ok"] == one.ok
            assert row["off"] == pytest.approx(one.worst)


def test_volumes_and_aliquots_agree(tablet: dict[str, Any]) -> None:
    """The first case of each is published arithmetic: 307.7 mL of 2 L, 51 aliquots of 25 700 gal."""
    assert tablet["shares"][0][0] == pytest.approx(307.7, abs=0.05)
    assert tablet["pacing"][0]["aliquots"] == 51
    for (total, flows), here in zip(SHARES, tablet["shares"], strict=True):
        assert here == pytest.approx(manual_volumes_ml(total, flows))
    for given, here in zip(PACING, tablet["pacing"], strict=True):
        there = pacing(*given)
        assert (here["aliquots"], here["fits"]) == (there.aliquots, there.fits)
