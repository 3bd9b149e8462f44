"""The tablet's sums of chemistry without a server are the server's: chloride gate, duties, budget."""

from __future__ import annotations

import json
import random
import shutil
import subprocess
from datetime import date, timedelta
from itertools import product
from pathlib import Path
from typing import Any

import pytest

from app.chemistry.detection_study import duties, months_later
from app.chemistry.interferences import chloride_gate
from app.chemistry.uncertainty import Component, combine, whole_dof

SCRIPT = Path(__file__).with_name("chemistry.mjs")
FACTORS = (1.0, 2.0, 5.0, 12.5)
GATES = [
    (limit, factor, {"mg_l": chloride, "sign": sign}, None)
    for limit, factor, chloride, sign in product(
        (1998.0, 0.0), FACTORS, (0.0, 640.3, 1998.0, 2400.0, 50123.7), "=<>"
    )
] + [(1998.0, f, None, c) for f, c in product(FACTORS, (None, 0.0, 1840.0, 6229.0, 14000.0, 85900.0, 5e5))]
COMPONENTS = (
    Component("line", 2.1, 5),
    Component("repeatability", 31.0, 18.0),
    Component("dilution", 0.0),
    Component("bias", 44.2, 11),
)


def told(**given: Any) -> dict[str, Any]:
    """Run the tablet's modules."""
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the client's own sums are not run")
    asked = json.dumps({"gates": [], "studies": [], "results": []} | given)
    run = subprocess.run(
        [node, "--no-warnings", str(SCRIPT), asked], capture_output=True, text=True, check=True
    )
    answer: dict[str, Any] = json.loads(run.stdout)
    return answer


def test_the_chloride_gate_says_the_same_on_both_sides() -> None:
    for given, said in zip(GATES, told(gates=GATES)["gates"], strict=True):
        limit, factor, known, conductivity = given
        chloride, sign = (known["mg_l"], known["sign"]) if known else (None, "=")
        gate = chloride_gate(limit, factor, chloride, conductivity, sign)
        assert said == {"verdict": gate.verdict, "words": gate.words}, given


def test_the_duties_are_the_same_on_both_sides() -> None:
    pick, studies, expected = random.Random(7), [], []
    for _ in range(60):
        computed = date(2030, 1, 1) + timedelta(days=pick.randrange(900))
        today = computed + timedelta(days=pick.randrange(500))
        spikes = [today - timedelta(days=pick.randrange(-40, 120)) for _ in range(pick.randrange(5))]
        rows = [{"tube": "spike", "instrument": "p", "left_out": "", "on": day.isoformat()} for day in spikes]
        limit = {"again_by": months_later(computed, 13).isoformat()}
        studies.append(({"instruments": ["p"], "rows": rows, "limits": [limit]}, today.isoformat()))
        expected.append([(one.what, one.due.isoformat()) for one in duties(computed, today, spikes)])
    found = told(studies=studies)["duties"]
    assert [[(one["what"].removeprefix("p: "), one["due"]) for one in each] for each in found] == expected


def test_the_budget_on_the_screen_has_the_shares_and_the_factor_of_the_sum() -> None:
    budget = combine(COMPONENTS)
    result = {
        "status": "ok",
        "u": budget.u,
        "dof": budget.dof,
        "expanded_u": budget.expanded_u,
        "components": {part.name: part.u for part in COMPONENTS},
    }
    ((shares, words), (none, _)) = told(results=[result, result | {"status": "below"}])["budgets"]
    assert none is None, "a bound carries no uncertainty"
    by_size = sorted(budget.shares(), reverse=True)
    assert [one["share"] for one in shares] == pytest.approx(by_size)
    assert f"{100 * by_size[0]:.0f}" in words
    assert f"freedom {whole_dof(budget.dof or 0)};" in words
    assert f"factor {budget.coverage_factor:.2f} for" in words
