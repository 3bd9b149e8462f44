"""What the form shows of a recipe before it is saved is what the server derives from it."""

from __future__ import annotations

import json
import shutil
import subprocess
from dataclasses import asdict
from pathlib import Path
from typing import Any

import pytest

from app.chemistry.recipe import Recipe, derive
from app.chemistry.standard_recipes import STANDARD_RECIPES, TUBES_ML, in_tube

SCRIPT = Path(__file__).with_name("recipe_sums.mjs")
RANGES = [(50.0, 900.0), (50.0, 950.0), (10.0, 90.0), (50.0, 1300.0), (20.0, 100.0)]


def cases() -> list[tuple[Recipe, tuple[float, float]]]:
    """Return every published recipe in every tube with sound and unsound ranges."""
    chemistries = [one.recipe for one in STANDARD_RECIPES]
    chemistries += [in_tube(one, tube) for one in chemistries for tube in TUBES_ML]
    chemistries += [Recipe(2.5, 1.5, 3.5, 10.216, 33.3, 10.12, 520.0)]
    return [(one, range_) for one in chemistries for range_ in RANGES]


def test_capacity_and_doubts_agree() -> None:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the recipe form's preview is not compared")
    given = [asdict(one) | {"working_low": low, "working_high": high} for one, (low, high) in cases()]
    run = subprocess.run(
        [node, "--no-warnings", str(SCRIPT)],
        input=json.dumps(given),
        capture_output=True,
        text=True,
        check=True,
    )
    found: list[dict[str, Any]] = json.loads(run.stdout)
    counts = set()
    for (recipe, range_), here in zip(cases(), found, strict=True):
        there = derive(recipe, range_)
        assert here["capacity"] == pytest.approx(there.oxidant_capacity, rel=1e-9)
        assert here["doubts"] == len(there.warnings)
        counts.add(here["doubts"])
    assert counts == {0, 1, 2}
