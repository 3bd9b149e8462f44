"""Self-monitoring beside inspector splits: numbers from scipy and numpy apart from this program."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import optimize, stats

from app.compliance.compare import deming, differences, passing_bablok, signed_rank, signed_rpd_percent

pytestmark = pytest.mark.published

COUNTY = [540, 812, 1230, 455, 690, 985, 1510, 300, 760, 1120]
SELF = [510, 760, 1190, 450, 640, 930, 1395, 310, 705, 1045]
PAIRS = list(zip(COUNTY, SELF, strict=True))


def test_signed_differences() -> None:
    """Duplicate precision as 200 (a - b)/(a + b), signed; Bland and Altman's limits on it."""
    assert signed_rpd_percent(540, 480) == pytest.approx(11.7647, abs=5e-5)
    found = differences(PAIRS)
    assert found.mean_percent == pytest.approx(-4.9079, abs=5e-5)
    assert found.median_percent == pytest.approx(-6.1800, abs=5e-5)
    assert (found.low_percent, found.high_percent) == pytest.approx((-11.915, 2.099), abs=6e-4)
    assert found.ratio == pytest.approx(0.952087, abs=5e-7)
    assert (found.ratio_low, found.ratio_high) == pytest.approx((0.928037, 0.976760), abs=6e-7)


def test_tests_against_no_difference() -> None:
    """t -4.34118, p 0.00187 on log ratios; Wilcoxon W 2, p 0.00586, as scipy.stats gives them."""
    found = differences(PAIRS)
    assert (found.t, found.p) == (pytest.approx(-4.34118, abs=5e-6), pytest.approx(0.00187, abs=5e-6))
    reference = stats.ttest_rel(np.log(SELF), np.log(COUNTY))
    assert (found.t, found.p) == pytest.approx((reference.statistic, reference.pvalue))
    assert signed_rank(PAIRS) == pytest.approx((2, 0.00586), abs=5e-6)


@pytest.mark.parametrize("seed", range(4))
def test_signed_rank_without_ties_as_scipy(seed: int) -> None:
    """scipy.stats.wilcoxon, exact."""
    rng = np.random.default_rng(seed)
    own, other = rng.uniform(100, 1000, 14), rng.uniform(100, 1000, 14)
    reference = stats.wilcoxon(other, own, method="exact")
    found = signed_rank(list(zip(own, other, strict=True)))
    assert found == pytest.approx((reference.statistic, reference.pvalue))


def test_deming_line() -> None:
    """Lambda 1: slope 0.919539, intercept 20.903667; the same as minimising the perpendicular distances."""
    line = deming(PAIRS)
    assert (line.slope, line.intercept) == pytest.approx((0.919539, 20.903667), abs=6e-7)
    x, y = np.array(COUNTY, float), np.array(SELF, float)

    def distance(p: np.ndarray) -> float:
        return float(((y - p[1] - p[0] * x) ** 2).sum() / (1 + p[0] ** 2))

    best = optimize.minimize(
        distance, [1.0, 0.0], method="Nelder-Mead", options={"xatol": 1e-9, "fatol": 1e-9}
    )
    assert (line.slope, line.intercept) == pytest.approx(tuple(best.x), rel=1e-4)


def test_passing_bablok_line() -> None:
    """N 45, K 0: slope 0.912371 (0.885714 to 0.954839), intercept 21.149485 (-12.9226 to 45.6429)."""
    line = passing_bablok(PAIRS)
    assert (line.slope, line.intercept) == pytest.approx((0.912371, 21.149485), abs=6e-7)
    assert line.slope_interval == pytest.approx((0.885714, 0.954839), abs=6e-7)
    assert line.intercept_interval == pytest.approx((-12.9226, 45.6429), abs=5e-5)
