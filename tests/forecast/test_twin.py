"""The tablet forecasts exactly as the server does."""

from __future__ import annotations

import json
import math
import shutil
import subprocess
from pathlib import Path
from typing import Any

import pytest

from tests.forecast.twin import VECTORS, cases

SCRIPT = Path(__file__).with_name("twin.mjs")


def near(a: Any, b: Any) -> bool:
    """Tell whether two JSON values are equal, numbers to what another machine's rounding may change."""
    if isinstance(a, dict) and isinstance(b, dict):
        return a.keys() == b.keys() and all(near(a[key], b[key]) for key in a)
    if isinstance(a, list) and isinstance(b, list):
        return len(a) == len(b) and all(near(x, y) for x, y in zip(a, b, strict=True))
    if isinstance(a, float) and isinstance(b, float):
        return math.isclose(a, b, rel_tol=1e-6, abs_tol=1e-9)
    return bool(a == b)


def test_the_vectors_are_what_the_server_makes_now() -> None:
    assert near(json.loads(VECTORS.read_text(encoding="utf-8")), json.loads(json.dumps(cases())))


def test_the_twin_agrees_to_one_in_a_million() -> None:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the tablet's forecast is not compared with the server's")
    run = subprocess.run([node, "--no-warnings", str(SCRIPT)], capture_output=True, text=True, check=True)
    assert json.loads(run.stdout) == {"held": len(cases()), "misses": []}
