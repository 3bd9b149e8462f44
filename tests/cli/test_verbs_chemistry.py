"""The verbs oxygen-demand, recipe, fit, calculate and detection-limit: JSON in, JSON out."""

from __future__ import annotations

import copy
import json
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app import verbs
from app.errors import InputError

RECIPE: dict[str, Any] = {
    "sample_ml": 2.5,
    "digestion_solution_ml": 1.5,
    "acid_reagent_ml": 3.5,
    "dichromate_g_per_l": 10.216,
    "mercury_sulfate_g_per_l": 33.3,
    "silver_sulfate_g_per_l": 10.12,
    "wavelength_nm": 600,
}
STANDARDS = [
    {"cod": 0, "absorbance": [0.0003]},
    {"cod": 100, "absorbance": [0.0379, 0.0382]},
    {"cod": 300, "absorbance": [0.1138]},
    {"cod": 500, "absorbance": [0.1904]},
    {"cod": 700, "absorbance": [0.2655]},
    {"cod": 900, "absorbance": [0.3421]},
]
FIT: dict[str, Any] = {
    "standards": STANDARDS,
    "model": "linear",
    "weights": "equal",
    "read": [[0.187], [0.201, 0.199, 0.202]],
    "confidence": 0.95,
}
POLICY: dict[str, Any] = {
    "repeatability": {"a": 4, "k": 0.025, "dof": 40},
    "bias_relative_u": 0.02,
    "bias_dof": 11,
    "verification_percent": 10,
    "duplicate_rpd_percent": 20,
    "spike_percent": [90, 110],
}
CALCULATE: dict[str, Any] = {
    "recipe": RECIPE,
    "calibration": {"standards": STANDARDS, "model": "linear", "standards_relative_u": 0.005},
    "working_range": [20, 900],
    "blanks": [0.011, 0.010, 0.012],
    "tubes": [
        {
            "sample": "S1",
            "absorbance": [0.201, 0.198, 0.5],
            "dilution_factor": 10,
            "dilution_relative_u": 0.004,
            "colour": "orange",
            "remaining_oxidant": 0.42,
            "excluded": [{"index": 2, "reason": "cap leaked"}],
        },
        {"sample": "S2", "absorbance": [0.199], "dilution_factor": 10, "dilution_relative_u": 0.004},
        {"sample": "S3", "absorbance": [0.4], "dilution_factor": 2, "dilution_relative_u": 0, "colour": None},
        {"sample": "S4", "absorbance": [0.013], "dilution_factor": 20, "dilution_relative_u": 0},
    ],
    "verifications": [{"expected": 500, "absorbance": [0.201]}],
    "duplicates": [["S1", "S2"]],
    "spikes": [{"unspiked": "S1", "spiked": "S2", "sample_ml": 50, "spike_ml": 1, "spike_mg_l": 5000}],
    "policy": POLICY,
}
DETECTION = {
    "spikes": [9.2, 10.8, 8.7, 11.1, 9.9, 10.4, 8.5],
    "blanks": [0.3, None, 0.8, 1.5, None, 0.9, 0.2],
}
GOOD = {
    "oxygen-demand": {"formula": "C8H5KO4"},
    "recipe": RECIPE,
    "fit": FIT,
    "calculate": CALCULATE,
    "detection-limit": DETECTION,
}
JSON = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=8), inner, max_size=4),
    max_leaves=10,
)


def refused(verb: str, value: Any) -> dict[str, list[str]]:
    """Return the fields that a verb refuses, with the words about each."""
    with pytest.raises(InputError) as caught:
        verbs.find(verb)(value)
    assert caught.value.fields
    assert all(words for words in caught.value.fields.values())
    return caught.value.fields


