"""Curves: properties that hold for any standards, and hopeless ones refused."""

from __future__ import annotations

import math
import random

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.calibration import Standard, fit, fit_points
from app.chemistry.curve import Curve
from app.errors import InputError
from tests.chemistry.bench_run import CURVED, STANDARDS

noise = st.lists(st.floats(-0.002, 0.002), min_size=14, max_size=14)
models = st.sampled_from(["linear", "quadratic"])
weightings = st.sampled_from(["equal", "inverse", "inverse_square"])


def standards(errors: list[float], slope: float = 3.8e-4, bend: float = -8e-8) -> list[Standard]:
    levels = (0.0, 50.0, 100.0, 250.0, 500.0, 750.0, 900.0)
    pairs = zip(errors[::2], errors[1::2], strict=True)
    return [
        Standard(x, tuple(slope * x + bend * x * x + e for e in pair))
        for x, pair in zip(levels, pairs, strict=True)
    ]


@given(noise, models, weightings)
def test_the_order_of_standards_and_readings_does_not_matter(errors, model, weights) -> None:
    given_order = standards(errors)
    shuffled = [Standard(s.cod, s.absorbance[::-1]) for s in given_order]
    random.Random(7).shuffle(shuffled)
    one, other = fit(given_order, model, weights), fit(shuffled, model, weights)
    assert other.coefficients == pytest.approx(one.coefficients, rel=1e-9, abs=1e-15)
    assert other.residual_sd == pytest.approx(one.residual_sd, rel=1e-9)


@given(noise, models, weightings)
def test_a_falling_response_is_the_mirror_of_a_rising_one(errors, model, weights) -> None:
    rising = standards(errors)
    falling = [Standard(s.cod, tuple(0.6 - a for a in s.absorbance)) for s in rising]
    up, down = fit(rising, model, weights), fit(falling, model, weights)
    assert (up.response, down.response) == ("rises", "falls")
    a, b = up.read([0.19, 0.191]), down.read([0.41, 0.409])
    assert (b.cod, b.u, b.low, b.high) == pytest.approx((a.cod, a.u, a.low, a.high), rel=1e-9)
    assert down.r_squared == pytest.approx(up.r_squared, rel=1e-9)


@given(noise, models, weightings, st.floats(1e-3, 1e6), st.floats(1e-3, 1e3))
def test_units_do_not_matter(errors, model, weights, per_mg, per_au) -> None:
    """mg/L or kg/L, AU or per cent: a reading is the same amount of substance."""
    mine = standards(errors)
    other = [Standard(s.cod * per_mg, tuple(a * per_au for a in s.absorbance)) for s in mine]
    a, b = fit(mine, model, weights), fit(other, model, weights)
    one, two = a.read([0.1, 0.102]), b.read([0.1 * per_au, 0.102 * per_au])
    assert (two.cod, two.u) == pytest.approx((one.cod * per_mg, one.u * per_mg), rel=1e-7)
    assert b.relative_standard_error_percent == pytest.approx(a.relative_standard_error_percent, rel=1e-6)


@given(noise, models, weightings, st.floats(0.0, 900.0))
def test_there_and_back_again(errors, model, weights, cod) -> None:
    curve = fit(standards(errors), model, weights)
    assert curve.cod(curve.absorbance(cod)) == pytest.approx(cod, abs=1e-6)


@given(noise, models)
def test_more_readings_of_an_unknown_never_widen_its_interval(errors, model) -> None:
    curve = fit(standards(errors), model)
    widths = [curve.read([0.2] * p).u for p in (1, 2, 3, 10)]
    assert widths == sorted(widths, reverse=True)
    assert widths[-1] >= curve.line_u(curve.read([0.2]).cod) * (1 - 1e-12)


@given(noise, models)
def test_the_band_holds_the_curve_and_a_reading_band_holds_it_too(errors, model) -> None:
    band = fit(standards(errors), model).band(points=9)
    assert (band[0].cod, band[-1].cod, len(band)) == (0.0, 900.0, 9)
    for point in band:
        assert point.reading_low <= point.low <= point.absorbance <= point.high <= point.reading_high


@given(st.lists(st.floats(-1e9, 1e9), min_size=5, max_size=8), models, weightings)
def test_any_absorbances_give_finite_numbers_or_a_reason(values, model, weights) -> None:
    points = [Standard(100.0 * i, (v,)) for i, v in enumerate(values)]
    try:
        curve = fit(points, model, weights)
    except InputError as refused:
        assert list(refused.fields) == ["standards"]
    else:
        assert all(map(math.isfinite, (*curve.coefficients, *curve.standard_errors, curve.r_squared)))
        assert curve.fieller_g < 1


