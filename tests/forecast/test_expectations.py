"""What an expectation must hold, whatever the history."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Literal

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import InputError
from app.forecast import Now, Observation, Posterior, Programme, bounded_readings, expected, posterior
from app.forecast import wandering as regression
from app.forecast.learning import Point, learn
from app.forecast.trust import one_step_ahead
from app.forecast.wandering import filtered, past_of
from tests.forecast.made import walk

START = Programme.default()


def middle(history: list[Observation], readings: dict[str, float] | None = None) -> float:
    """Return the median expected a month after the last result."""
    last = history[-1].days if history else 20000.0
    return expected(posterior(START, None, history), Now(last + 30.0, readings or {})).quantile(0.5)


def width(history: list[Observation], days: float = 30.0) -> float:
    """Return the length of the 90 % interval of ln COD some days after the last result."""
    found = expected(posterior(START, None, history), Now(history[-1].days + days))
    return math.log(found.quantile(0.95) / found.quantile(0.05))


def test_without_a_past_it_is_the_sectors() -> None:
    """Typical values of the sector table: 1500 mg/L where nothing is known, 3000 for dairy."""
    assert middle([]) == pytest.approx(1500.0, rel=0.15)
    found = expected(posterior(START, "Dairy ", []), Now(20000.0))
    assert found.quantile(0.5) == pytest.approx(3000.0, rel=0.15)


def test_results_narrow_it_and_time_widens_it_again() -> None:
    assert width(walk(40)) < width(walk(4)) < width(walk(1))
    assert width(walk(40), 3000.0) > width(walk(40), 30.0)


def test_it_learns_the_pull_of_a_reading() -> None:
    """Made with COD as conductivity to the power 0.6: from 750 to 3000 uS/cm that is a factor of 2.3."""
    history = walk(120)
    ratio = middle(history, {"conductivity_us_cm": 3000.0}) / middle(history, {"conductivity_us_cm": 750.0})
    assert math.log(ratio) / math.log(4.0) == pytest.approx(0.6, abs=0.15)


@pytest.mark.parametrize("state", ["over", "below"])
def test_a_bound_moves_to_its_side_and_says_less_than_a_value(state: Literal["over", "below"]) -> None:
    history = walk(12)
    last = replace(history[-1], cod=middle(history[:-1]))
    value, bound = [*history[:-1], last], [*history[:-1], replace(last, state=state)]
    assert (middle(bound) > middle(value)) == (state == "over")
    assert width(bound) > width(value)


def test_one_bound_alone_is_a_history() -> None:
    high = middle([Observation(20000.0, 9000.0, "over")])
    low = middle([Observation(20000.0, 300.0, "below")])
    assert high > 1500.0 > low


def test_one_outlier_is_not_believed() -> None:
    history = walk(40)
    odd = [*history[:-1], replace(history[-1], cod=history[-1].cod * 100.0)]
    assert middle(odd) / middle(history) < 3.0


@given(st.permutations(walk(9)))
@settings(max_examples=20)
def test_the_order_of_telling_does_not_matter(history: list[Observation]) -> None:
    assert posterior(START, None, history) == posterior(START, None, walk(9))


@given(st.integers(1, 25), st.integers(0, 6))
@settings(max_examples=25)
def test_a_result_is_forecast_from_those_before_it_only(n: int, seed: int) -> None:
    history = walk(26, seed)
    history[3] = replace(history[3], state="over")
    long, short = one_step_ahead(START, None, history), one_step_ahead(START, None, history[:n])
    assert (len(long), len(short)) == (26, n)
    for a, b in zip(long, short, strict=False):
        assert a.quantile(0.5) == pytest.approx(b.quantile(0.5), rel=1e-6)
        assert a.quantile(0.95) == pytest.approx(b.quantile(0.95), rel=1e-6)


@pytest.mark.parametrize("n", [1, 3, 10, 60])
def test_the_back_test_judges_what_would_have_been_shown(n: int) -> None:
    """Drawing the kinds of wandering together changes the forecast little."""
    history = walk(n + 1)
    now = Now(history[n].days, history[n].field, history[n].activity)
    shown = expected(posterior(START, None, history[:n]), now)
    judged = one_step_ahead(START, None, history)[n]
    for share in (0.05, 0.5, 0.95):
        assert math.log(shown.quantile(share) / judged.quantile(share)) == pytest.approx(0.0, abs=0.06)


def test_a_long_history_is_judged_in_pieces() -> None:
    history = walk(700, gap=7)
    found = one_step_ahead(START, None, history)
    assert len(found) == 700
    inside = [
        one.quantile(0.05) <= result.cod <= one.quantile(0.95)
        for one, result in zip(found[50:], history[50:], strict=True)
    ]
    assert 0.86 <= np.mean(inside) <= 0.95


def test_one_factorisation_predicts_as_conditioning_one_by_one(monkeypatch: pytest.MonkeyPatch) -> None:
    """Rasmussen and Williams, equations 2.23 and 2.24, solved anew for each result."""
    monkeypatch.setattr(regression, "OUTLIER_DOF", 1e15)
    past = past_of(walk(20))
    known = filtered(past, START, None)
    start, spread = START.start(None)
    kernels = regression._kernels(past, (spread / START.noise) ** 2)
    own = 1.0 + regression.missing_noise(START, past.missing)
    usual = past.constant @ start
    for kind in range(4):
        for t in (1, 7, 19):
            matrix = kernels[kind][:t, :t] + np.diag(own[:t])
            pull = np.linalg.solve(matrix, kernels[kind][:t, t])
            wanted = usual[t] + pull @ (past.log_cod[:t] - usual[:t])
            assert known.mean[t, kind] == pytest.approx(wanted, rel=1e-9)


def test_a_reading_far_outside_its_past_is_named_and_bounded() -> None:
    known = posterior(START, None, walk(40))
    far = Now(21300.0, {"conductivity_us_cm": 9e5})
    farther = Now(21300.0, {"conductivity_us_cm": 1e6})
    assert bounded_readings(known, far) == ("conductivity_us_cm",)
    assert expected(known, far) == expected(known, farther)
    assert bounded_readings(known, Now(21300.0, {"conductivity_us_cm": 1700.0})) == ()
    assert bounded_readings(posterior(START, None, []), far) == ()


def test_ten_thousand_results_are_taken() -> None:
    history = walk(10000, gap=1)
    assert posterior(START, None, history).n == 10000
    assert abs(math.log(middle(history) / np.median([one.cod for one in history[-50:]]))) < 0.5


def test_a_pack_travels() -> None:
    known = posterior(START, "dairy", walk(30))
    back = Posterior.from_json(known.to_json())
    now = Now(21000.0, {"ph": 9.0}, "cleaning")
    assert expected(back, now).quantile(0.9) == pytest.approx(expected(known, now).quantile(0.9), rel=1e-4)
    assert back.to_json() == known.to_json()


@pytest.mark.parametrize("told", [{}, {"version": 1}, None, {"version": 2, "regressions": []}])
def test_a_pack_of_another_kind_is_refused(told: object) -> None:
    with pytest.raises(InputError) as caught:
        Posterior.from_json(told)
    assert "pack" in caught.value.fields


@pytest.mark.parametrize("cod", [0.0, -1.0, math.nan, math.inf])
def test_a_cod_that_is_no_number_above_zero_is_no_observation(cod: float) -> None:
    with pytest.raises(InputError):
        Observation(20000.0, cod)


def pull(programme: Programme) -> float:
    """Return the power of conductivity, from 750 to 3000 uS/cm, at a point without a past."""
    fresh = posterior(programme, "dairy", [])
    readings = ({"conductivity_us_cm": 3000.0}, {"conductivity_us_cm": 750.0})
    salty, sweet = (expected(fresh, Now(21000.0, one)).quantile(0.5) for one in readings)
    return math.log(salty / sweet) / math.log(4.0)


def test_a_programme_learns_level_and_pull_of_its_points() -> None:
    """Points made alike, power 0.6: a new one starts where they are, and more than half-way to their pull.

    Not all the way: starting values count like two points, and a point of 30 results is itself drawn back.
    """
    programme = learn([Point("dairy", walk(30, seed)) for seed in range(12)])
    assert programme.points == 12
    assert programme.noise < START.noise
    assert 0.5 < (pull(programme) - pull(START)) / (0.6 - pull(START)) < 1.2
    fresh = posterior(programme, "dairy", [])
    assert expected(fresh, Now(21000.0)).quantile(0.5) == pytest.approx(2000.0, rel=0.5)


def test_what_no_point_speaks_of_stays_as_it_was() -> None:
    programme = learn([Point("dairy", walk(30, seed)) for seed in range(6)])
    temperature = 3
    assert programme.pull_mean[temperature] == START.pull_mean[temperature]
    assert programme.pull_sd[temperature] == pytest.approx(START.pull_sd[temperature], rel=0.05)
    assert learn([Point("dairy", [])]) == START
    assert learn([]) == START


def test_a_programme_travels_and_another_thing_is_refused() -> None:
    programme = learn([Point("dairy", walk(20)), Point(None, walk(5, 2))])
    assert Programme.from_json(programme.to_json()) == programme
    for told in ({}, {**programme.to_json(), "noise": -1.0}, {**programme.to_json(), "version": 9}):
        with pytest.raises(InputError) as caught:
            Programme.from_json(told)
        assert "programme" in caught.value.fields
