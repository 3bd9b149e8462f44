"""The eleven linear sets of NIST StRD (Statistical Reference Datasets), as far as a curve is made of them.

Certified values exist for models of their own: Norris (a line) and Pontius (a
parabola) are ours and are held to them in ``test_calibration.py``; Filip, the
Wampler sets (polynomials of degree 10 and 5), Longley (six predictors) and the
NoInt sets (no intercept) are not. Their points are hard data all the same: line
and parabola through each are held to exact rational arithmetic. Data: NIST
StRD, linear regression, a work of the US Government, kept in ``data/``.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest
from scipy.stats import t

from app.chemistry.calibration import Standard, fit, fit_points
from app.errors import InputError
from tests.published.exact_least_squares import exact_fit

pytestmark = pytest.mark.published

Points = list[tuple[float, float]]
SETS = ("norris", "pontius", "noint1", "noint2", "filip", "longley")
SETS += tuple(f"wampler{i}" for i in range(1, 6))
PREDICTOR = {"longley": "x2"}  # gross national product; the others have one predictor


def points_of(name: str) -> Points:
    """Return a set's points."""
    path = Path(__file__).parent / "data" / "nist_linear.csv"
    with path.open(encoding="utf-8", newline="") as file:
        rows = [row for row in csv.DictReader(file) if row["dataset"] == name]
    return [(float(row[PREDICTOR.get(name, "x1")]), float(row["y"])) for row in rows]


def turns_inside(points: Points) -> bool:
    """Tell by exact arithmetic whether the parabola turns between its points."""
    _, b1, b2 = exact_fit(points, 2).coefficients
    xs = [x for x, _ in points]
    return b2 != 0 and min(xs) <= -b1 / (2 * b2) <= max(xs)


def slope_is_lost(points: Points) -> bool:
    """Tell by exact arithmetic and SciPy's t whether a line's slope cannot be told from zero at 95 %."""
    line = exact_fit(points, 1)
    quantile = float(t.ppf(0.975, len(points) - 2))
    return abs(line.coefficients[1]) <= quantile * line.standard_errors[1]


def test_which_sets_have_lost_their_slope() -> None:
    """Wampler5 with its large errors; NoInt2 has three points, one degree of freedom."""
    assert [name for name in SETS if slope_is_lost(points_of(name))] == ["noint2", "wampler5"]


def test_there_are_eleven_sets() -> None:
    assert [len(points_of(name)) for name in SETS] == [36, 40, 11, 3, 82, 16, 21, 21, 21, 21, 21]


@pytest.mark.parametrize("name", [name for name in SETS if name != "noint2"])
@pytest.mark.parametrize(("model", "degree"), [("linear", 1), ("quadratic", 2)])
def test_line_and_parabola_equal_exact_arithmetic(name: str, model: str, degree: int) -> None:
    points = points_of(name)
    xs, ys = [x for x, _ in points], [y for _, y in points]
    if slope_is_lost(points):
        with pytest.raises(InputError, match="told from zero"):
            fit_points(xs, ys, model=model)
        return
    if degree == 2 and turns_inside(points):
        with pytest.raises(InputError, match="turns"):
            fit_points(xs, ys, model=model)
        return
    exact, curve = exact_fit(points, degree), fit_points(xs, ys, model=model)
    largest = max(map(abs, exact.coefficients))
    assert curve.coefficients == pytest.approx(exact.coefficients, rel=1e-8, abs=1e-13 * largest)
    assert curve.r_squared == pytest.approx(exact.r_squared, rel=1e-10)
    if exact.residual_sd:
        assert curve.residual_sd == pytest.approx(exact.residual_sd, rel=1e-8)
        assert curve.standard_errors == pytest.approx(exact.standard_errors, rel=1e-8)


def test_three_points_are_refused_as_a_calibration() -> None:
    """NoInt2 has three points: too few levels for a curve that a result stands on."""
    with pytest.raises(InputError, match="No curve"):
        fit([Standard(x, (y,)) for x, y in points_of("noint2")])
