"""What each entry does, and that a step out of order is kept but does not count."""

from __future__ import annotations

import json

import pytest

from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES, GATES, measured


def digested(desk: Desk) -> None:
    """Tell everything up to the cooled rack."""
    d = desk.device
    assert set(desk.held(devices.sample(d, "s", CODES[0]), devices.received(d, CODES[0]))) == {None}
    assert set(desk.held(devices.planned(d, "r", CODES[0]), *devices.heated(d, "r"))) == {None}


def test_a_bottle_passes_through_its_states(ready: Desk) -> None:
    d, code, states = ready.device, CODES[0], []

    def tell(*texts: str) -> None:
        assert set(ready.held(*texts)) == {None}
        states.append(ready.get("sample", "s")["state"])

    tell(devices.sample(d, "s", code))
    given = {"bottles": [code], "to": "refrigerator", "temperature": None, "note": ""}
    tell(d.make("custody.handed_over", "h", given))
    tell(devices.received(d, code))
    tell(devices.planned(d, "r", code), *devices.heated(d, "r"))
    tell(*devices.read(d, "r"))
    assert states == ["taken", "handed over", "received", "in digestion", "result"]
    assert ready.get("bottle", code)["sample"] == "s"


def test_a_receipt_that_arrives_before_the_sample_is_found_by_it(ready: Desk) -> None:
    d, code = ready.device, CODES[0]
    assert ready.held(devices.received(d, code)) == [None]
    assert ready.get("bottle", code)["sample"] is None
    assert ready.held(devices.sample(d, "s", code)) == [None]
    assert ready.get("sample", "s")["state"] == "received"
    assert ready.get("sample", "s")["received"]["temperature"] == measured("3.8", "Cel")


def test_a_bottle_used_twice_is_held_and_both_statements_are_kept(ready: Desk) -> None:
    d = ready.device
    second = devices.sample(d, "other", CODES[0])
    assert ready.held(devices.sample(d, "s", CODES[0]), second) == [None, "bottle_in_use"]
    assert [json.loads(one["text"])["about"] for one in ready.all("held")] == ["other"]


def test_holding_time_ends_28_days_after_collection_in_the_programmes_zone(ready: Desk) -> None:
    ready.tell(devices.sample(ready.device, "s", CODES[0], collected_at="2031-10-20T08:00:00-06:00"))
    assert ready.get("sample", "s")["hold_until"] == "2031-11-17T07:00:00-07:00"


@pytest.mark.parametrize("missing", GATES)
def test_heating_waits_for_every_gate(ready: Desk, missing: str) -> None:
    d = ready.device
    ready.tell(devices.sample(d, "s", CODES[0]), devices.planned(d, "r", CODES[0]))
    for text in devices.heated(d, "r")[:6]:
        entry = json.loads(text)
        if entry["body"].get("gate") != missing:
            expected = "gate_open" if entry["kind"] == "heating.started" else None
            assert ready.held(text) == [expected]
    assert ready.get("run", "r")["state"] == "planned"


def test_a_probe_outside_the_tolerance_opens_no_gate(ready: Desk) -> None:
    d = ready.device
    ready.tell(devices.sample(d, "s", CODES[0]), devices.planned(d, "r", CODES[0]))
    texts = devices.heated(d, "r")[:6]
    cold = json.loads(texts[4])
    cold["body"]["value"] = measured("147.9", "Cel")
    assert ready.held(*texts[:4], json.dumps(cold), texts[5]) == [None] * 5 + ["gate_open"]


def test_an_interrupted_digestion_fails_the_run(ready: Desk) -> None:
    d = ready.device
    ready.tell(
        devices.sample(d, "s", CODES[0]), devices.planned(d, "r", CODES[0]), *devices.heated(d, "r")[:6]
    )
    body = {"ended_at": d.now.isoformat(), "complete": False, "reason": "power cut"}
    assert ready.held(d.make("heating.ended", "r", body)) == [None]
    assert ready.get("run", "r")["state"] == "failed"
    assert ready.held(devices.reading(d, "r", 1, "0.01")) == ["wrong_step"]


