"""ROS, Kaplan-Meier and permits' averaging rules against Helsel and Cohn, Helsel, and statsmodels."""

from __future__ import annotations

import numpy as np
import pytest
from statsmodels.duration.survfunc import SurvfuncRight
from statsmodels.imputation.ros import impute_ros

from app.compliance.nondetects import average, kaplan_meier, ros

pytestmark = pytest.mark.published

APP_B = [1] * 6 + [3, 7, 9] + [10] * 3 + [12, 15, 20, 27, 33, 50]
APP_B_BELOW = [True] * 6 + [False] * 3 + [True] * 3 + [False] * 6
OAHU = [3.2, 2.8] + [2.0] * 8 + [1.7, 1.5] + [1.0] * 4 + [0.9, 0.9, 0.7, 0.7, 0.6, 0.5, 0.5, 0.5]
OAHU_BELOW = [False] * 2 + [True] * 8 + [False] * 2 + [True] * 4 + [False, True] + [False] * 6


def test_appendix_b_of_helsel_and_cohn() -> None:
    """Water Resources Research 24 (1988) 1997, app. B, as in statsmodels' tests (tolerance 0.015 there)."""
    found = ros(APP_B, APP_B_BELOW)
    published = [0.47, 0.85, 1.11, 1.27, 1.76, 2.34, 2.50, 3.03, 4.80]
    assert found.imputed == pytest.approx(published, abs=0.015)
    assert found.exceeding == pytest.approx((0.55556, 0.33333), abs=6e-6)
    assert (found.intercept, found.slope) == pytest.approx((1.569602, 1.511476), abs=6e-7)
    assert (found.mean, found.sd) == pytest.approx((10.7882, 13.6815), abs=6e-5)


def test_arsenic_of_oahu() -> None:
    """Helsel (2005): ROS mean 0.972, sd 0.718, median 0.700; Kaplan-Meier 0.949 (summary from memory)."""
    found = ros(OAHU, OAHU_BELOW)
    assert (found.mean, found.sd, found.median) == pytest.approx((0.972, 0.718, 0.700), abs=6e-4)
    assert found.exceeding == pytest.approx((0.3125, 0.214286, 0.083333), abs=6e-7)
    assert kaplan_meier(OAHU, OAHU_BELOW).mean == pytest.approx(0.949, abs=5e-4)


def test_the_mean_needs_a_stated_convention() -> None:
    """Appendix B again: 11.463, 10.574 or 10.130 by where the rest is placed (computed apart)."""
    means = [
        kaplan_meier(APP_B, APP_B_BELOW, place).mean for place in ("smallest detect", "lowest bound", "zero")
    ]
    assert means == pytest.approx([11.463, 10.574, 10.130], abs=6e-4)


@pytest.mark.parametrize("seed", range(6))
def test_ros_and_kaplan_meier_as_statsmodels(seed: int) -> None:
    """statsmodels.imputation.ros and, on flipped values, statsmodels.duration.survfunc; invented series."""
    rng = np.random.default_rng(seed)
    values = rng.lognormal(3, 1, 30).round(1) + 0.1
    bounds = rng.choice([5.0, 12.0, 25.0], 30)
    below = values < bounds
    shown = np.where(below, bounds, values)
    reference = np.sort(impute_ros(shown, below))
    mine = ros(list(shown), list(below))
    whole = np.sort([*shown[~below], *mine.imputed])
    assert whole == pytest.approx(reference, rel=1e-9)

    flipped = SurvfuncRight(1000.0 - shown, (~below).astype(int))
    estimate = kaplan_meier(list(shown), list(below))
    at_or_below = [1.0, *flipped.surv_prob[:-1]]
    assert estimate.values == pytest.approx(tuple(1000.0 - flipped.surv_times)[::-1])
    assert estimate.at_or_below == pytest.approx(tuple(at_or_below)[::-1])
    assert estimate.unplaced == pytest.approx(flipped.surv_prob[-1])


@pytest.mark.parametrize(
    ("rule", "shown"), [("zero", "22.5"), ("half", "25"), ("limit", "27.5"), ("median", "< 10")]
)
def test_averaging_rules_in_force(rule: str, shown: str) -> None:
    """<10, 40, 50, <10 by rules printed in permits (Colorado: zero; California: median)."""
    assert str(average([10, 40, 50, 10], [True, False, False, True], rule)) == shown


@pytest.mark.parametrize("rule", ["zero", "half", "limit", "median"])
def test_all_below_is_below(rule: str) -> None:
    """<10 and <10 are "< 10", never 0 and never 5 (a Colorado permit)."""
    assert str(average([10, 10], [True, True], rule)) == "< 10"
