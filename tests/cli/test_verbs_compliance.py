"""The verbs assess, load, bod-ratio and trend: JSON in, JSON out, every bad field named at once."""

from __future__ import annotations

import io
import json
import math
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app import cli, verbs
from app.errors import InputError

ASSESS: dict[str, Any] = {
    "limits": {"daily_maximum": 1000, "monthly_average": 700, "technical_review_factor": 1.2},
    "time_zone": "America/Chicago",
    "window_end": "2031-06-30",
    "non_detect": "half",
    "results": [
        {"taken": "2031-01-12T09:00:00-06:00", "cod": 1400, "known": "2031-03-08T14:10:00-06:00"},
        {"taken": "2031-02-11T09:00:00-06:00", "cod": 1500, "below": True},
        {"taken": "2031-03-11T09:00:00-05:00", "cod": 300, "above": False, "below": False},
    ],
}
LOAD: dict[str, Any] = {
    "flow_m3": [100, 120, None, 90],
    "samples": [{"day": 1, "cod": 800}, {"day": 4, "cod": 900}],
}
RATIO: dict[str, Any] = {
    "pairs": [{"cod": 100, "bod": 55}, {"cod": 200, "bod": 95}, {"cod": 400, "bod": 210}],
    "estimate": [300],
}
TREND: dict[str, Any] = {
    "values": [
        {"at": "2031-01-01T00:00:00Z", "value": 5},
        {"at": "2031-02-01T00:00:00Z", "value": 6},
        {"at": "2031-03-01T00:00:00Z", "value": 8},
    ]
}
GOOD = {"assess": ASSESS, "load": LOAD, "bod-ratio": RATIO, "trend": TREND}
JSON = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=8), inner, max_size=4),
    max_leaves=12,
)


def wrong_fields(verb: str, value: Any) -> set[str]:
    """Return the fields a verb refuses."""
    with pytest.raises(InputError) as caught:
        verbs.find(verb)(value)
    assert all(caught.value.fields.values())
    return set(caught.value.fields)


def with_change(verb: str, path: str, value: Any) -> Any:
    """Return a good input with one place changed; a new key is added."""
    whole = json.loads(json.dumps(GOOD[verb]))
    *steps, last = [int(s) if s.isdigit() else s for s in path.split(".")]
    place = whole
    for step in steps:
        place = place[step]
    place[last] = value
    return whole


def test_assess_says_what_it_used_and_what_is_open() -> None:
    found = verbs.find("assess")(ASSESS)
    assert found["window"] == ["2031-01-01", "2031-06-30"]
    assert found["undecided"] == ["2031-02-11"]
    assert found["daily"] == {
        "n": 2,
        "exceeding": 1,
        "exceeding_fraction": 0.5,
        "technical": 1,
        "technical_fraction": 0.5,
        "few": True,
    }
    assert (found["chronic"], found["technical_review"], found["word"]) == (
        False,
        True,
        "significant noncompliance",
    )
    assert found["settings"]["technical_review_factor"] == 1.2


def test_assess_counts_24_elapsed_hours_over_the_clock_change() -> None:
    """Known at 14:10 the day before clocks go forward: notice is due at 15:10, results 30 days later."""
    daily, monthly = verbs.find("assess")(ASSESS)["exceedances"]
    assert (daily["basis"], daily["day"], daily["value"], daily["limit"]) == (
        "daily_maximum",
        "2031-01-12",
        1400,
        1000,
    )
    assert (daily["notify_by"], daily["results_by"]) == ("2031-03-09T15:10:00-05:00", "2031-04-07")
    assert (monthly["basis"], monthly["month"]) == ("monthly_average", "2031-01")


def test_assess_without_limits_or_results_judges_nothing() -> None:
    bare = {"limits": {}, "time_zone": "UTC", "window_end": "2031-06-30", "results": []}
    found = verbs.find("assess")(bare)
    assert (found["daily"], found["monthly"], found["significant_noncompliance"]) == (None, None, None)


