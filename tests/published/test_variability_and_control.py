"""Multipliers of the EPA TSD, sampling frequency, lognormal percentiles and the NIST EWMA example.

TSD: EPA/505/2-90-001 (1991); the 99th column also through Wisconsin NR 106.07,
the 95/95 row through Michigan R 323.1211. NIST/SEMATECH e-Handbook 6.3.2.4:
method read, data and limits from memory.
"""

from __future__ import annotations

import numpy as np
import pytest

from app.compliance.control import ewma
from app.compliance.percentiles import (
    chance_of_seeing,
    empirical_percentile,
    lognormal,
    multiplier,
    projected_maximum_multiplier,
    samples_for,
)

pytestmark = pytest.mark.published

COD = [410, 520, 480, 1200, 610, 730, 350, 900, 560, 640]
NIST = [52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5]
NIST += [49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1]


@pytest.mark.parametrize(
    ("cv", "row"),
    [
        (0.2, [1.36, 1.55, 1.17, 1.25, 1.06]),
        (0.4, [1.75, 2.27, 1.36, 1.55, 1.12]),
        (0.6, [2.13, 3.11, 1.55, 1.90, 1.19]),
        (0.8, [2.48, 4.01, 1.75, 2.27, 1.26]),
        (1.0, [2.78, 4.90, 1.95, 2.68, 1.33]),
        (1.5, [3.31, 6.93, 2.40, 3.78, 1.50]),
    ],
)
def test_multipliers_of_the_long_term_average(cv: float, row: list[float]) -> None:
    """TSD table 5-2: 95th, 99th; mean of 4: 95th, 99th; mean of 30: 95th; two decimals."""
    found = [multiplier(cv, 0.95), multiplier(cv, 0.99), multiplier(cv, 0.95, 4), multiplier(cv, 0.99, 4)]
    assert [*found, multiplier(cv, 0.95, 30)] == pytest.approx(row, abs=0.0051)


def test_projected_maximum() -> None:
    """TSD table 3-1 (99/99, from memory) and Michigan R 323.1211 table 4 (95/95), CV 0.6, one decimal."""
    n = [1, 2, 3, 4, 5, 6, 8, 10, 20]
    high = [projected_maximum_multiplier(0.6, k) for k in n]
    assert high == pytest.approx([13.2, 7.4, 5.6, 4.7, 4.2, 3.8, 3.3, 3.0, 2.3], abs=0.05)
    low = [projected_maximum_multiplier(0.6, k, 0.95, 0.95) for k in n]
    assert low == pytest.approx([6.2, 3.8, 3.0, 2.6, 2.3, 2.1, 1.9, 1.7, 1.4], abs=0.05)


def test_samples_for_a_relative_error() -> None:
    """n = (t CV / E)**2: 38 for CV 0.6 and 20 % (37 gives 0.20005), 12 for CV 0.3 (Student's t)."""
    assert samples_for(0.6, 0.2) == 38
    assert samples_for(0.3, 0.2) == 12


def test_chance_of_seeing_an_exceedance() -> None:
    """1 - (1 - p)**n (binomial)."""
    assert [chance_of_seeing(0.10, n) for n in (1, 2, 4, 12)] == pytest.approx(
        [0.100, 0.190, 0.344, 0.718], abs=5e-4
    )
    assert [chance_of_seeing(0.05, n) for n in (1, 2, 4, 12)] == pytest.approx(
        [0.05, 0.098, 0.185, 0.460], abs=6e-4
    )


def test_lognormal_percentiles_and_tolerance_limit() -> None:
    """Ten COD, numbers from scipy apart; the one-sided 95/95 factor for n = 10 is 2.911 in every table."""
    found = lognormal(COD)
    assert (found.mean, found.sd, found.cv) == pytest.approx((640.0, 252.45, 0.39446), abs=5e-3)
    assert (found.log_mean, found.log_sd) == pytest.approx((6.399009, 0.364882), abs=5e-7)
    percentiles = [found.percentile(q) for q in (0.5, 0.9, 0.95, 0.99)]
    assert percentiles == pytest.approx([601.249, 959.702, 1095.740, 1405.081], abs=5e-4)
    assert found.chance_above(1000) == pytest.approx(0.08162, abs=5e-6)
    k = (np.log(found.upper_tolerance_limit()) - found.log_mean) / found.log_sd
    assert k == pytest.approx(2.911, abs=5e-4)
    assert found.upper_tolerance_limit() == pytest.approx(1739.17, abs=5e-3)


def test_an_empirical_percentile_names_its_definition() -> None:
    """The same ten values: 1065 by linear interpolation, 1200 by Weibull."""
    assert empirical_percentile(COD, 0.95, "linear") == pytest.approx(1065.0)
    assert empirical_percentile(COD, 0.95, "weibull") == pytest.approx(1200.0)


def test_the_handbooks_moving_average() -> None:
    """NIST/SEMATECH 6.3.2.4: lambda 0.3, s 2.0539; the averages and the limits 52.5884 and 47.4115."""
    found = ewma(NIST, 50.0, 2.0539)
    published = [50.60, 49.52, 50.56, 50.18, 50.16, 49.21, 49.75, 49.85, 50.26, 50.33]
    published += [50.11, 49.36, 49.52, 50.05, 49.38, 49.92, 50.73, 51.23, 51.94, 51.99]
    assert found.points == pytest.approx(published, abs=0.0051)
    assert (found.upper[0], found.lower[0]) == pytest.approx((52.5884, 47.4115), abs=2e-4)
    assert found.out == ()
    widening = ewma(NIST, 50.0, 2.0539, steady=False)
    assert widening.upper[:5] == pytest.approx([51.8485, 52.2564, 52.4314, 52.5127, 52.5516], abs=6e-5)