def test_a_perfect_line_has_no_uncertainty_and_no_tests() -> None:
    curve = fit([Standard(float(x), (0.25 * x, 0.25 * x)) for x in range(0, 60, 10)])
    assert curve.residual_sd == 0.0
    assert (curve.lack_of_fit, curve.mandel) == (None, None)
    assert curve.read([5.0]).u == 0.0
    assert curve.fieller_g == 0.0


def test_lack_of_fit_needs_replicates() -> None:
    assert fit(STANDARDS).lack_of_fit is None


def test_the_zero_standard_has_no_recovery_and_no_part_in_the_relative_error() -> None:
    shifted = [Standard(0.0, (0.05,)), *STANDARDS[1:]]
    assert fit(shifted).standards[0].recovery_percent is None
    rows = fit(STANDARDS).standards[1:]
    expected = 100 * math.sqrt(sum((r.back_calculated / r.cod - 1) ** 2 for r in rows) / (len(rows) - 2))
    assert fit(STANDARDS).relative_standard_error_percent == pytest.approx(expected, rel=1e-12)


def test_the_zero_standard_takes_the_weight_of_the_lowest_other() -> None:
    curve = fit(STANDARDS, weights="inverse_square")
    assert curve.weight(0.0) == curve.weight(50.0) == 1 / 2500
    assert curve.weight(100.0) == 1 / 10000


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_beyond_the_turning_point_there_is_no_number(sign: float) -> None:
    """A bend towards the top leaves readings above it without a COD, a bend towards zero those below."""
    points = [Standard(s.cod, tuple(sign * a for a in s.absorbance)) for s in CURVED]
    curve = fit(points, "quadratic")
    assert curve.turns_above()
    assert curve.cod(sign * 0.5) is None
    assert curve.read([sign * 0.5]) is None
    convex = fit([Standard(900.0 - s.cod, s.absorbance) for s in CURVED], "quadratic")
    assert convex.turns_above() is False
    assert convex.cod(0.5) is None


def refusal(points: list[Standard], model: str = "linear") -> InputError:
    with pytest.raises(InputError) as refused:
        fit(points, model)
    return refused.value


def test_few_levels_or_one_level_make_no_curve() -> None:
    assert "at least 5 levels" in refusal(list(STANDARDS[:4])).fields["standards"][0]
    assert "one level" in refusal([Standard(1.0, (1.0,))] * 6).fields["standards"][0]


def test_a_flat_curve_is_refused_with_the_reason() -> None:
    assert "slope is zero" in refusal([Standard(float(x), (0.3,)) for x in range(6)]).message


@given(st.floats(-3, 3), st.integers(5, 12), st.integers(1, 3))
def test_equal_readings_never_make_a_curve(value: float, levels: int, readings: int) -> None:
    """The mean of equal readings is off by a rounding, which is no slope."""
    flat = [Standard(50.0 * x, (value,) * readings) for x in range(levels)]
    assert "slope is zero" in refusal(flat).message


def test_a_slope_lost_in_scatter_is_refused() -> None:
    values = (0.1, -0.3, 0.25, -0.2, 0.15, -0.1)
    assert "Fieller" in refusal([Standard(float(x), (v,)) for x, v in enumerate(values)]).message


def test_a_parabola_that_turns_between_its_standards_is_refused() -> None:
    values = (0.0, 0.5, 0.8, 0.9, 0.8, 0.65)
    points = [Standard(float(x), (v,)) for x, v in enumerate(values)]
    assert "turns" in refusal(points, "quadratic").message


def test_all_wrong_fields_of_standards_at_once() -> None:
    points = [Standard(-1.0, (0.1,)), Standard(1.0, ()), Standard(2.0, (math.nan, 0.1)), *STANDARDS]
    assert set(refusal(points).fields) == {
        "standards.0.cod",
        "standards.1.absorbance",
        "standards.2.absorbance",
    }


def test_numbers_too_far_apart_are_refused_not_overflowed() -> None:
    points = [Standard(x, (x * 1e-3,)) for x in (0.0, 1e-200, 1e-150, 1e-100, 1e-50)]
    for weights in ("equal", "inverse_square"):
        try:
            curve = fit(points, "linear", weights)
        except InputError as refused:
            assert refused.message
        else:
            assert_finite(curve)


def assert_finite(curve: Curve) -> None:
    assert all(map(math.isfinite, (*curve.coefficients, *curve.standard_errors, curve.residual_sd)))


def test_coefficients_that_cannot_be_written_are_refused() -> None:
    """A parabola over a span of 1e-180 has a second coefficient beyond any number."""
    x = [i * 1e-180 for i in range(6)]
    with pytest.raises(InputError, match="too far apart"):
        fit_points(x, [0.0, 0.1, 0.19, 0.27, 0.34, 0.4], "quadratic")


def test_weights_beyond_any_number_are_refused() -> None:
    with pytest.raises(InputError, match="too far apart"):
        fit_points(range(6), [0.0, 0.1, 0.2, 0.3, 0.4, 0.5], weight=[1e308] * 6)
