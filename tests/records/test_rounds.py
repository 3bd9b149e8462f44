"""Rounds and visits: an outcome for every stop, gas that blocks, flows by their rating, meters that drift."""

from __future__ import annotations

from typing import Any

import pytest

from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES, measured

AT = "2031-05-29T08:00:00-06:00"
BEGUN = {
    "round": None,
    "stop": None,
    "point": "outlet-b",
    "arrived_at": AT,
    "introduced": True,
    "present": [],
    "activity": "production",
    "production": "",
    "weather": "",
}
ENDED = {
    "outcome": "sampled",
    "left_at": "2031-05-29T09:00:00-06:00",
    "reason": "",
    "told": "",
    "remarks": "",
    "signature": None,
    "declined": False,
}
FLOW: dict[str, Any] = {
    "at": AT,
    "device": {"type": "v-notch 90", "size": None, "crest": None, "crest_height": None},
    **dict.fromkeys(("head", "head_error", "tail", "volume", "seconds")),
    **dict.fromkeys(("register_start", "register_end", "count", "meter")),
    "note": "",
}
SAMPLER: dict[str, Any] = {
    "point": "outlet-b",
    "visit": None,
    "started_at": AT,
    "paced_by": "time",
    "every_minutes": "15",
    **dict.fromkeys(("every_volume", "expected_volume", "aliquot", "bottle_volume", "temperature")),
    "planned": 96,
    "intake": "",
    "tubing": "",
    "cooling": "ice",
    "seal": "",
    "lock": "",
}
PERIOD: dict[str, Any] = {
    "started_at": "2031-05-28T08:00:00-06:00",
    "paced_by": "time",
    "planned": 96,
    "taken": 94,
    "missed": "two during a power cut",
    "volume": measured("9.4", "L"),
    "temperature": measured("3.9", "Cel"),
    "seal": "intact",
    "portions": [],
}
SAMPLE_2 = {"visit": None, "purpose": "sample", "of": None, "composite": None, "meter": None}


def gas(oxygen: str = "20.9", lel: str = "0", h2s: str = "0", co: str | None = "0") -> dict[str, Any]:
    """Return a gas reading."""
    named = {"oxygen_percent": oxygen, "lel_percent": lel, "h2s_ppm": h2s, "co_ppm": co}
    return {"at": AT, "meter": "gas meter 2"} | named


def sample(desk: Desk, id_: str, code: str, **changed: Any) -> str:
    """Return the entry of a sample in the kind's newest version."""
    text = devices.sample(desk.device, id_, code, **(SAMPLE_2 | changed))
    return text.replace('"version": 1', '"version": 2')


def begun(desk: Desk, **changed: Any) -> None:
    """Begin the visit ``v``."""
    assert desk.held(desk.device.make("visit.begun", "v", BEGUN | changed)) == [None]


def test_a_gas_alarm_blocks_the_sample_until_a_better_reading_and_a_person(ready: Desk) -> None:
    d = ready.device
    begun(ready)
    assert ready.held(d.make("gas.tested", "v", gas(h2s="12"))) == [None]
    assert ready.held(sample(ready, "s", CODES[0], visit="v")) == ["gas_alarm"]
    assert ready.held(d.make("gas.confirmed", "v", {"note": "aired"})) == ["gas_alarm"]
    assert ready.held(d.make("gas.tested", "v", gas(h2s="2"))) == [None]
    assert ready.held(sample(ready, "s2", CODES[1], visit="v")) == ["gas_alarm"]
    assert ready.held(d.make("gas.confirmed", "v", {"note": "aired"})) == [None]
    assert ready.held(sample(ready, "s3", CODES[2], visit="v")) == [None]
    assert ready.get("visit", "v")["samples"] == ["s3"]
    assert "cannot permit entry" in ready.all("held")[0]["message"]


def test_a_confirmation_does_not_outlive_the_next_alarm(ready: Desk) -> None:
    d = ready.device
    begun(ready)
    told = [gas(lel="15"), gas()]
    ready.tell(*(d.make("gas.tested", "v", one) for one in told), d.make("gas.confirmed", "v", {"note": "x"}))
    assert ready.get("visit", "v")["gas_confirmed"]["by"] == "Maren"
    ready.tell(d.make("gas.tested", "v", gas(oxygen="19,4")))
    assert ready.held(sample(ready, "s", CODES[0], visit="v")) == ["gas_alarm"]


