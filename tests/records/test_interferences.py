"""What was measured beside the COD: words on each result, its number never touched."""

from __future__ import annotations

import ast
import json
from pathlib import Path
from typing import Any

import pytest

from app.chemistry.interferences import CHLORIDE, CORRECTABLE
from app.records import rebuild
from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES, measured

APP = Path(__file__).parents[2] / "app"
CODE = CODES[0]
RESULT = f"r:{CODE}"


def values(desk: Desk, **species: str) -> str:
    """Return the entry of values measured beside the COD, in mg/L."""
    return devices.beside(desk.device, CODE, **species)


def digest(desk: Desk, factor: float = 5, **sample: Any) -> None:
    """Tell a bottle's way to its result."""
    d = desk.device
    texts = [devices.sample(d, "s", CODE, **sample), devices.planned(d, "r", CODE, factor)]
    gate = '"chloride_within_limit"'
    heated = [
        text.replace(gate, f'{gate}, "note": "to see what it gives"') for text in devices.heated(d, "r")
    ]
    assert set(desk.held(*texts, *heated, *devices.read(d, "r"))) == {None}


def letters(desk: Desk) -> list[str]:
    """Return the letters on the result."""
    return [one["letter"] for one in desk.get("result", RESULT)["qualifiers"]]


@pytest.mark.parametrize(
    ("chloride", "factor", "expected"),
    [("800", 1, []), ("1500", 1, ["C"]), ("1500", 5, []), ("2400", 1, ["CX"]), ("2400", 2, ["C"]),
     ("< 500", 1, []), ("< 3000", 1, ["CU"]), ("> 3000", 1, ["CX"]), ("> 1000", 1, ["CU"]),
     ("4,2e3", 2, ["CX"])],
)  # fmt: skip
def test_a_recorded_chloride_is_judged_after_dilution(
    ready: Desk, chloride: str, factor: float, expected: list[str]
) -> None:
    digest(ready, factor, field={"chloride_mg_l": measured(chloride, "mg/L")})
    assert letters(ready) == expected
    assert ready.get("result", RESULT)["chloride"]["basis"] == "recorded"


@pytest.mark.parametrize(
    ("field", "expected", "basis"),
    [
        ({"conductivity_us_cm": measured("1,84", "mS/cm")}, [], "bounded by conductivity"),
        ({"conductivity_us_cm": measured("14", "mS/cm")}, ["CU"], "unknown"),
        ({}, ["CU"], "unknown"),
    ],
)
def test_conductivity_opens_the_gate_and_never_closes_it(
    ready: Desk, field: dict[str, Any], expected: list[str], basis: str
) -> None:
    digest(ready, 1, field=field)
    assert letters(ready) == expected
    assert ready.get("result", RESULT)["chloride"]["basis"] == basis


def test_a_value_measured_after_the_run_reaches_its_result_and_leaves_its_number(ready: Desk) -> None:
    digest(ready, 1, field={})
    before = ready.get("result", RESULT)
    assert letters(ready) == ["CU"]
    assert ready.held(values(ready, chloride="1200", nitrite="4.0", sulfide="< 0.5")) == [None]
    after = ready.get("result", RESULT)
    assert letters(ready) == ["C"]
    untouched = set(before) - {"chloride", "qualifiers", "corrected", "beside"}
    assert {name: after[name] for name in untouched} == {name: before[name] for name in untouched}
    assert any("Sulfide < 0.5 mg/L is a bound" in words for words in after["beside"])
    assert ready.held(values(ready, chloride="300")) == [None]
    assert letters(ready) == [], "the later value stands"
    assert ready.get("interferents", CODE)["nitrite"]["given"] == measured("4.0", "mg/L"), "the rest is kept"


def test_a_corrected_value_stands_beside_and_verdicts_keep_the_uncorrected_one(ready: Desk) -> None:
    assert ready.held(values(ready, nitrite="5", ferrous="100", sulfide="10")) == [None]
    digest(ready)
    result = ready.get("result", RESULT)
    taken = [one["oxygen_demand"] for one in result["corrected"]["corrections"]]
    assert taken == pytest.approx([5.71, 14.32, 19.96], abs=0.02)
    assert result["corrected"]["uncorrected"] == result["cod"]
    assert result["corrected"]["corrected"] == pytest.approx(result["cod"] - sum(taken))
    assert result["reported"]["cod"] == float(result["shown"])
    (verdict,) = result["verdicts"]
    assert result["shown"] in verdict["why"]
    assert "permits mean" in " ".join(result["beside"])


