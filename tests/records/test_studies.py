"""A detection limit study: what is refused, what is missing, the limit and what it is due for."""

from __future__ import annotations

import json
from typing import Any

import pytest

from app import verbs
from app.records import rebuild
from tests.records.conftest import Desk
from tests.records.test_interferences import RESULT, digest
from tests.tools import devices
from tests.tools.devices import CODES, measured

SPIKES = ("9.2", "10.8", "8.7", "11,1", "9.9", "10.4", "8.5")
BLANKS = ("0.3", "-1.1", "0.8", "1.5", "-0.4", "0.9", "0.2")
DAYS = ("2031-05-20", "2031-05-21", "2031-05-27")


def planned(desk: Desk, study: str = "study", **changed: Any) -> str:
    """Return the entry of a study's plan."""
    body = {
        "name": "High range, first study",
        "recipe": "high",
        "instruments": ["photometer"],
        "estimate": measured("4", "mg/L"),
        "level": measured("10", "mg/L"),
        "days": list(DAYS),
        "note": "",
    }
    return desk.device.make("study.planned", study, body | changed)


def result(desk: Desk, row: str, tube: str, text: str | None, day: int = 0, **changed: Any) -> str:
    """Return the entry of one tube."""
    body = {
        "row": row,
        "tube": tube,
        "on": DAYS[day],
        "batch": f"batch {day + 1}",
        "instrument": "photometer",
        "result": None if text is None else measured(text, "mg/L"),
        "run": None,
        "position": None,
        "left_out": "",
        "reason": "",
    }
    return desk.device.make("study.result", changed.pop("study", "study"), body | changed)


def results(
    desk: Desk, spikes: tuple[str, ...] = SPIKES, blanks: tuple[str | None, ...] = BLANKS
) -> list[str]:
    """Return the entries of a whole study over three days."""
    texts = [result(desk, f"s{i}", "spike", text, i % 3) for i, text in enumerate(spikes)]
    return texts + [result(desk, f"b{i}", "blank", text, i % 3) for i, text in enumerate(blanks)]


def finished(desk: Desk, keep: bool = False, study: str = "study") -> str:
    """Return the entry that asks for the limit."""
    return desk.device.make("study.finished", study, {"keep": keep, "note": ""})


def whole(desk: Desk) -> None:
    """Tell a whole study."""
    assert set(desk.held(planned(desk), *results(desk), finished(desk))) == {None}


def test_a_study_gives_the_limit_of_the_verb_with_its_workings_and_its_due_date(ready: Desk) -> None:
    """CV-6.1: spikes s 1.0263 and blanks mean 0.3143, s 0.8668: 3.225 and 3.039, so 3.2 mg/L."""
    whole(ready)
    study = ready.get("study", "study")
    (limit,) = study["limits"]
    assert study["state"] == "finished"
    assert limit["answer"] == verbs.find("detection-limit")(limit["input"])
    assert (limit["mg_l"], limit["shown"]) == (pytest.approx(3.225, abs=0.01), "3.2")
    assert limit["answer"]["mdl_blanks"] == pytest.approx(3.039, abs=0.01)
    how = limit["workings"]
    assert (how["spikes_dof"], how["blanks_dof"], how["blanks_rule"]) == (6, 6, "mean")
    assert (how["spikes_t"], how["blanks_t"]) == pytest.approx((3.143, 3.143), abs=5e-4)
    assert (limit["computed_on"], limit["again_by"]) == ("2031-06-01", "2032-07-01")
    assert "t(0.99, 6) = 3.143" in limit["words"][0]


def test_what_is_missing_is_told_and_a_study_with_gaps_gives_no_limit(ready: Desk) -> None:
    assert ready.held(planned(ready), result(ready, "s0", "spike", "9.9")) == [None, None]
    gaps = ready.get("study", "study")["gaps"]
    assert "spikes still missing: 6 of 7" in gaps
    assert "blanks on at least three dates" in gaps
    assert ready.held(finished(ready)) == ["study_gaps"]
    assert ready.all("detection_limit") == []


@pytest.mark.parametrize(
    ("changed", "code"),
    [
        ({"level": measured("7.9", "mg/L")}, "wrong_level"),
        ({"level": measured("0,0401", "g/L")}, "wrong_level"),
        ({"level": measured("0,04", "g/L")}, None),
        ({"days": [DAYS[0], DAYS[1], DAYS[1]]}, "wrong_study"),
        ({"recipe": "none"}, "unknown_recipe"),
        ({"instruments": ["none"]}, "unknown_instrument"),
    ],
)
def test_a_study_that_the_procedure_does_not_allow_is_held(
    ready: Desk, changed: dict[str, Any], code: str | None
) -> None:
    assert ready.held(planned(ready, **changed)) == [code]


def test_a_plan_spreads_the_tubes_over_the_days(ready: Desk) -> None:
    ready.tell(planned(ready))
    assert [(d["spikes"], d["blanks"]) for d in ready.get("study", "study")["plan"]] == [
        (3, 3),
        (2, 2),
        (2, 2),
    ]


def test_a_spike_without_a_positive_number_stops_the_study(ready: Desk) -> None:
    ready.tell(planned(ready), *results(ready, spikes=(*SPIKES[:6], "< 5", "9.0")))
    (gap,) = ready.get("study", "study")["gaps"]
    assert "spikes without a positive result: 1" in gap
    assert ready.held(finished(ready)) == ["study_gaps"]


