"""Curves: what one serves, checks by another source, weights that reach the run, bracketing that holds."""

from __future__ import annotations

import json
from datetime import timedelta
from typing import Any

import pytest

from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES, STANDARDS


def calibration(desk: Desk, id_: str, **changed: Any) -> str:
    """Return the entry of another curve."""
    body: dict[str, Any] = {
        "recipe": "high",
        "lot": "lot-1",
        "instrument": "photometer",
        "wavelength_nm": "600",
        "model": "linear",
        "valid_until": "2031-09-01",
        "standards": [{"cod": cod, "absorbance": read} for cod, read in STANDARDS],
    }
    return desk.device.make("calibration.made", id_, body | changed)


def checked(desk: Desk, expected: str, read: list[str], what: str = "second source") -> str:
    """Return a check of the curve."""
    body = {"what": what, "source": "ampoule K-3 of another maker", "expected": expected, "note": ""}
    return desk.device.make("curve.checked", "curve", body | {"absorbance": read})


@pytest.mark.parametrize(
    ("changed", "words"),
    [
        ({"lot": "lot-2"}, "reagent lot"),
        ({"instrument": "other"}, "instrument"),
        ({"recipe": "second", "lot": "lot-s"}, "recipe"),
    ],
)
def test_a_run_refuses_a_curve_of_another(ready: Desk, changed: dict[str, Any], words: str) -> None:
    d = ready.device
    lot = {"recipe": "high", "name": "D-31-015", "made_on": "2031-05-01", "expires_on": "2032-05-01"}
    second = devices.RECIPE | {"name": "High range, second"}
    ready.tell(
        d.make("lot.made", "lot-2", lot),
        d.make("instrument.added", "other", {"name": "Photometer 9", "what": "photometer"}),
        d.make("recipe.adopted", "second", second),
        d.make("lot.made", "lot-s", lot | {"recipe": "second", "name": "S-1"}),
    )
    (answer,) = ready.tell(devices.planned(d, "r", CODES[0], **changed))
    assert answer.hold is not None
    assert words in " ".join(answer.hold.fields["calibration"])


@pytest.mark.parametrize("namesake", [("lot", "lot-2"), ("instrument", "other")], ids=["lot", "photometer"])
def test_a_run_refuses_the_curve_of_a_namesake(ready: Desk, namesake: tuple[str, str]) -> None:
    """Two lots may bear one name on the bottle: what counts is which one it is."""
    d = ready.device
    lot = {name: ready.get("lot", "lot-1")[name] for name in ("recipe", "name", "made_on", "expires_on")}
    photometer = {name: ready.get("instrument", "photometer")[name] for name in ("name", "what")}
    assert ready.held(d.make("lot.made", "lot-2", lot), d.make("instrument.added", "other", photometer)) == [
        None,
        None,
    ]
    (answer,) = ready.tell(devices.planned(d, "r", CODES[0], **dict([namesake])))
    assert answer.hold is not None
    assert "another of that name" in " ".join(answer.hold.fields["calibration"])


def test_a_reading_after_the_curves_last_day_is_kept_as_held(ready: Desk) -> None:
    """The run began in time; a tube read the day after gets no result, one read before may be corrected."""
    d = ready.device
    ready.tell(calibration(ready, "short", valid_until="2031-06-01"), devices.sample(d, "s", CODES[0]))
    planned = devices.planned(d, "r", CODES[0], calibration="short")
    assert set(ready.held(planned, *devices.heated(d, "r"), devices.reading(d, "r", 1, "0.010"))) == {None}
    d.now += timedelta(days=1)
    (answer,) = ready.tell(devices.reading(d, "r", 2, "0.012"))
    assert answer.hold is not None
    assert answer.hold.code == "wrong_curve"
    assert "is valid from 2031-06-01 to 2031-06-01" in answer.hold.message
    seen = {"absorbance": devices.measured("0.011", "AU"), "colour": None, "reason": "misread"}
    assert ready.held(d.make("tube.read", "r", {"position": 1} | seen)) == [None]


def test_a_run_refuses_a_curve_past_its_day_and_an_expired_lot(ready: Desk) -> None:
    d = ready.device
    old = {"recipe": "high", "name": "D-29-001", "made_on": "2029-05-01", "expires_on": "2031-05-01"}
    ready.tell(d.make("lot.made", "lot-0", old), calibration(ready, "late", valid_until="2031-05-31"))
    assert ready.tell(calibration(ready, "aged", lot="lot-0"))[0].hold is None
    for curve, lot, words in (("late", "lot-1", "is valid from"), ("aged", "lot-0", "expired on 2031-05-01")):
        (answer,) = ready.tell(devices.planned(d, f"r-{curve}", CODES[0], calibration=curve, lot=lot))
        assert answer.hold is not None
        assert words in " ".join(answer.hold.fields["calibration"])