@pytest.mark.parametrize("chloride", ["0", "1900", "50000"])
def test_no_chloride_however_much_changes_any_number_of_a_result(ready: Desk, chloride: str) -> None:
    """Method 410.4 binds chloride by mercury: 0.226 of it is never subtracted, not even beside."""
    digest(ready, 1)
    plain = ready.get("result", RESULT)
    assert ready.held(values(ready, chloride=chloride)) == [None]
    with_chloride = ready.get("result", RESULT)
    for name in ("cod", "reported", "shown", "u", "expanded_u", "verdicts", "corrected"):
        assert with_chloride[name] == plain[name]
    assert with_chloride["corrected"] is None


def test_no_module_multiplies_by_what_chloride_takes() -> None:
    """The factor of chloride is used by the bound alone, and no correction knows chloride."""
    assert CHLORIDE not in CORRECTABLE.values()
    users = []
    for path in APP.rglob("*.py"):
        tree = ast.parse(path.read_text(encoding="utf-8"))
        for function in (one for one in ast.walk(tree) if isinstance(one, ast.FunctionDef)):
            names = {one.id for one in ast.walk(function) if isinstance(one, ast.Name)}
            names |= {one.attr for one in ast.walk(function) if isinstance(one, ast.Attribute)}
            if names & {"CHLORIDE", "chloride_at_most"}:
                users.append(function.name)
    assert users == ["chloride_at_most"]


def test_a_certified_result_is_not_touched(ready: Desk) -> None:
    digest(ready)
    issued = json.loads((Path(__file__).parents[1] / "journal/golden/certificate.issued.1.json").read_bytes())
    body = issued["body"] | {"result": RESULT, "sample": "s"}
    ready.ledger.state("certificate.issued", body["number"], body, "maren")
    before = ready.get("result", RESULT)
    assert ready.held(values(ready, chloride="9000", nitrite="5")) == [None]
    assert ready.get("result", RESULT) == before


def test_values_without_a_number_of_a_known_species_are_held(ready: Desk) -> None:
    d = ready.device
    nothing = {"bottle": CODE, "species": {}, "how": "strip", "note": ""}
    iodide = nothing | {"species": {"iodide": measured("1", "mg/L")}}
    assert ready.held(
        d.make("bottle.measured", CODE, nothing),
        d.make("bottle.measured", CODE, iodide),
        d.make("bottle.measured", CODES[1], nothing | {"species": {"chloride": measured("1", "mg/L")}}),
        values(ready, nitrite="-1"),
    ) == ["invalid", "invalid", "wrong_about", "invalid"]


def test_words_beside_results_are_replayed_at_a_rebuild(ready: Desk) -> None:
    digest(ready)
    assert ready.held(values(ready, nitrite="5")) == [None]
    done = rebuild.rebuild(ready.store)
    assert done.before == done.after


def test_the_chloride_gate_is_not_confirmed_against_what_was_measured_without_a_reason(ready: Desk) -> None:
    d = ready.device
    ready.tell(devices.sample(d, "s", CODE), values(ready, chloride="2400"), devices.planned(d, "r", CODE, 1))
    gate = {"gate": "chloride_within_limit"}
    reason = gate | {"note": "twice the mercury(II) sulfate by the method's own note"}
    said = [d.make("gate.confirmed", "r", body) for body in (gate, gate | {"note": " "}, reason)]
    assert ready.held(*said) == ["chloride_over_limit", "chloride_over_limit", None]
    assert ready.get("run", "r")["gates"]["chloride_within_limit"]["note"] == reason["note"]
    ready.tell(devices.planned(d, "r2", CODE, 2))
    assert ready.held(d.make("gate.confirmed", "r2", gate)) == [None], "diluted under the limit"