def test_a_point_with_gases_needs_a_reading_first(ready: Desk) -> None:
    d = ready.device
    point = {"discharger": "hollin", "name": "Outlet C", "access": "", "hazards": ["gases"]}
    ready.tell(
        d.make("point.registered", "outlet-c", point | {"sample_kind": "grab", "flow_device": None}),
        d.make("visit.begun", "w", BEGUN | {"point": "outlet-c"}),
    )
    assert ready.held(sample(ready, "s", CODES[0], point="outlet-c", visit="w")) == ["gas_alarm"]
    assert ready.held(d.make("gas.tested", "w", gas(co=None))) == [None]
    assert ready.held(sample(ready, "s", CODES[0], point="outlet-c", visit="w")) == ["gas_alarm"]


@pytest.mark.parametrize("outcome", ["no flow", "refused", "unsafe", "not representative", "not sampled"])
def test_a_visit_without_a_sample_is_never_a_blank(ready: Desk, outcome: str) -> None:
    d = ready.device
    begun(ready)
    ended = ENDED | {"outcome": outcome}
    assert ready.held(d.make("visit.ended", "v", ended)) == ["reason_needed"]
    assert ready.held(d.make("visit.ended", "v", ended | {"reason": "the weir is dry"})) == [None]
    assert ready.get("visit", "v")["outcome"] == outcome
    assert ready.held(d.make("gas.tested", "v", gas())) == ["visit_ended"]


def test_a_visit_cannot_end_before_it_began(ready: Desk) -> None:
    begun(ready)
    left = ENDED | {"left_at": "2031-05-29T07:59:00-06:00"}
    assert ready.held(ready.device.make("visit.ended", "v", left)) == ["wrong_order"]


def test_a_round_keeps_what_was_visited_and_takes_more_stops(ready: Desk) -> None:
    d = ready.device
    stop = {"id": "stop-1", "point": "outlet-b", "sample_kind": "grab", "bottles": 1, "note": ""}
    plan = {"name": "North", "day": "2031-05-29", "inspector": None, "stops": [stop]}
    ready.tell(d.make("round.planned", "north", plan))
    begun(ready, round="north", stop="stop-1")
    assert ready.get("round", "north")["visits"] == {"stop-1": "v"}
    second = stop | {"id": "stop-2"}
    assert ready.held(d.make("round.changed", "north", {"stops": [second]})) == ["stop_visited"]
    assert ready.held(d.make("round.changed", "north", {"stops": [second, stop]})) == [None]
    assert [one["id"] for one in ready.get("round", "north")["stops"]] == ["stop-2", "stop-1"]


def test_a_flow_comes_from_its_rating_and_the_meter_is_held_against_it(ready: Desk) -> None:
    """USBR Water Measurement Manual ch. 7: 90 degree V-notch, 0.50 ft, 200.32 gal/min; 0.02 ft is 10.2 %."""
    d = ready.device
    begun(ready)
    body = FLOW | {"head": measured("6", "in"), "head_error": measured("0.02", "ft")}
    assert ready.held(d.make("flow.measured", "v", body | {"meter": measured("210", "gpm")})) == [None]
    (flow,) = ready.get("visit", "v")["flows"]
    assert flow["l_s"] * 60 / 3.785411784 == pytest.approx(200.32, abs=0.005)
    assert flow["error_percent"] == [pytest.approx(-9.6, abs=0.05), pytest.approx(10.2, abs=0.05)]
    assert flow["meter_percent"] == pytest.approx(100 * (210 / 200.32 - 1), abs=0.01)


def test_outside_the_rating_there_is_no_number_but_the_reading_is_kept(ready: Desk) -> None:
    begun(ready)
    body = FLOW | {"head": measured("4", "cm")}
    assert ready.held(ready.device.make("flow.measured", "v", body)) == [None]
    (flow,) = ready.get("visit", "v")["flows"]
    assert (flow["status"], flow["l_s"], flow["head"]["text"]) == ("out of range", None, "4")


def test_a_register_through_zero_counts_on(ready: Desk) -> None:
    """A six-digit register of 10 gal: 998750 to 001320 is 25 700 gal (arithmetic)."""
    begun(ready)
    body = FLOW | {"register_start": "998750", "register_end": "001320", "count": measured("10", "gal")}
    body["device"] = FLOW["device"] | {"type": "totalizer"}
    assert ready.held(ready.device.make("flow.measured", "v", body)) == [None]
    assert ready.get("visit", "v")["flows"][0]["volume_l"] == pytest.approx(25_700 * 3.785411784)


@pytest.mark.parametrize(
    ("type_", "named"),
    [
        ("v-notch 90", "head"),
        ("rectangular contracted", "device.crest"),
        ("parshall", "size"),
        ("bucket", "volume"),
        ("totalizer", "register_end"),
    ],
)
def test_a_flow_without_its_reading_is_kept_as_held_and_named(ready: Desk, type_: str, named: str) -> None:
    begun(ready)
    body = FLOW | {"device": FLOW["device"] | {"type": type_}}
    (answer,) = ready.tell(ready.device.make("flow.measured", "v", body))
    assert answer.hold is not None
    assert named in answer.hold.fields