def test_steps_out_of_order_are_held(ready: Desk) -> None:
    d = ready.device
    ready.tell(devices.sample(d, "s", CODES[0]), devices.planned(d, "r", CODES[0]))
    assert ready.held(
        devices.reading(d, "r", 1, "0.01"),
        d.make("readings.finished", "r", {}),
        d.make("run.closed", "r", {"decisions": []}),
        d.make("gate.confirmed", "r", {"gate": "no_such_gate"}),
        d.make("gate.confirmed", "nothing", {"gate": "hood_on"}),
        d.make("result.reviewed", "nothing", {"decision": "accepted", "reason": ""}),
    ) == ["wrong_step"] * 3 + ["unknown_gate", "unknown_run", "unknown_result"]


def test_a_correction_needs_its_reason_and_keeps_the_first_reading(ready: Desk) -> None:
    digested(ready)
    d = ready.device
    assert ready.held(
        devices.reading(d, "r", 5, "0.2"),
        devices.reading(d, "r", 5, "0.3"),
        devices.reading(d, "r", 5, "0.3", reason="wiped the tube"),
    ) == [None, "reason_needed", None]
    tube = ready.get("run", "r")["tubes"][4]
    assert tube["absorbance"]["text"] == "0.3"
    assert [one["absorbance"]["text"] for one in tube["readings"]] == ["0.2", "0.3"]


def test_unread_tubes_keep_the_readings_open_unless_left_out_for_a_cause(ready: Desk) -> None:
    digested(ready)
    d = ready.device
    ready.tell(*(devices.reading(d, "r", p, t) for p, t in enumerate(devices.READINGS[:6], start=1)))
    assert ready.held(d.make("readings.finished", "r", {})) == ["unread_tubes"]
    out = d.make("tube.excluded", "r", {"position": 7, "cause": "cap leaked", "note": ""})
    assert ready.held(out, d.make("readings.finished", "r", {})) == [None, None]
    (sample,) = ready.get("run", "r")["answer"]["samples"]
    assert sample["used"] == [0, 1]


def test_a_tube_left_out_after_the_answer_is_calculated_anew(ready: Desk) -> None:
    digested(ready)
    d = ready.device
    ready.tell(*devices.read(d, "r"))
    first = ready.get("result", f"r:{CODES[0]}")["cod"]
    out = d.make("tube.excluded", "r", {"position": 6, "cause": "precipitate in the beam", "note": "haze"})
    assert ready.held(out) == [None]
    again = ready.get("result", f"r:{CODES[0]}")
    assert again["cod"] != first
    assert len(ready.all("result")) == 1


@pytest.mark.parametrize(
    "changed",
    [
        {"lot": "lot-2"},
        {"instrument": "other-photometer"},
        {"tubes": [{"position": 1, "role": "sample", "bottle": CODES[0]}]},
        {"tubes": [{"position": 1, "role": "verification"}]},
        {"tubes": [{"position": 1, "role": "blank"}, {"position": 1, "role": "blank"}]},
    ],
)
def test_a_run_with_a_curve_of_another_lot_or_an_impossible_rack_is_held(
    ready: Desk, changed: dict[str, object]
) -> None:
    d = ready.device
    lot = {"recipe": "high", "name": "other", "made_on": "2031-05-02", "expires_on": "2032-05-02"}
    ready.tell(
        d.make("lot.made", "lot-2", lot),
        d.make("instrument.added", "other-photometer", {"name": "P3", "what": "photometer"}),
    )
    assert ready.held(devices.planned(d, "r", CODES[0], **changed)) == ["wrong_plan"]


def test_a_failed_verification_holds_what_touches_it(ready: Desk) -> None:
    """EPA 410.4 rev 2.0, 9.3.4: everything since the last good one is done again."""
    d = ready.device
    ready.tell(devices.sample(d, "s", CODES[0]), devices.sample(d, "t", CODES[1]))
    plan = json.loads(devices.planned(d, "r", CODES[0]))
    dilution = plan["body"]["tubes"][4]["dilution"]
    second = [
        {"position": p, "role": "sample", "bottle": CODES[1], "dilution": dilution} for p in (9, 10, 11)
    ]
    checks = [{"position": p, "role": "verification", "expected": "500"} for p in (8, 12)]
    plan["body"]["tubes"] += [*checks, *second]
    assert set(ready.held(json.dumps(plan), *devices.heated(d, "r"))) == {None}
    values = (*devices.READINGS, "0.2010", "0.150", "0.151", "0.149", "0.1500")
    assert set(ready.held(*devices.read(d, "r", values))) == {None}
    found = ready.get("run", "r")["bracketing"]
    assert (found["good"], found["held"], found["open"]) == ([CODES[0]], [CODES[1]], [])
    assert {"what": "verification", "subject": "3: 500 mg/L"} in ready.get("run", "r")["questions"]


