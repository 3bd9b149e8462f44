"""The laboratory's own scatter takes over once 20 sets of tubes exist."""

from __future__ import annotations

import random
from typing import Any

import pytest

from app.records import experience
from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES

rng = random.Random(3)


def run(scatter: float, sets: int, status: str = "ok") -> dict[str, Any]:
    """Return a calculated run with some sets of three tubes."""
    tubes = [
        {
            "role": "sample",
            "bottle": CODES[i],
            "dilution": {"factor": 1.0},
            "excluded": None,
            "in_tube": level * (1 + scatter * rng.gauss(0, 1)),
        }
        for i, level in enumerate(80 + 40 * k for k in range(sets))
        for _ in range(3)
    ]
    samples = [{"sample": CODES[i], "status": status} for i in range(sets)]
    return {"tubes": tubes, "answer": {"samples": samples}}


class Runs:
    """Stands for the write transaction: it knows the latest runs."""

    def __init__(self, *runs: dict[str, Any]) -> None:
        self.runs = list(runs)

    def latest(self, _type: str, count: int) -> list[dict[str, Any]]:
        """Return the runs."""
        return self.runs[:count]


START = {"repeatability": {"a": 4.0, "k": 0.025, "dof": None}}


def test_until_twenty_sets_the_starting_value_holds() -> None:
    found = experience.repeatability(Runs(run(0.01, 19)), START)  # type: ignore[arg-type]
    assert found == {"a": 4.0, "k": 0.025, "dof": None}


def test_from_twenty_sets_the_own_scatter_holds_with_its_degrees_of_freedom() -> None:
    found = experience.repeatability(Runs(run(0.01, 15), run(0.01, 15)), START)  # type: ignore[arg-type]
    assert found["dof"] is not None
    sigma = (found["a"] ** 2 + (found["k"] * 400) ** 2) ** 0.5
    assert sigma == pytest.approx(4.0, rel=0.4)  # 1 % of 400 mg/L


def test_sets_over_range_teach_nothing_and_a_set_value_stands() -> None:
    assert experience.tube_sets(run(0.5, 5, "over")) == []
    own = {"repeatability": {"a": 2.0, "k": 0.01, "dof": 12}}
    assert experience.repeatability(Runs(run(0.3, 30)), own) == own["repeatability"]  # type: ignore[arg-type]


def test_a_run_with_no_history_uses_the_starting_value(ready: Desk) -> None:
    ready.tell(*devices.whole_path("maren")[9:])
    policy = ready.get("run", "run-1")["input"]["policy"]
    assert policy["repeatability"] == {"a": 4.0, "k": 0.025, "dof": None}
