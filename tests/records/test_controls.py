"""The controls of a rack: what the sum is given, what they say, and what must be decided."""

from __future__ import annotations

import json
from typing import Any

import pytest

from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES

CODE = CODES[0]
SPIKE = {"sample_ml": "50", "spike_ml": "1", "spike_mg_l": "10000"}
SPIKED_TUBE = 10


def controlled(desk: Desk, run: str = "r", **changed: Any) -> str:
    """Return the plan of a rack with a control, a duplicate and a spike."""
    plan = json.loads(devices.planned(desk.device, run, CODE))
    tubes = plan["body"]["tubes"]
    of_bottle = {"bottle": CODE, "dilution": tubes[4]["dilution"]}
    tubes += [
        {"position": 8, "role": "control", "expected": "400", "source": "glucose and glutamic acid"},
        {"position": 9, "role": "duplicate"} | of_bottle,
        {"position": SPIKED_TUBE, "role": "spike", "spike": SPIKE} | of_bottle,
    ]
    body = plan["body"] | {"without": []} | changed
    return json.dumps(plan | {"version": 2, "body": body})


def told(desk: Desk, control: str, duplicate: str, spike: str) -> dict[str, Any]:
    """Tell a run with these readings of its controls and return it."""
    d = desk.device
    assert set(desk.held(devices.sample(d, "s", CODE), controlled(desk), *devices.heated(d, "r"))) == {None}
    readings = ("0.011", "0.010", "0.012", "0.2015", "0.0905", "0.0900", "0.0910", control, duplicate, spike)
    assert set(desk.held(*devices.read(d, "r", readings))) == {None}
    return desk.get("run", "r")


def check(run: dict[str, Any], what: str) -> dict[str, Any]:
    """Return the run's one check of a kind."""
    (found,) = [one for one in run["checks"] if one["what"] == what]
    return dict(found)


def test_a_rack_that_holds_says_so_and_its_controls_are_no_results(ready: Desk) -> None:
    run = told(ready, "0.1630", "0.0915", "0.1620")
    assert [one["what"] for one in run["checks"]] == [
        "blank",
        "verification",
        "control",
        "duplicate",
        "spike",
    ]
    assert run["questions"] == []
    assert [one["bottle"] for one in ready.all("result")] == [CODE]
    assert {one["sample"] for one in run["answer"]["samples"]} == {
        CODE,
        f"{CODE} duplicate",
        f"{CODE} spike",
    }
    assert "glucose" in check(run, "control")["words"]


def test_a_spike_counts_its_volume_and_its_dilution(ready: Desk) -> None:
    """Recovery by R = 100 [C_sp (Vs + Vsp) - C Vs] / (C_std Vsp), all in the diluted sample."""
    run = told(ready, "0.1630", "0.0915", "0.1620")
    by_name = {one["sample"]: one["in_tube"] for one in run["answer"]["samples"]}
    native, spiked = by_name[CODE], by_name[f"{CODE} spike"]
    expected = 100 * (spiked * 51 - native * 50) / 10000
    assert check(run, "spike")["value"] == pytest.approx(expected, rel=1e-9)
    assert 95 < expected < 105


@pytest.mark.parametrize(
    ("readings", "what", "subject", "words"),
    [
        (("0.1960", "0.0915", "0.1620"), "control", "position 8: 400 mg/L", "not within 90 to 110 %"),
        (("0.1630", "0.1300", "0.1620"), "duplicate", f"{CODE} and {CODE} duplicate", "more than 20 %"),
        (("0.1630", "0.0915", "0.1420"), "spike", f"{CODE} spike", "the matrix of this sample is in doubt"),
    ],
)
def test_a_control_that_fails_is_said_in_words_and_waits_for_a_decision(
    ready: Desk, readings: tuple[str, str, str], what: str, subject: str, words: str
) -> None:
    run = told(ready, *readings)
    assert words in check(run, what)["words"]
    assert run["questions"] == [{"what": what, "subject": subject}]
    d = ready.device
    gate = d.make("gate.confirmed", "r", {"gate": "waste_container"})
    decision = {"what": what, "subject": subject, "decision": "accept with a note", "reason": "looked at"}
    assert ready.held(
        gate,
        d.make("run.closed", "r", {"decisions": []}),
        d.make("run.closed", "r", {"decisions": [decision]}),
    ) == [None, "undecided", None]
    assert ready.get("run", "r")["closed"]["by"] == "Maren"


def test_a_control_left_out_for_a_cause_is_kept_for_the_chart_and_not_judged(ready: Desk) -> None:
    told(ready, "0.1960", "0.0915", "0.1620")
    out = {"position": 8, "cause": "cap leaked", "note": ""}
    assert ready.held(ready.device.make("tube.excluded", "r", out)) == [None]
    run = ready.get("run", "r")
    assert (check(run, "control")["left_out"], run["questions"]) == ("cap leaked", [])
    (point,) = ready.get("chart", "con:high:photometer")["points"]
    assert (point["left_out"], point["fired"]) == ("cap leaked", [])


def test_duplicate_and_spike_of_a_sample_that_is_all_left_out_are_left_away(ready: Desk) -> None:
    told(ready, "0.1630", "0.0915", "0.1620")
    for position in (5, 6, 7):
        body = {"position": position, "cause": "spilled", "note": ""}
        assert ready.held(ready.device.make("tube.excluded", "r", body)) == [None]
    run = ready.get("run", "r")
    assert (run["input"]["duplicates"], run["input"]["spikes"], run["problem"]) == ([], [], None)


@pytest.mark.parametrize("cause", ["", "looked odd", None])
def test_a_tube_is_never_left_out_without_a_cause_of_the_list(ready: Desk, cause: str | None) -> None:
    told(ready, "0.1630", "0.0915", "0.1620")
    out = ready.device.make("tube.excluded", "r", {"position": 5, "cause": cause, "note": "high"})
    without = ready.device.make("tube.excluded", "r", {"position": 5, "note": "high"})
    assert ready.held(out, without) == ["invalid", "invalid"]
    assert ready.get("run", "r")["tubes"][4]["excluded"] is None


def test_a_rack_without_a_control_needs_the_reason(ready: Desk) -> None:
    ready.tell(devices.sample(ready.device, "s", CODE))
    tubes = json.loads(devices.planned(ready.device, "r", CODE))["body"]["tubes"]
    bare = controlled(ready, tubes=tubes)
    assert ready.held(bare) == ["wrong_plan"]
    (held,) = ready.all("held")
    assert "No spike stands in the rack: say why." in held["fields"]["without"]
    why = [{"role": role, "reason": "practice run"} for role in ("control", "duplicate", "spike")]
    assert ready.held(controlled(ready, tubes=tubes, without=why)) == [None]


def test_a_duplicate_needs_its_sample_in_the_rack(ready: Desk) -> None:
    plan = json.loads(controlled(ready))
    plan["body"]["tubes"][8]["bottle"] = CODES[1]
    assert ready.held(json.dumps(plan)) == ["wrong_plan"]
