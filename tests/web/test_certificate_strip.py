"""The strip on paper shows what was expected at the point, as the plan keeps it."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest

from app.web.certificate_pictures import strip_of

RESULT: dict[str, Any] = {
    "dilution_factor": 5,
    "verdicts": [{"limit": 1500.0, "basis": "daily_maximum"}],
    "status": "ok",
    "reporting_level": 100,
    "top": 4500,
    "cod": 2210.0,
    "expanded_u": 130.0,
    "shown": "2210",
    "shown_u": "130",
}
RECIPE = {"working_low": 20, "working_high": 900}
PLAN = {"dilution_factor": 5, "p_in_range": 0.94, "median": 1900.0, "low": 820.0, "high": 4402.4}


def test_one_in_twenty_lies_below_the_lower_end_and_half_below_the_median() -> None:
    strip = strip_of(RESULT, RECIPE, {"plan": PLAN})
    cods, heights = np.array(strip.density).T
    logs = np.log(cods)
    below = np.concatenate([[0.0], np.cumsum((heights[1:] + heights[:-1]) / 2 * np.diff(logs))])
    shares = np.interp([math.log(PLAN["low"]), math.log(PLAN["median"])], logs, below / below[-1])
    assert shares == pytest.approx([0.05, 0.5], abs=0.003)
    assert strip.bars[0].share_percent == "94"


@pytest.mark.parametrize("plan", [None, PLAN | {"median": None}, PLAN | {"low": 1900.0}])
def test_without_an_expectation_nothing_is_drawn_of_one(plan: dict[str, Any] | None) -> None:
    assert strip_of(RESULT, RECIPE, {"plan": plan}).density == ()