def test_a_composite_is_picked_up_under_its_samplers_name(ready: Desk) -> None:
    """40 CFR 136.3 Table II: the holding time begins at the end of the composite."""
    assert ready.held(ready.device.make("sampler.set", "c", SAMPLER)) == [None]
    taken = sample(ready, "c", CODES[0], sample_kind="composite", composite=PERIOD, collected_at=AT)
    assert ready.held(taken) == [None]
    assert ready.get("sampler", "c")["state"] == "picked up"
    assert ready.get("sample", "c")["hold_until"] == "2031-06-26T08:00:00-06:00"


@pytest.mark.parametrize(
    ("changed", "code"),
    [
        ({"sample_kind": "composite"}, "invalid"),
        ({"composite": PERIOD}, "invalid"),
        ({"sample_kind": "composite", "composite": PERIOD | {"started_at": AT}}, "wrong_order"),
        ({"purpose": "duplicate"}, "invalid"),
        ({"visit": "nowhere"}, "unknown_visit"),
        ({"meter": "nothing"}, "unknown_instrument"),
    ],
)
def test_half_a_sample_is_held(ready: Desk, changed: dict[str, Any], code: str) -> None:
    assert ready.held(sample(ready, "s", CODES[0], collected_at=AT, **changed)) == [code]


def test_a_split_is_tied_to_its_sample(ready: Desk) -> None:
    split = {"to": "L. Marsden", "container": "", "receipt": "refused", "signature": None, "note": ""}
    assert ready.held(ready.device.make("sample.split", "s", split)) == ["unknown_sample"]
    ready.tell(sample(ready, "s", CODES[0]))
    assert ready.held(ready.device.make("sample.split", "s", split)) == [None]
    assert ready.get("sample", "s")["split"]["receipt"] == "refused"


def check(desk: Desk, at: str, read: str) -> str:
    """Return a check of the meter in the buffer of pH 7."""
    body = {"what": "check", "quantity": "pH", "at": at, "slope_percent": None, "passed": None, "note": ""}
    points = [{"reference": "7.00", "read": read, "lot": "B-7"}]
    return desk.device.make("meter.checked", "meter", body | {"points": points})


@pytest.mark.parametrize("late", [False, True], ids=["sample first", "check first"])
def test_a_failed_check_flags_every_reading_since_the_last_good_one(ready: Desk, late: bool) -> None:
    """Whichever arrives first, the entry of the sample or of the check that failed."""
    d = ready.device
    ready.tell(d.make("instrument.added", "meter", {"name": "Field meter 3", "what": "meter"}))
    before = sample(ready, "early", CODES[0], meter="meter", collected_at="2031-05-29T06:00:00-06:00")
    after = sample(ready, "later", CODES[1], meter="meter", collected_at="2031-05-29T09:00:00-06:00")
    good, bad = (
        check(ready, "2031-05-29T07:00:00-06:00", "7.02"),
        check(ready, "2031-05-29T15:00:00-06:00", "7.2"),
    )
    order = [before, good, bad, after] if late else [before, after, good, bad]
    assert ready.held(*order) == [None] * 4
    assert ready.get("sample", "early")["doubts"] == []
    assert ready.get("sample", "later")["doubts"] == ["pH: Field meter 3 failed its check afterwards"]
    assert ready.get("meter", "meter")["checks"][-1]["words"] == ["0.2 pH off at 7, more than 0.1 pH"]


def test_a_doubt_that_comes_after_the_result_stands_beside_it(ready: Desk) -> None:
    d = ready.device
    ready.tell(d.make("instrument.added", "meter", {"name": "Field meter 3", "what": "meter"}))
    taken = sample(ready, "s", CODES[0], meter="meter", collected_at="2031-05-29T09:00:00-06:00")
    rest = [devices.received(d, CODES[0]), devices.planned(d, "r", CODES[0]), *devices.heated(d, "r")]
    assert set(ready.held(taken, *rest, *devices.read(d, "r"))) == {None}
    result = f"r:{CODES[0]}"
    assert "in doubt" not in " ".join(ready.get("result", result)["beside"])
    before = ready.get("result", result)["shown"]
    assert ready.held(check(ready, "2031-05-29T15:00:00-06:00", "7.2")) == [None]
    words = " ".join(ready.get("result", result)["beside"])
    assert "Field reading in doubt: pH: Field meter 3 failed its check afterwards." in words
    assert ready.get("result", result)["shown"] == before