@pytest.mark.parametrize(("expected", "ok"), [("500", True), ("455", True), ("450", False)])
def test_a_second_source_is_judged_within_ten_percent(ready: Desk, expected: str, ok: bool) -> None:
    """EPA 410.4 revision 2.0, 9.2.3: within 10 %; the same two readings against three stated values."""
    assert ready.held(checked(ready, expected, ["0.190", "0,190"])) == [None]
    (check,) = ready.get("calibration", "curve")["checks"]
    judged = check["judged"]
    assert judged["ok"] is ok
    assert judged["recovery_percent"] == pytest.approx(100 * judged["cod"] / float(expected))
    assert judged["cod"] == pytest.approx(499, abs=3)
    assert judged["due_on"] == "2031-09-01"


def test_the_linear_range_is_due_after_half_a_year(ready: Desk) -> None:
    """EPA 410.4 revision 2.0, 9.2.2."""
    ready.tell(checked(ready, "900", ["0.3425"], what="linear range"))
    assert ready.get("calibration", "curve")["checks"][0]["judged"]["due_on"] == "2031-12-01"


def test_a_programme_may_ask_for_a_second_source(ready: Desk) -> None:
    d = ready.device
    asked = {"settings": {"second_source_required": True}, "reason": "accreditation"}
    ready.tell(d.make("settings.changed", "programme", asked))
    assert ready.held(devices.planned(d, "r", CODES[0])) == ["wrong_plan"]
    ready.tell(checked(ready, "600", ["0.190"]))
    assert ready.held(devices.planned(d, "r", CODES[0])) == ["wrong_plan"]
    ready.tell(checked(ready, "500", ["0.190"]))
    assert ready.held(devices.planned(d, "r", CODES[0])) == [None]


def test_the_newest_second_source_counts_until_it_is_due_again(ready: Desk) -> None:
    d = ready.device
    asked = {"settings": {"second_source_required": True}, "reason": "accreditation"}
    ready.tell(d.make("settings.changed", "programme", asked), checked(ready, "500", ["0.190"]))
    assert ready.held(checked(ready, "600", ["0.190"]), devices.planned(d, "r", CODES[0]))[1] == "wrong_plan"
    assert ready.held(checked(ready, "500", ["0.190"]), devices.planned(d, "r2", CODES[0])) == [None, None]
    d.now += timedelta(days=93)
    (answer,) = ready.tell(devices.planned(d, "r3", CODES[0]))
    assert answer.hold is not None
    assert "due again on 2031-09-01" in " ".join(answer.hold.fields["calibration"])


def test_what_is_due_stands_with_the_curve_from_its_first_day(ready: Desk) -> None:
    """EPA 410.4 revision 2.0, 9.2: another source at once and every quarter, the range every half year."""
    assert ready.get("calibration", "curve")["due"] == {
        "second source": "2031-06-01",
        "linear range": "2031-12-01",
    }
    ready.tell(checked(ready, "600", ["0.190"]))
    assert ready.get("calibration", "curve")["due"]["second source"] == "2031-06-01"
    ready.tell(checked(ready, "500", ["0.190"]))
    assert ready.get("calibration", "curve")["due"]["second source"] == "2031-09-01"


def test_a_falling_curve_reads_a_run_of_the_low_range(ready: Desk) -> None:
    """At 420 nm absorbance falls with COD; 0.26 AU and 1/436 AU per mg/L as for a 1 cm cell."""
    d = ready.device
    low = devices.RECIPE | {
        "name": "Low range",
        "dichromate_g_per_l": "1.0216",
        "wavelength_nm": "420",
        "working_low": "5",
        "working_high": "90",
    }
    lot = {"recipe": "low", "name": "L-1", "made_on": "2031-05-01", "expires_on": "2032-05-01"}
    standards = [
        {"cod": f"{cod}", "absorbance": [f"{-cod / 436 + wobble:.4f}" for wobble in (0.0002, -0.0002)]}
        for cod in (0, 5, 10, 25, 50, 75, 90)
    ]
    ready.tell(d.make("recipe.adopted", "low", low), d.make("lot.made", "lot-low", lot))
    curve = calibration(ready, "falls", recipe="low", lot="lot-low", wavelength_nm="420", standards=standards)
    assert ready.held(curve) == [None]
    fitted = ready.get("calibration", "falls")["fitted"]
    assert fitted["coefficients"][1] == pytest.approx(-1 / 436, rel=0.01)
    assert [one for one in fitted["findings"] if one["severity"] == "stop"] == []
    dilution = {"factor": 2.0, "steps": [], "relative_u": 0.001, "reason": ""}
    tubes = [
        {"position": 1, "role": "blank"},
        *[{"position": at, "role": "sample", "bottle": CODES[0], "dilution": dilution} for at in (2, 3)],
    ]
    changed = {"recipe": "low", "lot": "lot-low", "calibration": "falls", "tubes": tubes}
    ready.tell(devices.sample(d, "s", CODES[0]))
    assert set(ready.held(devices.planned(d, "r", CODES[0], **changed), *devices.heated(d, "r"))) == {None}
    for at, text in ((1, "0.260"), (2, "0.168"), (3, "0.1684")):
        assert ready.held(devices.reading(d, "r", at, text)) == [None]
    assert ready.held(d.make("readings.finished", "r", {})) == [None]
    (sample,) = ready.get("run", "r")["answer"]["samples"]
    assert sample["status"] == "ok"
    assert sample["cod"] == pytest.approx(2 * 436 * (0.260 - 0.1682), rel=0.01)


