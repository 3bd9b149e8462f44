"""BOD from COD: a ten-pair example, its numbers from numpy and scipy apart from this program."""

from __future__ import annotations

import pytest
from scipy import stats

from app.compliance.ratio import correlate, drift, suspended

pytestmark = pytest.mark.published

COD = [620, 810, 990, 450, 1210, 720, 880, 1340, 560, 1050]
BOD = [318, 402, 515, 228, 604, 371, 428, 690, 270, 540]
PAIRS = list(zip(COD, BOD, strict=True))


def test_line_and_prediction_interval() -> None:
    """Ordinary least squares; the interval is of a single new BOD, not of the line."""
    line = correlate(PAIRS)
    assert line.slope == pytest.approx(0.517160, abs=5e-7)
    assert line.intercept == pytest.approx(-9.708835, abs=5e-7)
    assert line.r_squared == pytest.approx(0.995030, abs=5e-7)
    assert line.residual_sd == pytest.approx(11.14575, abs=5e-6)
    at_900 = line.at(900)
    assert at_900.bod == pytest.approx(455.735, abs=5e-4)
    assert (at_900.low, at_900.high) == pytest.approx((428.756, 482.714), abs=6e-4)
    assert (line.cod_low, line.cod_high) == (450, 1340)
    assert not line.at(1341).inside_range


def test_the_line_is_that_of_scipy() -> None:
    """scipy.stats.linregress."""
    reference = stats.linregress(COD, BOD)
    line = correlate(PAIRS)
    assert (line.slope, line.intercept) == pytest.approx((reference.slope, reference.intercept))
    assert line.r_squared == pytest.approx(reference.rvalue**2)


def test_a_changed_process_suspends_the_line() -> None:
    """New pairs at -3.00, -4.49 and -4.64 half-widths: outside twice in a row."""
    found = drift(correlate(PAIRS), [(700, 270), (950, 360), (1100, 430)])
    assert found == pytest.approx([-3.00, -4.49, -4.64], abs=6e-3)
    assert suspended(found)
