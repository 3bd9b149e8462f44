"""The forecast's distributions against SciPy, numerical integrals and published multipliers."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Literal

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy import integrate, stats

from app.chemistry.glassware import Step
from app.forecast import Observation, Predictive, Programme, Range, Sample, plan
from app.forecast.predictive import Beyond, Component
from app.forecast.wandering import filtered, past_of
from tests.forecast.made import normal

pytestmark = pytest.mark.published

Told = list[tuple[float, float, float, float]]
components = st.lists(
    st.tuples(st.floats(0.05, 1.0), st.floats(2.0, 12.0), st.floats(0.05, 2.0), st.floats(1.5, 200.0)),
    min_size=1,
    max_size=5,
)


def mixture(told: Told) -> Predictive:
    """Return a mixture with its weights brought to one."""
    total = sum(weight for weight, *_ in told)
    return Predictive(tuple(Component(w / total, m, s, v) for w, m, s, v in told))


@given(components, st.floats(0.5, 1e6))
def test_shares_and_densities_are_those_of_scipys_student_t(told: Told, cod: float) -> None:
    found, log = mixture(told), math.log(cod)
    parts = [(c.weight, stats.t(c.dof, c.mean, c.scale)) for c in found.components]
    assert found.cdf(cod) == pytest.approx(sum(w * t.cdf(log) for w, t in parts), abs=1e-12)
    assert found.below([cod])[0] == pytest.approx(found.cdf(cod), abs=1e-14)
    assert found.density(log) == pytest.approx(sum(w * t.pdf(log) for w, t in parts), rel=1e-9)


@given(components, st.floats(0.001, 0.999))
def test_a_quantile_has_its_share_below(told: Told, share: float) -> None:
    found = mixture(told)
    log = math.log(found.quantile(share))
    below = sum(c.weight * stats.t(c.dof, c.mean, c.scale).cdf(log) for c in found.components)
    assert below == pytest.approx(share, abs=1e-8)


@pytest.mark.parametrize(("z", "multiplier"), [(1.645, 2.13), (2.326, 3.11)])
def test_lognormal_multipliers_of_the_technical_support_document(z: float, multiplier: float) -> None:
    """EPA/505/2-90-001 (1991), daily maximum over the average at CV 0.6, with the z it gives."""
    variance = math.log(1.0 + 0.6**2)
    found = normal(math.exp(-variance / 2.0), math.sqrt(variance))
    assert round(found.quantile(float(stats.norm.cdf(z))), 2) == multiplier


@pytest.mark.parametrize(
    ("cod", "chloride", "factor"), [(8000.0, 3000.0, 20.0), (600.0, 3000.0, 2.0), (60000.0, 0.0, 100.0)]
)
def test_the_rule_of_the_bench(cod: float, chloride: float, factor: float) -> None:
    """Common practice: aim at 20 to 80 % of the top standard, chloride under its limit; worked by hand."""
    aim = Range("aim", 0.2 * 900.0, 0.8 * 900.0, 1998.0)
    ladder = (1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0)
    planned = plan(normal(cod, 0.15), (aim,), ladder, Sample(chloride))
    assert planned.choice is not None
    assert planned.choice.dilution_factor == factor


def test_one_to_a_hundred_is_ten_in_a_hundred_twice() -> None:
    """Common practice: steps of at most 1:20, transfers of 5 mL or more."""
    planned = plan(normal(60000.0, 0.15), (Range("aim", 180.0, 720.0),), (100.0,))
    assert planned.choice is not None
    assert planned.choice.chain is not None
    assert planned.choice.chain.steps == (Step(10.0, 100.0), Step(10.0, 100.0))


def moments_of(density: Callable[[float], float], low: float, high: float, at: float) -> tuple[float, float]:
    """Return mean and variance of a density cut at two ends, by quadrature."""
    points = [at] if low < at < high else None

    def integral(weight: Callable[[float], float]) -> float:
        given = {"points": points, "epsabs": 1e-14, "limit": 400}
        return float(integrate.quad(lambda y: weight(y) * density(y), low, high, **given)[0])

    mass = integral(lambda y: 1.0)
    mean = integral(lambda y: y) / mass
    return mean, integral(lambda y: (y - mean) ** 2) / mass


@pytest.mark.parametrize("state", ["over", "below"])
@pytest.mark.parametrize("bound", [200.0, 1500.0, 9000.0])
def test_a_bound_moves_the_state_as_a_numerical_integral_does(
    state: Literal["over", "below"], bound: float
) -> None:
    """The normal with the same two moments, by quadrature over everything beyond the bound."""
    programme = Programme.default()
    past = past_of([Observation(20000.0, bound, state)])
    known = filtered(past, programme, None)
    start, spread = programme.start(None)
    inputs = np.concatenate([past.constant[0], [1.0, 1.0], np.zeros(6)])
    added = float(past.missing[0] @ np.array(programme.pull_mean[:6]) ** 2) / programme.noise**2
    for kind, size in enumerate((0.2, 2.0, 0.2, 2.0)):
        own = float(past.constant[0] ** 2 @ spread**2) + programme.noise**2 * (0.2 + size)
        total = own + programme.noise**2 * (1.0 + added)
        centre, sd, edge = float(past.constant[0] @ start), math.sqrt(total), math.log(bound)
        low, high = (edge, edge + 40 * sd) if state == "over" else (edge - 40 * sd, edge)
        mean, variance = moments_of(stats.norm(centre, sd).pdf, low, high, centre)
        wanted = centre + own / total * (mean - centre)
        left = own - own**2 / total * (1.0 - variance / total)
        assert inputs @ known.state[kind] == pytest.approx(wanted, abs=2e-4)
        assert inputs @ known.covariance[kind] @ inputs == pytest.approx(left, rel=2e-3)


@given(components, st.floats(50.0, 20000.0), st.booleans())
def test_what_a_tube_has_shown_cuts_the_expectation(told: Told, bound: float, above: bool) -> None:
    """P(Y <= b given Y beyond the bound), from the whole distribution."""
    found = mixture(told)
    whole = found.cdf(bound)
    assume(1e-6 < whole < 1 - 1e-6)
    rest = Beyond(found, bound, above)
    assert rest.below([bound])[0] == pytest.approx(0.0 if above else 1.0, abs=1e-9)
    beyond = 3.0 * bound if above else bound / 3.0
    wanted = (found.cdf(beyond) - whole) / (1 - whole) if above else found.cdf(beyond) / whole
    assert rest.below([beyond])[0] == pytest.approx(wanted, abs=1e-9)
