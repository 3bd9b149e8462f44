"""The tablet forecasts and plans exactly as the server does."""

from __future__ import annotations

import json
import shutil
import subprocess
from pathlib import Path

import pytest

from app.forecast import Programme, posterior
from tests.forecast.made import walk
from tests.forecast.twin import cases

SCRIPT = Path(__file__).with_name("twin.mjs")


def test_the_twin_agrees_to_one_in_a_million_and_chooses_alike() -> None:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the tablet's forecast is not compared with the server's")
    made = cases()
    assert any(one["split"] for one in made)
    assert any(one["worth"] for one in made)
    assert any(one["bounded"] for one in made)
    assert any(plan["objections"] for one in made for plan in one["plans"])
    run = subprocess.run(
        [node, "--no-warnings", str(SCRIPT)],
        input=json.dumps(made),
        capture_output=True,
        text=True,
        check=True,
    )
    assert json.loads(run.stdout) == {"held": len(made), "misses": []}


def test_a_points_pack_is_small() -> None:
    """The whole posterior of a point with a long past, as it is stored and sent."""
    pack = json.dumps(posterior(Programme.default(), "dairy", walk(200)).to_json(), separators=(",", ":"))
    assert len(pack) < 2500
