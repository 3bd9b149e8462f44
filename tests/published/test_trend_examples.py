"""Mann-Kendall, Sen and the seasonal variant against published examples and reference libraries."""

from __future__ import annotations

import csv
from datetime import UTC, datetime, timedelta
from pathlib import Path

import numpy as np
import pymannkendall
import pytest
from scipy import stats

from app.compliance.trend import exact_p, kendall_variance, mann_kendall, recode, seasonal_kendall

pytestmark = pytest.mark.published

DAY_0 = datetime(2031, 1, 1, tzinfo=UTC)
COD = [620, 655, 610, 690, 700, 680, 735, 700, 760, 745, 790, 770]


def daily(n: int, step: float = 1.0) -> list[datetime]:
    """Return times at a step of days."""
    return [DAY_0 + timedelta(days=i * step) for i in range(n)]


def table(shared: Path, name: str) -> list[dict[str, str]]:
    """Return the rows of one of the shared data files."""
    return list(csv.DictReader((shared / "data" / f"{name}.open.csv").read_text("utf-8").splitlines()))


def test_five_values_of_a_quality_assurance_guide() -> None:
    """EPA QA/G-9 example (from memory): S 6, exact one-sided p 14/120 = 0.1167, Sen 1.125."""
    found = mann_kendall(daily(5), [5, 6, 11, 8, 10])
    assert found.s == 6
    assert exact_p(6, 5) == pytest.approx(14 / 120)
    assert found.p_exact == pytest.approx(28 / 120)
    assert found.sen_slope_per_day == pytest.approx(1.125)


def test_ten_rising_values() -> None:
    """Data of an open library's documentation; S 45, Var 125, Z 3.93548, p 8.303e-5, Sen 1.05."""
    found = mann_kendall(daily(10), [1.0, 2.3, 3.1, 4.5, 5.2, 6.8, 7.1, 8.9, 9.5, 10.2])
    assert (found.s, found.variance, found.tau) == (45, 125, 1)
    assert found.z == pytest.approx(3.93548, abs=5e-6)
    assert found.p == pytest.approx(8.303e-5, abs=5e-9)
    assert found.sen_slope_per_day == pytest.approx(1.05)


def test_twelve_values_with_a_tie() -> None:
    """Mann-Kendall with tie correction, computed apart; slope and its ends as scipy.stats.theilslopes."""
    found = mann_kendall(daily(12), COD)
    assert (found.s, found.variance) == (51, pytest.approx(211.6667, abs=5e-5))
    assert found.z == pytest.approx(3.43672, abs=5e-6)
    assert found.p == pytest.approx(0.000588811, abs=5e-10)
    assert found.tau == pytest.approx(0.772727, abs=5e-7)
    assert found.sen_slope_per_day == pytest.approx(stats.theilslopes(COD, np.arange(12)).slope) == 15.0


def test_sulfate_example_of_the_unified_guidance() -> None:
    """US EPA, Unified Guidance (2009), example 17-6: Z 5.107322, tau 0.7667984, Sen 26.6666667 a year."""
    at = "89.6 89.8 90.1 90.3 90.6 90.8 91.1 91.3 91.6 91.8 92.1 92.6 93.1 93.6 94.1 94.6 95.1 95.6 95.8"
    at += " 96.1 96.3 96.6 96.8"
    ppm = [480, 450, 490, 520, 485, 510, 510, 530, 510, 560, 560, 540, 590, 550, 600, 700, 570, 610, 650]
    ppm += [620, 830, 720, 590]
    times = [DAY_0 + timedelta(days=365.25 * (float(t) - 89)) for t in at.split()]
    found = mann_kendall(times, ppm)
    assert found.z == pytest.approx(5.107322, abs=5e-7)
    assert found.tau == pytest.approx(0.7667984, abs=5e-8)
    assert found.sen_slope_per_day * 365.25 == pytest.approx(26.6666667, abs=1e-6)


def test_sens_own_example() -> None:
    """P. K. Sen, JASA 63 (1968) 1379: t 1 2 3 4 10 12 18, slope 4, on unevenly spaced times."""
    times = [DAY_0 + timedelta(days=t) for t in (1, 2, 3, 4, 10, 12, 18)]
    assert mann_kendall(times, [9, 15, 19, 20, 45, 55, 78]).sen_slope_per_day == pytest.approx(4.0)


@pytest.mark.parametrize("seed", range(5))
def test_large_samples_with_ties_as_the_reference_library(seed: int) -> None:
    """pymannkendall.original_test and seasonal_test on invented series with many ties."""
    values = np.random.default_rng(seed).integers(0, 25, 240).astype(float) + np.linspace(0, 3, 240).round()
    found, reference = mann_kendall(daily(240), list(values)), pymannkendall.original_test(values)
    assert (found.s, found.variance) == (reference.s, pytest.approx(reference.var_s))
    assert (found.z, found.p) == (pytest.approx(reference.z), pytest.approx(reference.p))
    assert found.sen_slope_per_day == pytest.approx(reference.slope)
    months = [i % 12 for i in range(240)]
    seasonal = seasonal_kendall(daily(240, 30), list(values), months)
    other = pymannkendall.seasonal_test(values, period=12)
    assert (seasonal.s, seasonal.variance) == (other.s, pytest.approx(other.var_s))
    assert (seasonal.z, seasonal.p) == (pytest.approx(other.z), pytest.approx(other.p))
    assert seasonal.slope_per_day * 360 == pytest.approx(other.slope)


def test_variance_without_ties() -> None:
    """n (n - 1)(2 n + 5) / 18 (Kendall): 125 for ten values."""
    assert kendall_variance(range(10)) == 125


def test_seasonal_test_on_long_river_records(shared: Path) -> None:
    """Hong Kong river stations (DATA.GOV.HK), one sample a month, 1986-2020: S and Var from two libraries.

    The slopes differ a little: the references count whole years, this program real days.
    """
    rows: dict[str, list[dict[str, str]]] = {}
    for row in table(shared, "hk_rivers_strong"):
        if row["cod_mg_L"]:
            rows.setdefault(row["site"], []).append(row)
    compared = 0
    for answer in table(shared, "ref_hk_seasonal_kendall"):
        if answer["file"] != "hk_rivers_strong" or answer["n_samples"] != answer["n_months"]:
            continue
        of_site = rows[answer["site"]]
        times = [datetime.fromisoformat(r["date"]).replace(tzinfo=UTC) for r in of_site]
        values = recode([float(r["cod_mg_L"]) for r in of_site], [r["cod_qual"] == "<" for r in of_site])
        found = seasonal_kendall(times, values, [t.month for t in times])
        assert found.s == int(answer["S"])
        assert found.variance == pytest.approx(float(answer["var_S"]))
        assert found.slope_per_day * 365.25 == pytest.approx(float(answer["slope_mg_L_per_year"]), rel=0.02)
        compared += 1
    assert compared == 11