@pytest.mark.parametrize(
    ("blanks", "rule", "expected"),
    [
        ((None,) * 7, "none", None),
        ((None, "1.2", "< 1", "0.4", None, None, None), "highest", 1.2),
        (("-.3", "-1.1", ".2", ".5", "-1.4", ".1", "-.2"), "mean", 2.188),
    ],
)
def test_blanks_without_a_number_are_never_zero(
    ready: Desk, blanks: tuple[str | None, ...], rule: str, expected: float | None
) -> None:
    """CV-6.2 and 40 CFR 136 App. B rev. 2: none, the highest, or max(mean, 0) + t s."""
    assert set(ready.held(planned(ready), *results(ready, blanks=blanks), finished(ready))) == {None}
    (limit,) = ready.get("study", "study")["limits"]
    assert limit["workings"]["blanks_rule"] == rule
    assert limit["answer"]["mdl_blanks"] == (expected and pytest.approx(expected, abs=0.001))


def test_a_correction_needs_its_reason_and_keeps_what_stood(ready: Desk) -> None:
    ready.tell(planned(ready), result(ready, "s0", "spike", "92"))
    again = result(ready, "s0", "spike", "9.2")
    told = result(ready, "s0", "spike", "9.2", reason="point forgotten")
    left = result(ready, "s0", "spike", "9.2", reason="cap leaked", left_out="cap leaked")
    assert ready.held(again, told, left) == ["reason_needed", None, None]
    (row,) = ready.get("study", "study")["rows"]
    assert [one["mg_l"] for one in row["before"]] == [92.0, 9.2]
    assert "spikes still missing: 7 of 7" in ready.get("study", "study")["gaps"]


def test_several_instruments_each_need_two_dates(ready: Desk) -> None:
    other = ready.device.make("instrument.added", "p3", {"name": "Photometer 3", "what": "photometer"})
    ready.tell(other, planned(ready, instruments=["photometer", "p3"]), *results(ready))
    assert ready.get("study", "study")["gaps"] == [
        "spikes on Photometer 3: 0 of 2 dates",
        "blanks on Photometer 3: 0 of 2 dates",
    ]


def test_tubes_are_taken_from_a_run_and_read_against_its_other_blanks(ready: Desk) -> None:
    digest(ready)
    plan = planned(ready, estimate=measured("100", "mg/L"), level=measured("500", "mg/L"))
    taken = {"run": "r", "on": "2031-06-01", "batch": "run"}
    assert ready.held(
        plan,
        result(ready, "s0", "spike", None, **taken, position=4),
        result(ready, "b0", "blank", None, **taken, position=3),
        result(ready, "b1", "blank", None, **taken, position=4),
        result(ready, "s1", "spike", None, **taken, position=5),
        result(ready, "s2", "spike", None, **taken, position=4),
    ) == [None, None, None, "wrong_tube", "wrong_tube", "wrong_tube"]
    rows = {row["row"]: row for row in ready.get("study", "study")["rows"]}
    run = ready.get("run", "r")
    assert rows["s0"]["mg_l"] == run["tubes"][3]["in_tube"]
    b0, b1 = run["answer"]["calibration"]["coefficients"]
    assert rows["b0"]["mg_l"] == pytest.approx((0.012 - (0.011 + 0.010) / 2 - b0) / b1, rel=1e-9)


def test_a_new_limit_replaces_the_old_one_unless_it_may_stand_and_is_kept(ready: Desk) -> None:
    whole(ready)
    more = [result(ready, f"q{i}", "spike", text, 2) for i, text in enumerate(("9.7", "10.3"))]
    assert set(ready.held(*more, finished(ready, keep=True))) == {None}
    first, second = ready.get("study", "study")["limits"]
    assert second["answer"]["mdl"] < first["mg_l"]
    assert (second["stood"], second["mg_l"]) == (True, first["mg_l"])
    assert ready.held(finished(ready)) == [None]
    third = ready.get("study", "study")["limits"][-1]
    assert (third["stood"], third["mg_l"]) == (False, third["answer"]["mdl"])


def test_the_limit_in_force_stands_beside_a_result_after_its_dilution(ready: Desk) -> None:
    whole(ready)
    digest(ready, 5)
    limit = ready.get("result", RESULT)["detection_limit"]
    assert (limit["computed_on"], limit["shown"], limit["shown_after"]) == ("2031-06-01", "3.2", "16")
    assert limit["after_dilution"] == pytest.approx(5 * limit["mg_l"])


def test_a_limit_that_was_due_again_before_the_run_says_so(ready: Desk) -> None:
    whole(ready)
    bench = ready.device
    bench.now = bench.now.replace(year=2032, month=7, day=2)
    calibration = json.loads(devices.setting_up(devices.Device("maren"))[-1])["body"]
    lot = {"recipe": "high", "name": "D-32-002", "made_on": "2032-05-01", "expires_on": "2033-05-01"}
    changed = {"valid_until": "2033-01-01", "lot": "lot-2"}
    made = bench.make("calibration.made", "curve-2", calibration | changed)
    plan = devices.planned(bench, "r", CODES[0], calibration="curve-2", lot="lot-2")
    texts = [
        bench.make("lot.made", "lot-2", lot),
        made,
        devices.sample(bench, "s", CODES[0]),
        plan,
        *devices.heated(bench, "r"),
    ]
    assert set(ready.held(*texts, *devices.read(bench, "r"))) == {None}
    words = " ".join(ready.get("result", RESULT)["beside"])
    assert "▲ to be calculated again by 2032-07-01, before this run" in words


def test_a_result_older_than_the_limit_does_not_name_it(ready: Desk) -> None:
    digest(ready, 5)
    whole(ready)
    assert ready.get("result", RESULT)["detection_limit"] is None
    assert ready.held(devices.received(ready.device, CODES[0])) == [None]


def test_limits_are_replayed_at_a_rebuild(ready: Desk) -> None:
    whole(ready)
    done = rebuild.rebuild(ready.store)
    assert done.before == done.after