def curve(desk: Desk, id_: str, **changed: object) -> str:
    """Return the entry of another calibration like the first."""
    body = json.loads(devices.setting_up(desk.device)[8])["body"]
    return desk.device.make("calibration.made", id_, body | changed)


def test_a_curve_past_its_day_is_refused(ready: Desk) -> None:
    assert ready.held(curve(ready, "old", valid_until="2031-05-31")) == [None]
    plan = devices.planned(ready.device, "r", CODES[0], calibration="old")
    assert ready.held(plan) == ["wrong_plan"]


def test_a_curve_that_falls_where_it_must_rise_stops_the_run(ready: Desk) -> None:
    levels = [
        ("0", "0.40"),
        ("100", "0.36"),
        ("250", "0.30"),
        ("500", "0.20"),
        ("750", "0.10"),
        ("900", "0.04"),
    ]
    standards = [{"cod": cod, "absorbance": [a]} for cod, a in levels]
    assert ready.held(curve(ready, "falls", standards=standards)) == [None]
    found = ready.get("calibration", "falls")["fitted"]["findings"]
    assert found[0]["severity"] == "stop"
    assert ready.held(devices.planned(ready.device, "r", CODES[0], calibration="falls")) == ["wrong_plan"]


def test_a_hopeless_curve_keeps_its_reason_and_reads_nothing(ready: Desk) -> None:
    flat = [{"cod": str(100 * i), "absorbance": ["0.1"]} for i in range(6)]
    assert ready.held(curve(ready, "flat", standards=flat)) == [None]
    assert ready.get("calibration", "flat")["fitted"]["error"]
    assert ready.held(devices.planned(ready.device, "r", CODES[0], calibration="flat")) == ["wrong_plan"]


def test_a_question_keeps_the_run_open_until_somebody_decides(ready: Desk) -> None:
    digested(ready)
    d = ready.device
    texts = [devices.reading(d, "r", p, t) for p, t in enumerate(devices.READINGS[:4], start=1)]
    texts += [devices.reading(d, "r", p, "0.391", colour="green") for p in (5, 6, 7)]
    assert set(ready.held(*texts, d.make("readings.finished", "r", {}))) == {None}
    run = ready.get("run", "r")
    assert run["questions"] == [{"what": "over", "subject": CODES[0]}]
    assert ready.held(*devices.closed(d, "r")) == [None, "undecided"]
    decision = run["questions"][0] | {"decision": "repeat", "reason": "all three went green"}
    assert ready.held(devices.closed(d, "r", [decision])[1]) == [None]
    result = ready.get("result", f"r:{CODES[0]}")
    assert (result["status"], result["shown"]) == ("over", "> 4500")


def test_closing_needs_the_waste_gate_and_fills_the_container(ready: Desk) -> None:
    digested(ready)
    d = ready.device
    ready.tell(*devices.read(d, "r"))
    gate, closing = devices.closed(d, "r")
    assert ready.held(closing) == ["gate_open"]
    assert ready.held(gate, devices.closed(d, "r")[1]) == [None, None]
    container = ready.get("container", "waste")
    assert container["tubes"] == 7
    assert container["filled_ml"] == pytest.approx(7 * 7.5)
    assert container["mercury_mg"] == pytest.approx(7 * 33.776, abs=0.01)  # 33.776 mg a tube: CHK-9.1


def test_the_limit_of_the_day_decides_and_stays_with_the_result(ready: Desk) -> None:
    digested(ready)
    d = ready.device
    ready.tell(*devices.read(d, "r"))
    result = ready.get("result", f"r:{CODES[0]}")
    assert [(one["verdict"], one["limit"]) for one in result["verdicts"]] == [("above", 1500)]
    later = {
        "basis": "daily_maximum",
        "value": measured("9000", "mg/L"),
        "from": "2031-05-01",
        "source": "new",
    }
    assert ready.held(d.make("limit.set", "outlet-b", later)) == [None]
    assert ready.get("result", f"r:{CODES[0]}")["verdicts"] == result["verdicts"]