def test_load_bod_ratio_and_trend_answer() -> None:
    load, ratio, trend = (verbs.find(v)(GOOD[v]) for v in ("load", "bod-ratio", "trend"))
    assert (load["days"], load["sampled"], load["filled"]) == (4, 2, 1)
    assert load["interval_kg"] is None and load["weak"]
    assert ratio["estimate"][0]["inside_range"] is True
    assert ratio["range"] == [100, 400]
    assert (trend["n"], trend["s"]) == (3, 3)


@pytest.mark.parametrize(
    ("verb", "path", "value"),
    [
        ("assess", "limits.daily_maximum", -3),
        ("assess", "limits.daily_maximum", 0),
        ("assess", "limits.daily_maximum", True),
        ("assess", "limits.daily_maximum", "1000"),
        ("assess", "limits.technical_review_factor", 0.5),
        ("assess", "limits.weekly", 5),
        ("assess", "time_zone", "Mars/Olympus"),
        ("assess", "time_zone", "../../etc/passwd"),
        ("assess", "time_zone", ""),
        ("assess", "time_zone", None),
        ("assess", "window_end", "2031-13-01"),
        ("assess", "window_end", "2031-06"),
        ("assess", "window_end", "20310630"),
        ("assess", "window_end", 20310630),
        ("assess", "non_detect", "third"),
        ("assess", "results", None),
        ("assess", "results.0", 5),
        ("assess", "results.0.taken", "2031-01-12T09:00:00"),
        ("assess", "results.0.taken", "yesterday"),
        ("assess", "results.0.taken", "0001-01-01T00:00:00+05:00"),
        ("assess", "results.0.cod", None),
        ("assess", "results.0.cod", -1),
        ("assess", "results.0.cod", math.nan),
        ("assess", "results.0.cod", math.inf),
        ("assess", "results.0.cod", 10**400),
        ("assess", "results.0.below", 1),
        ("assess", "results.0.known", "2030-01-12T09:00:00-06:00"),
        ("assess", "results.1.above", True),
        ("assess", "colour", "red"),
        ("load", "flow_m3.0", -1),
        ("load", "flow_m3.0", "100"),
        ("load", "samples.0.day", 1.0),
        ("load", "samples.0.day", 0),
        ("load", "samples.0.day", 5),
        ("load", "samples.0.day", 3),
        ("load", "samples.0.day", 4),
        ("load", "samples.0.cod", False),
        ("load", "samples.0.flow", 5),
        ("bod-ratio", "pairs.0.bod", None),
        ("bod-ratio", "pairs.0.ph", 7),
        ("bod-ratio", "estimate.0", "900"),
        ("trend", "values.0.at", "2031-01-01"),
        ("trend", "values.0.value", None),
        ("trend", "values.0.unit", "mg/L"),
    ],
)
def test_one_bad_place_is_named_by_its_path(verb: str, path: str, value: Any) -> None:
    found = wrong_fields(verb, with_change(verb, path, value))
    assert found in ({path}, {path.rpartition(".")[0] + ".day"}, {"samples.1.day"})


@pytest.mark.parametrize(
    ("verb", "value", "fields"),
    [
        ("assess", {}, {"limits", "time_zone", "results", "window_end"}),
        (
            "assess",
            {
                "limits": {"daily_maximum": -3},
                "time_zone": "Mars/Olympus",
                "results": [],
                "window_end": "2031-13-01",
            },
            {"limits.daily_maximum", "time_zone", "window_end"},
        ),
        ("load", {"flow_m3": [], "samples": []}, {"samples"}),
        ("load", {"flow_m3": "x", "samples": [{"day": 1}]}, {"flow_m3", "samples.0.cod"}),
        ("bod-ratio", {"pairs": [{"cod": 1, "bod": 1}]}, {"pairs"}),
        ("trend", {"values": []}, {"values"}),
        ("trend", {"values": [TREND["values"][0], TREND["values"][0], TREND["values"][1]]}, {"values.1.at"}),
    ],
)
def test_every_bad_field_is_named_at_once(verb: str, value: Any, fields: set[str]) -> None:
    assert wrong_fields(verb, value) == fields


