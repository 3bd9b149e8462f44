"""The tablet's one choice of glassware is the server's, and no dilution goes without its uncertainty."""

from __future__ import annotations

import json
import math
import shutil
import subprocess
from itertools import product
from pathlib import Path
from typing import Any

import pytest

from app.chemistry.glassware import FLASKS_ML, PIPETTES_ML, Step, chain_factor, chain_relative_u
from app.forecast.glass import FLASKS, PIPETTES, chains_for, factors_of
from app.journal.kinds.settings import DEFAULTS

SCRIPT = Path(__file__).with_name("glassware.mjs")
PAIRS = [(p, f) for p, f in product(PIPETTES_ML, FLASKS_ML) if p < f]
CHAINS = [[pair] for pair in PAIRS] + [[(10, 100), (20, 100)], [(2, 50), (15, 250), (0.5, 5)]]
PLANS: list[tuple[float, list[tuple[float, float]]]] = [
    (50, [(10, 100), (20, 100)]),
    (5, [(10, 100)]),
    (4 / 3, [(15, 20)]),
]


def _told(factors: list[float], shelf: list[tuple[float, bool]] | None = None) -> dict[str, Any]:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the client's own sums are not run")
    given = json.dumps({"chains": CHAINS, "factors": factors, "plans": PLANS, "shelf": shelf or []})
    run = subprocess.run(
        [node, "--no-warnings", str(SCRIPT), given], capture_output=True, text=True, check=True
    )
    answer: dict[str, Any] = json.loads(run.stdout)
    return answer


def test_every_size_has_the_tolerance_of_astm_e969_and_e288() -> None:
    told = _told([])
    assert {size: tol for size, tol in told["pipettes"]} == {p: t.astm_ml for p, t in PIPETTES_ML.items()}
    assert {size: tol for size, tol in told["flasks"]} == {f: t.astm_ml for f, t in FLASKS_ML.items()}


def test_a_chain_has_the_factor_and_the_uncertainty_of_the_servers_sum() -> None:
    assert len(PAIRS) > 80
    for chain, (factor, relative_u) in zip(CHAINS, _told([])["chains"], strict=True):
        steps = [Step(*pair) for pair in chain]
        assert factor == pytest.approx(chain_factor(steps), rel=1e-12), chain
        assert relative_u == pytest.approx(chain_relative_u(steps), rel=1e-12), chain


def test_ten_to_a_hundred_by_hand() -> None:
    """Class A, ASTM: 0.02 of 10 mL and 0.08 of 100 mL, each over the square root of 6."""
    by_hand = math.hypot(0.02 / 10, 0.08 / 100) / math.sqrt(6)
    at = CHAINS.index([(10.0, 100.0)])
    assert _told([])["chains"][at] == pytest.approx([10, by_hand], rel=1e-12)


def test_the_shelf_makes_each_factor_by_the_servers_chains_in_the_servers_order() -> None:
    shelf = [(factor, solids) for solids in (False, True) for factor in factors_of(PIPETTES, FLASKS, solids)]
    assert len(shelf) > 60
    for (factor, solids), made in zip(shelf, _told([], shelf)["shelf"], strict=True):
        wanted = [
            [[step.pipette_ml, step.flask_ml] for step in chain.steps]
            for chain in chains_for(factor, solids=solids)
        ]
        assert made == wanted, (factor, solids)


def test_every_dilution_that_a_programme_begins_with_can_be_made() -> None:
    dilutions = DEFAULTS["dilutions"]
    for factor, made in zip(dilutions, _told(dilutions)["factors"], strict=True):
        assert "problem" not in made, made
        steps = [Step(**step) for step in made["steps"]]
        assert chain_factor(steps) == pytest.approx(factor)
        assert (made["relative_u"] > 0) == (factor > 1)


@pytest.mark.parametrize("factor", [3, 15, 30, 7.5])
def test_a_dilution_without_known_glassware_is_refused_never_called_exact(factor: float) -> None:
    (made,) = _told([factor])["factors"]
    assert "choose another dilution" in made["problem"]
    assert "relative_u" not in made


def test_a_plans_own_steps_are_followed_unless_they_make_another_factor_or_are_unknown() -> None:
    followed, other, unknown = _told([])["plans"]
    assert [(s["pipette_ml"], s["flask_ml"]) for s in followed["steps"]] == [(10, 100), (20, 100)]
    assert followed["relative_u"] == pytest.approx(
        chain_relative_u([Step(10, 100), Step(20, 100)]), rel=1e-12
    )
    assert chain_factor([Step(**step) for step in other["steps"]]) == pytest.approx(5)
    assert "problem" in unknown
