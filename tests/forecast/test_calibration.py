"""What past predictions got wrong is put right, from the past only."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.forecast import Programme, posterior
from app.forecast.calibration import FIRST_WEIGHTS, TAIL_DOF, WIDTHS, correction
from app.forecast.trust import one_step_ahead
from app.forecast.wandering import Filtered, Past, filtered, past_of
from tests.forecast.made import walk

START = Programme.default()


def told(errors: np.ndarray, scale: float = 0.5, dof: float = 50.0) -> tuple[Past, Filtered]:
    """Return a past whose predictions, alike for all kinds of wandering, were off by these errors."""
    past = past_of(walk(len(errors)))
    known = filtered(past, START, None)
    mean = np.repeat((past.log_cod - errors)[:, None], 4, axis=1)
    like = np.ones_like(mean)
    return past, replace(known, mean=mean, scale=scale * like, shape=0.5 * dof * like)


def test_errors_on_one_side_move_the_centre_there_slowly() -> None:
    """By hand: n equal errors e with scale s have weight 9 / (8 + (e/s)^2) each, against 100."""
    past, known = told(np.full(60, -0.2))
    weight = 60 * 9 / (8 + 0.16)
    assert correction(past, known).shift[-1] == pytest.approx(-0.2 * weight / (weight + 100))
    assert correction(past, known).shift[0] == 0.0


@pytest.mark.parametrize(("spread", "side"), [(0.2, -1), (1.2, 1)])
def test_a_width_that_was_wrong_is_drawn_in_or_let_out(spread: float, side: int) -> None:
    past, known = told(spread * np.random.default_rng(5).standard_normal(200))
    width = correction(past, known).width
    assert side * (width[-1] - width[0]) > 0.1
    assert WIDTHS[0] <= width.min() <= width.max() <= WIDTHS[-1]
    assert width[0] == pytest.approx(np.exp(FIRST_WEIGHTS @ np.log(WIDTHS)))


@given(st.integers(1, 29), st.integers(0, 5))
@settings(max_examples=20)
def test_nothing_is_corrected_by_what_came_later(n: int, seed: int) -> None:
    history = walk(30, seed)
    long = past_of(history)
    short = past_of(history[:n])
    whole, part = (correction(one, filtered(one, START, None)) for one in (long, short))
    assert whole.shift[: n + 1] == pytest.approx(part.shift, abs=1e-6)
    assert whole.width[:n] == pytest.approx(part.width[:n], rel=1e-5)


def test_bounds_and_an_empty_past_ask_for_nothing() -> None:
    bounds = past_of([replace(one, state="over") for one in walk(5)])
    for past in (bounds, past_of([])):
        found = correction(past, filtered(past, START, None))
        assert not found.shift.any()
        assert found.width == pytest.approx(found.width[0])


def test_a_forecast_from_a_long_past_keeps_the_tails_of_ln_cod() -> None:
    assert posterior(START, None, walk(100)).dof == TAIL_DOF
    assert posterior(START, None, walk(2)).dof < TAIL_DOF


@pytest.mark.parametrize("share", [0.7, 0.5])
def test_the_range_holds_where_many_results_were_over(share: float) -> None:
    """Everything above a station's 70 % or 50 % point told as "over" only, judged on what it really was."""
    inside = []
    for seed in range(12):
        true = walk(60, seed, noise=0.6)
        top = float(np.quantile([one.cod for one in true], share))
        told = [replace(one, cod=top, state="over") if one.cod > top else one for one in true]
        ahead = one_step_ahead(START, None, told)[10:]
        inside += [abs(e.cdf(one.cod) - 0.5) < 0.45 for e, one in zip(ahead, true[10:], strict=True)]
    assert 0.86 <= np.mean(inside) <= 0.95