def places(value: Any, path: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """Return the path of everything in a JSON value."""
    found = [path]
    pairs = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, inner in pairs:
        found += places(inner, (*path, key))
    return found


def changed(value: Any, path: tuple[Any, ...], new: Any) -> Any:
    """Return a JSON value with one place changed."""
    if not path:
        return new
    whole = copy.deepcopy(value)
    at = whole
    for step in path[:-1]:
        at = at[step]
    at[path[-1]] = new
    return whole


@pytest.mark.parametrize("verb", GOOD)
def test_a_good_input_is_answered_in_finite_json(verb: str) -> None:
    answer = verbs.find(verb)(GOOD[verb])
    assert json.loads(json.dumps(answer, allow_nan=False)) == answer


@pytest.mark.parametrize("verb", GOOD)
@settings(max_examples=150)
@given(data=st.data())
def test_any_change_of_a_good_input_is_answered_or_refused_with_fields(
    verb: str, data: st.DataObject
) -> None:
    path = data.draw(st.sampled_from(places(GOOD[verb])))
    extremes = st.sampled_from(
        [0, -1, 1e-300, 1e300, -1e300, 10**400, 5e-324, 1e12, "", [], {}, None, True, 1e-9]
    )
    value = changed(GOOD[verb], path, data.draw(JSON | extremes))
    try:
        answer = verbs.find(verb)(value)
    except InputError as error:
        assert error.fields
        json.dumps(error.body(), allow_nan=False)
    else:
        json.dumps(answer, allow_nan=False)


@pytest.mark.parametrize("verb", GOOD)
@given(value=JSON)
def test_any_json_at_all_is_refused_with_fields(verb: str, value: Any) -> None:
    assert refused(verb, value)


@pytest.mark.parametrize("verb", GOOD)
def test_an_unknown_key_is_an_error(verb: str) -> None:
    assert list(refused(verb, {**GOOD[verb], "colour_of_the_lid": 1})) == ["colour_of_the_lid"]


@pytest.mark.parametrize("verb", GOOD)
def test_a_missing_key_is_named(verb: str) -> None:
    optional = {"model", "weights", "read", "confidence", "blanks", "verifications", "duplicates"}
    optional |= {"spikes"} if verb == "calculate" else set()
    for key in GOOD[verb]:
        if verb != "detection-limit" and key in optional:
            continue
        less = {k: v for k, v in GOOD[verb].items() if k != key}
        assert refused(verb, less)[key] == ["is missing"]


def test_oxygen_demand_answers_its_contract() -> None:
    answer = verbs.find("oxygen-demand")({"formula": "C8H5KO4"})
    assert answer.keys() == {"formula", "molar_mass", "oxygen_demand"}


def test_recipe_answers_its_contract_and_takes_a_range() -> None:
    answer = verbs.find("recipe")(RECIPE)
    assert answer["oxidant_capacity"] == pytest.approx(1000.06, abs=0.02)
    assert answer["chloride_limit"] == pytest.approx(1998.0)
    assert answer["per_tube_mg"] == pytest.approx(
        {"mercury": 33.776, "chromium": 5.417, "silver": 24.507}, abs=2e-3
    )
    assert (answer["tube_volume_ml"], answer["per_tube_acid_ml"], answer["warnings"]) == (7.5, 3.5, [])
    assert verbs.find("recipe")({**RECIPE, "working_range": [20, 950]})["warnings"]
    assert list(refused("recipe", {**RECIPE, "working_range": [20]})) == ["working_range"]


def test_fit_answers_its_contract() -> None:
    answer = verbs.find("fit")(FIT)
    assert answer["standards"][0].keys() == {"cod", "absorbance", "back_calculated", "recovery_percent"}
    assert answer["standards"][0]["recovery_percent"] is None
    assert answer["read"][0].keys() >= {"cod", "u", "dof", "low", "high"}
    assert answer["lack_of_fit"].keys() == answer["mandel"].keys() == {"f", "p"}
    assert (answer["n"], answer["dof"]) == (7, 5)


def test_fit_needs_only_its_standards() -> None:
    answer = verbs.find("fit")({"standards": STANDARDS})
    assert (answer["model"], answer["weights"], answer["read"]) == ("linear", "equal", [])


def test_readings_that_the_curve_cannot_turn_back_are_named() -> None:
    bent = [{"cod": x, "absorbance": [x * 4e-4 - x * x * 1.5e-7]} for x in (0, 100, 300, 500, 700, 900)]
    value = {"standards": bent, "model": "quadratic", "read": [[0.1], [0.9], [0.2], []]}
    assert set(refused("fit", value)) == {"read.1", "read.3"}


@pytest.mark.parametrize("confidence", [0, 1, -0.5, 0.99999, 2])
def test_a_confidence_that_is_none_is_refused(confidence: float) -> None:
    assert list(refused("fit", {**FIT, "confidence": confidence})) == ["confidence"]


def test_a_wider_confidence_gives_a_wider_interval() -> None:
    usual = verbs.find("fit")(FIT)["read"][0]
    wide = verbs.find("fit")({**FIT, "confidence": 0.99})["read"][0]
    assert wide["u"] == usual["u"]
    assert wide["low"] < usual["low"] < usual["high"] < wide["high"]


def test_calculate_answers_its_contract() -> None:
    answer = verbs.find("calculate")(CALCULATE)
    first, second, over, below = answer["samples"]
    assert first.keys() == {
        "sample", "used", "excluded", "suspect", "absorbance", "in_tube", "cod", "u", "dof", "expanded_u",
        "components", "status", "reported", "advice",
    }  # fmt: skip
    assert first["excluded"] == [{"index": 2, "by": "person", "reason": "cap leaked"}]
    assert first["components"].keys() == {"line", "repeatability", "dilution", "standards", "bias"}
    assert (second["status"], second["advice"]) == ("ok", None)
    assert (over["status"], over["reported"]) == ("over", {"cod": "> 1800", "expanded_u": None})
    assert (below["status"], below["reported"]) == ("below", {"cod": "< 400", "expanded_u": None})
    assert over["advice"].keys() == {"action", "dilution_factor", "why"}
    assert answer["checks"].keys() == {"verifications", "duplicates", "spikes", "blank"}
    assert answer["checks"]["blank"] == {"mean": pytest.approx(0.011), "sd": pytest.approx(0.001)}
    assert answer["ok"] is True
    assert answer["calibration"] == {k: v for k, v in verbs.find("fit")(FIT).items() if k != "read"}


def test_calculate_names_what_is_wrong_in_structure_and_in_meaning_at_once() -> None:
    value = copy.deepcopy(CALCULATE)
    value["recipe"]["sample_ml"] = -1
    value["calibration"]["standards"][1]["absorbance"] = ["0.1", None]
    value["working_range"] = [900, 20]
    value["blanks"] = [True]
    value["tubes"][0]["absorbance"] = [0.2, "x", float("nan")]
    value["tubes"][1]["dilution_factor"] = 0.5
    value["tubes"][2]["colour"] = "red"
    value["tubes"][3]["excluded"] = [{"index": 5, "reason": "spilled"}, {"index": 0.5}]
    value["duplicates"] = [["S1", "S9"], ["S1"]]
    value["spikes"][0]["spiked"] = "S8"
    value["policy"]["spike_percent"] = [110, 90]
    value["policy"]["verification_percent"] = None
    value["policy"]["what"] = 1
    assert set(refused("calculate", value)) == {
        "recipe.sample_ml",
        "calibration.standards.1.absorbance",
        "working_range",
        "blanks",
        "tubes.0.absorbance",
        "tubes.1.dilution_factor",
        "tubes.2.colour",
        "tubes.3.excluded.1.index",
        "tubes.3.excluded.1.reason",
        "tubes.3.excluded.0.index",
        "duplicates.1",
        "spikes.0.spiked",
        "policy.spike_percent",
        "policy.verification_percent",
        "policy.what",
    }


def test_a_check_is_not_blamed_for_a_sample_whose_name_cannot_be_read() -> None:
    value = changed(CALCULATE, ("tubes", 1, "sample"), 7)
    assert list(refused("calculate", value)) == ["tubes.1.sample"]


@pytest.mark.parametrize(
    ("path", "new", "field", "word"),
    [
        (
            ("tubes", 0, "absorbance"),
            [0.2, "0.2"],
            "tubes.0.absorbance",
            "number 2 must be a number, not text",
        ),
        (("tubes", 0, "absorbance"), [], "tubes.0.absorbance", "at least one reading"),
        (("tubes", 0, "absorbance"), 0.2, "tubes.0.absorbance", "list of numbers"),
        (("tubes", 0, "dilution_factor"), True, "tubes.0.dilution_factor", "must be a number"),
        (("tubes", 0, "dilution_factor"), float("inf"), "tubes.0.dilution_factor", "finite"),
        (("tubes", 0, "dilution_factor"), 10**400, "tubes.0.dilution_factor", "finite"),
        (("tubes", 0, "excluded", 0, "index"), 2.0, "tubes.0.excluded.0.index", "whole"),
        (
            ("tubes", 0, "excluded"),
            [{"index": i, "reason": "spilled"} for i in range(3)],
            "tubes.0.excluded",
            "left",
        ),
        (("tubes", 1, "sample"), "S1", "tubes.1.sample", "twice"),
        (("tubes", 1, "sample"), "\ud800", "tubes.1.sample", "text"),
        (("tubes",), None, "tubes", "null"),
        (("tubes",), {}, "tubes", "list"),
        (("blanks",), [], "blanks", "at least one"),
        (("working_range",), [900, 900], "working_range", "below"),
        (("duplicates",), [["S1", "S1"]], "duplicates.0", "itself"),
        (("calibration", "standards"), STANDARDS[:4], "calibration.standards", "at least 5 levels"),
        (("calibration", "standards"), [], "calibration.standards", "at least 5 levels"),
        (("calibration", "model"), "cubic", "calibration.model", "linear, quadratic"),
        (("recipe", "wavelength_nm"), 420, "calibration.standards", "falls"),
    ],
)
def test_words_an_analyst_uses(path: tuple[Any, ...], new: Any, field: str, word: str) -> None:
    value = changed(CALCULATE, path, new)
    if path == ("tubes", 1, "sample"):
        value["duplicates"], value["spikes"] = [], []
    found = refused("calculate", value)
    assert list(found) == [field]
    assert any(word in sentence for sentence in found[field])


def test_detection_limit_answers_its_contract() -> None:
    answer = verbs.find("detection-limit")(DETECTION)
    assert answer.keys() == {"mdl_spikes", "mdl_blanks", "mdl"}
    assert answer["mdl_blanks"] == 1.5
