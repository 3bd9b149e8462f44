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
    return {"recipe": "high", "tubes": tubes, "answer": {"samples": samples}}


class Runs:
    """Stands for the write transaction: it knows the latest runs."""

    def __init__(self, *runs: dict[str, Any]) -> None:
        self.runs = list(runs)

    def latest(self, _type: str, count: int) -> list[dict[str, Any]]:
        """Return the runs."""
        return self.runs[:count]


START: dict[str, Any] = {
    "repeatability": {"a": 4.0, "k": 0.025, "dof": None},
    "bias_relative_u": 0.02,
    "bias_dof": None,
    "standards_relative_u": 0.005,
}


def learned(settings: dict[str, Any], *runs: dict[str, Any]) -> dict[str, Any]:
    """Return what is in force after some runs of one recipe."""
    return experience.in_force(Runs(*runs), settings, "high")  # type: ignore[arg-type]


def test_until_twenty_sets_the_starting_value_holds() -> None:
    found = learned(START, run(0.01, 19))
    assert found["policy"]["repeatability"] == {"a": 4.0, "k": 0.025, "dof": None}
    assert found["repeatability"]["words"] == "start values until 20 own sets exist; 19 so far"


def test_from_twenty_sets_the_own_scatter_holds_with_its_degrees_of_freedom() -> None:
    found = learned(START, run(0.01, 15), run(0.01, 15))["repeatability"]
    assert (found["own"], found["sets"]) == (True, 30)
    assert found["dof"] is not None
    sigma = (found["a"] ** 2 + (found["k"] * 400) ** 2) ** 0.5
    assert sigma == pytest.approx(4.0, rel=0.4)  # 1 % of 400 mg/L


def test_sets_over_range_teach_nothing_and_a_set_value_stands() -> None:
    assert experience.tube_sets(run(0.5, 5, "over")) == []
    own = START | {"repeatability": {"a": 2.0, "k": 0.01, "dof": 12}}
    assert learned(own, run(0.3, 30))["policy"]["repeatability"] == own["repeatability"]


def test_another_recipes_tubes_teach_nothing() -> None:
    other = run(0.01, 30) | {"recipe": "low"}
    assert learned(START, other)["repeatability"]["own"] is False


def controlled(*recoveries: float, left_out: str = "") -> dict[str, Any]:
    """Return a run with control samples of these recoveries."""
    checks = [
        {"what": "control", "subject": "position 5", "value": one, "left_out": left_out} for one in recoveries
    ]
    return run(0.01, 0) | {"checks": checks}


def test_until_twenty_controls_the_setting_of_the_bias_holds_and_says_so() -> None:
    found = learned(START, controlled(*[98.0] * 19), controlled(150.0, left_out="cap leaked"))
    assert (found["policy"]["bias_relative_u"], found["policy"]["bias_dof"]) == (0.02, None)
    assert found["bias"]["words"] == "the setting until 20 own controls exist; 19 so far"


def test_from_twenty_controls_the_bias_is_the_laboratorys_own() -> None:
    """Nordtest TR 537: the root of the mean square deviation and the reference's own u, squared and added."""
    found = learned(START, controlled(*[103.0, 97.0] * 10), controlled(103.0, 97.0))
    assert found["policy"]["bias_relative_u"] == pytest.approx((0.03**2 + 0.005**2) ** 0.5, rel=1e-12)
    assert (found["policy"]["bias_dof"], found["bias"]["n"]) == (21, 22)
    assert "Nordtest TR 537" in found["bias"]["words"]


def test_a_control_that_was_not_used_for_a_cause_says_nothing_of_the_bias() -> None:
    decision = {"what": "control", "subject": "position 5", "decision": "not used", "reason": "stood open"}
    spoilt = controlled(150.0) | {"closed": {"decisions": [decision]}}
    kept = controlled(150.0) | {"closed": {"decisions": [decision | {"decision": "accept with a note"}]}}
    assert learned(START, controlled(*[98.0] * 19), spoilt)["bias"]["n"] == 19
    assert learned(START, controlled(*[98.0] * 19), kept)["bias"]["n"] == 20


def test_a_bias_with_its_own_degrees_of_freedom_stands() -> None:
    found = learned(START | {"bias_dof": 11}, controlled(*[90.0] * 30))
    assert (found["policy"]["bias_relative_u"], found["policy"]["bias_dof"]) == (0.02, 11)


def test_a_run_with_no_history_uses_the_starting_value(ready: Desk) -> None:
    ready.tell(*devices.whole_path("maren")[9:])
    policy = ready.get("run", "run-1")["input"]["policy"]
    assert policy["repeatability"] == {"a": 4.0, "k": 0.025, "dof": None}