def test_weights_and_leverage_reach_curve_and_run(ready: Desk) -> None:
    d = ready.device
    ready.tell(calibration(ready, "weighted", weights="inverse"))
    fitted, plain = (ready.get("calibration", id_)["fitted"] for id_ in ("weighted", "curve"))
    assert fitted["coefficients"] != plain["coefficients"]
    rows = fitted["residuals"]
    assert len(rows) == 2 * len(STANDARDS)
    assert sum(row["leverage"] for row in rows) == pytest.approx(2.0)
    ready.tell(
        devices.sample(d, "s", CODES[0]),
        devices.planned(d, "r", CODES[0], calibration="weighted"),
        *devices.heated(d, "r"),
        *devices.read(d, "r"),
    )
    run = ready.get("run", "r")
    assert run["input"]["calibration"]["weights"] == "inverse"
    assert run["answer"]["calibration"]["coefficients"] == fitted["coefficients"]


def test_ten_readings_at_both_ends_are_tested_for_their_scatter(ready: Desk) -> None:
    """ISO 8466-1: ten readings at the lowest and the highest level; here the top scatters ten times more."""
    near = [f"{0.0190 + 0.0001 * (i % 3):.4f}" for i in range(10)]
    wide = [f"{0.3420 + 0.0020 * (i % 5):.4f}" for i in range(10)]
    middle = [("250", ["0.095"]), ("500", ["0.190"]), ("750", ["0.285"])]
    levels = [("50", near), *middle, ("900", wide)]
    standards = [{"cod": cod, "absorbance": read} for cod, read in levels]
    ready.tell(calibration(ready, "scattered", standards=standards))
    words = " ".join(one["words"] for one in ready.get("calibration", "scattered")["fitted"]["findings"])
    assert "weight by 1/x" in words


def test_a_hopeless_curve_says_why_and_keeps_its_points(ready: Desk) -> None:
    standards = [{"cod": cod, "absorbance": ["0.2"]} for cod, _ in STANDARDS]
    assert ready.held(calibration(ready, "flat", standards=standards)) == [None]
    curve = ready.get("calibration", "flat")
    assert curve["fitted"]["error"]
    assert len(curve["standards"]) == len(STANDARDS)
    assert ready.held(devices.planned(ready.device, "r", CODES[0], calibration="flat")) == ["wrong_plan"]


def _long_run(desk: Desk, bad: int) -> dict[str, Any]:
    """Digest two samples between three verifications, one of which reads far too low."""
    d = desk.device
    dilution = {"factor": 5.0, "steps": [], "relative_u": 0.001, "reason": ""}
    roles: list[dict[str, Any]] = [{"role": "blank"}, {"role": "blank"}]
    check = {"role": "verification", "expected": "500"}
    roles += [check, *[{"role": "sample", "bottle": CODES[0], "dilution": dilution}] * 3]
    roles += [check, *[{"role": "sample", "bottle": CODES[1], "dilution": dilution}] * 3, check]
    tubes = [{"position": i} | role for i, role in enumerate(roles, start=1)]
    desk.tell(devices.sample(d, "s0", CODES[0]), devices.sample(d, "s1", CODES[1]))
    desk.tell(devices.planned(d, "r", CODES[0], tubes=tubes), *devices.heated(d, "r"))
    seen = {"blank": "0.010", "sample": "0.180"}
    checks = 0
    for tube in tubes:
        text = seen.get(tube["role"], "0.200")
        if tube["role"] == "verification":
            text, checks = ("0.100" if checks == bad else text), checks + 1
        desk.tell(devices.reading(d, "r", tube["position"], text))
    assert desk.held(d.make("readings.finished", "r", {})) == [None]
    return desk.get("run", "r")


@pytest.mark.parametrize(
    ("bad", "held"),
    [(0, [CODES[0]]), (1, [CODES[0], CODES[1]]), (2, [CODES[1]])],
    ids=["first", "middle", "last"],
)
def test_a_failed_verification_holds_what_it_touches(ready: Desk, bad: int, held: list[str]) -> None:
    """EPA 410.4 revision 2.0, 9.3.4: everything since the last good verification is analysed again."""
    run = _long_run(ready, bad)
    assert sorted(run["bracketing"]["held"]) == sorted(held)
    d = ready.device
    assert ready.held(*devices.closed(d, "r"))[-1] is not None
    asked = [{"what": one["what"], "subject": one["subject"]} for one in run["questions"]]
    assert {one["what"] for one in asked} >= {"verification"}
    decided = [one | {"decision": "repeat", "reason": "fresh verification next"} for one in asked]
    assert ready.held(d.make("run.closed", "r", {"decisions": decided})) == [None]


def test_a_run_whose_verifications_hold_holds_nothing(ready: Desk) -> None:
    run = _long_run(ready, bad=9)
    assert run["bracketing"]["held"] == []
    assert json.loads(json.dumps(run["questions"])) == []