def test_a_value_below_its_bound_asks_how_it_counts() -> None:
    without = {key: value for key, value in ASSESS.items() if key != "non_detect"}
    assert wrong_fields("assess", without) == {"non_detect"}


@pytest.mark.parametrize("verb", sorted(GOOD))
@given(value=JSON)
def test_any_json_is_answered_or_refused_in_words(verb: str, value: Any) -> None:
    try:
        json.dumps(verbs.find(verb)(value), allow_nan=False)
    except InputError as error:
        assert error.fields


@given(
    flows=st.lists(st.none() | st.floats(0, 1e9), max_size=8),
    samples=st.lists(st.tuples(st.integers(1, 9), st.floats(0, 1e9)), max_size=6),
)
def test_any_numbers_of_a_month_give_finite_answers(flows: list[Any], samples: list[Any]) -> None:
    value = {"flow_m3": flows, "samples": [{"day": d, "cod": c} for d, c in samples]}
    try:
        json.dumps(verbs.find("load")(value), allow_nan=False)
    except InputError as error:
        assert error.fields


@given(
    st.lists(st.tuples(st.floats(0, 1e9), st.floats(0, 1e9)), max_size=8),
    st.lists(st.floats(0, 1e9), max_size=3),
)
def test_any_pairs_give_finite_answers(pairs: list[Any], estimate: list[Any]) -> None:
    value = {"pairs": [{"cod": c, "bod": b} for c, b in pairs], "estimate": estimate}
    try:
        json.dumps(verbs.find("bod-ratio")(value), allow_nan=False)
    except InputError as error:
        assert error.fields


def test_lines_go_on_past_a_bad_one(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    lines = [json.dumps(TREND), '{"values": [NaN]}', "nonsense", json.dumps(TREND)]
    monkeypatch.setattr("sys.stdin", io.StringIO("\n".join(lines) + "\n"))
    assert cli.main(["trend", "--lines"]) == 2
    answers = [json.loads(line) for line in capsys.readouterr().out.splitlines()]
    assert ["error" in a for a in answers] == [False, True, True, False]


def test_wrong_input_says_so_on_standard_error_only(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    file = tmp_path / "input.json"
    file.write_text(json.dumps({**LOAD, "flow_m3": [1, 2]}), encoding="utf-8")
    assert cli.main(["load", str(file)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert json.loads(err)["fields"] == {"samples.1.day": ["the flow record has days 1 to 2"]}


@pytest.mark.parametrize("name", ["assess", "review", "wrong_input"])
def test_the_contracts_cases(shared: Path, name: str) -> None:
    """Every outside case of these verbs, compared number by number."""
    told = 0
    for line in (shared / "cases" / f"{name}.jsonl").read_text("utf-8").splitlines():
        case = json.loads(line)
        if case["verb"] not in GOOD:
            continue
        told += 1
        if case.get("error"):
            assert wrong_fields(case["verb"], case["input"])
        else:
            agree(case["expect"], verbs.find(case["verb"])(case["input"]), case.get("rel", 1e-6))
    assert told >= 3


def agree(want: Any, got: Any, rel: float) -> None:
    """Hold an answer against what is expected of it; it may say more."""
    if isinstance(want, dict):
        for key, value in want.items():
            agree(value, got[key], rel)
    elif isinstance(want, list):
        assert len(want) == len(got)
        for a, b in zip(want, got, strict=True):
            agree(a, b, rel)
    elif isinstance(want, (int, float)) and not isinstance(want, bool):
        assert got == pytest.approx(want, rel=rel)
    else:
        assert got == want
