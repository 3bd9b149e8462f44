"""Waste: a month of the whole site, clocks by the programme's rules, containers that left."""

from __future__ import annotations

from typing import Any

import pytest

from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES, measured


def moved(desk: Desk, to: str, on: str = "2031-06-01", by: str = "Hauler Two") -> str:
    """Return a move of the container."""
    body = {"to": to, "on": on, "by": by, "manifest": "M-1", "note": ""}
    return desk.device.make("container.moved", "waste", body)


def added(desk: Desk, stream: str, text: str, unit: str = "kg", acute: bool = False) -> str:
    """Return another waste of the site."""
    body = {"stream": stream, "on": "2031-06-03", "mass": measured(text, unit), "acute": acute, "note": ""}
    return desk.device.make("waste.added", f"w-{stream.replace(' ', '-')}", body)


def test_a_closed_run_adds_its_tubes_to_container_and_month(ready: Desk) -> None:
    ready.tell(*devices.whole_path("maren")[9:-1])
    run, month = ready.get("run", "run-1"), ready.get("waste_month", "2031-06")
    assert month["streams_kg"] == {"spent COD digest": pytest.approx(run["waste"]["mass_g"] / 1000)}
    assert (month["category"], month["days"]) == ("very small", None)
    assert "state and local rules decide" in month["note"]


def test_the_tubes_of_a_failed_digestion_are_waste_too(ready: Desk) -> None:
    d = ready.device
    ready.tell(
        devices.sample(d, "s", CODES[0]), devices.planned(d, "r", CODES[0]), *devices.heated(d, "r")[:6]
    )
    ended = {"ended_at": d.now.isoformat(), "complete": False, "reason": "power cut"}
    ready.tell(d.make("heating.ended", "r", ended))
    assert ready.held(*devices.closed(d, "r")) == [None, None]
    assert ready.get("container", "waste")["mercury_mg"] == pytest.approx(7 * 33.776, rel=1e-3)


@pytest.mark.parametrize(
    ("told", "category", "days"),
    [
        ([("solvent", "100", False)], "very small", None),
        ([("solvent", "100,5", False)], "small", 180),
        ([("solvent", "600", False), ("plating", "400", False)], "large", 90),
        ([("pesticide", "1.1", True)], "large", 90),
    ],
)
def test_the_whole_site_decides_its_category(
    ready: Desk, told: list[tuple[str, str, bool]], category: str, days: int | None
) -> None:
    """40 CFR 260.10 and 262.13: small above 100 kg, large from 1000 kg or above 1 kg acute, in a month."""
    for stream, text, acute in told:
        assert ready.held(added(ready, stream, text, acute=acute)) == [None]
    month = ready.get("waste_month", "2031-06")
    assert (month["category"], month["days"]) == (category, days)


def test_a_programmes_own_thresholds_go_before_the_federal_ones(ready: Desk) -> None:
    rules: dict[str, Any] = {"small_above_kg": 10.0, "small_days": 120, "note": "state rule"}
    asked = {"settings": {"waste": rules}, "reason": "the state is stricter"}
    assert ready.held(ready.device.make("settings.changed", "programme", asked)) == [None]
    ready.tell(added(ready, "solvent", "20"))
    month = ready.get("waste_month", "2031-06")
    assert (month["category"], month["days"]) == ("small", 120)
    assert "state rule" in month["note"]


def test_clocks_run_from_the_limit_and_from_central_accumulation(ready: Desk) -> None:
    """40 CFR 262.15 and 262.16: three days to move the excess, 180 days for a small generator."""
    assert ready.held(moved(ready, "over the limit")) == [None]
    assert ready.get("container", "waste")["clock"]["due"] == "2031-06-04"
    ready.tell(added(ready, "solvent", "150"))
    ready.tell(moved(ready, "central accumulation"))
    container = ready.get("container", "waste")
    assert (container["state"], container["clock"]["due"]) == ("central accumulation", "2031-11-28")


def test_what_left_takes_nothing_more(ready: Desk) -> None:
    assert ready.held(moved(ready, "picked up", by=" ")) == ["invalid"]
    assert ready.held(moved(ready, "picked up")) == [None]
    assert ready.held(moved(ready, "central accumulation")) == ["picked_up"]
    assert ready.held(devices.planned(ready.device, "r", CODES[0])) == ["wrong_plan"]


@pytest.mark.parametrize(
    ("what", "wanted", "found", "ok"),
    [
        ("block temperature", "150", ["150,4", "148.2"], True),
        ("block temperature", "150", ["150.4", "147.9"], False),
        ("wavelength", "600", ["601"], True),
        ("pipette by weight", "5", ["4.986", "4.984", "4.988", "4.986"], True),
        ("pipette by weight", "5", ["4.90", "4.91", "4.90", "4.91"], False),
    ],
)
def test_an_instrument_is_judged_by_its_check(
    ready: Desk, what: str, wanted: str, found: list[str], ok: bool
) -> None:
    body = {"what": what, "on": "2031-06-01", "wanted": wanted, "found": found, "water_c": "20"}
    entry = ready.device.make("instrument.checked", "block", body | {"next_on": "2031-09-01", "note": ""})
    assert ready.held(entry) == [None]
    (check,) = ready.get("instrument", "block")["checks"]
    assert check["ok"] is ok
    assert "at most" in check["words"]


def test_a_check_that_cannot_be_judged_is_held(ready: Desk) -> None:
    body = {"what": "pipette by weight", "on": "2031-06-01", "wanted": "5", "found": ["4.9"], "water_c": None}
    entry = ready.device.make("instrument.checked", "block", body | {"next_on": None, "note": ""})
    assert ready.held(entry) == ["invalid"]
