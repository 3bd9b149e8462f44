"""The laboratory's own repeatability: found again from simulated history, and never too soon."""

from __future__ import annotations

import numpy as np
import pytest

from app.chemistry.repeatability import STARTING_REPEATABILITY, Repeatability, TubeSet, pool
from app.errors import InputError


def history(a: float, k: float, sets: int, seed: int, levels=(30, 60, 150, 400, 700, 850), p: int = 3):
    rng = np.random.default_rng(seed)
    true = Repeatability(a, k)
    found = []
    for i in range(sets):
        x = float(levels[i % len(levels)])
        found.append(TubeSet(tuple(rng.normal(x, true.sigma(x), p).tolist())))
    return found


def test_sigma_is_constant_at_the_bottom_and_proportional_above() -> None:
    scatter = Repeatability(4.0, 0.025)
    assert scatter.sigma(0.0) == 4.0
    assert scatter.sigma(160.0) == pytest.approx(4.0 * 2**0.5)
    assert scatter.sigma(-160.0) == scatter.sigma(160.0)


def test_the_starting_value_serves_until_twenty_sets_exist() -> None:
    few = pool(history(8.0, 0.01, 19, 1))
    assert (few.repeatability, few.own, few.sets, few.pooled_dof) == (STARTING_REPEATABILITY, False, 19, 38)
    assert pool(history(8.0, 0.01, 20, 1)).own


@pytest.mark.parametrize(("a", "k"), [(4.0, 0.025), (1.0, 0.05), (10.0, 0.01)])
def test_a_long_history_gives_its_own_a_and_k_back(a: float, k: float) -> None:
    found = pool(history(a, k, 3000, 2)).repeatability
    assert (found.a, found.k) == (pytest.approx(a, rel=0.1), pytest.approx(k, rel=0.1))


@pytest.mark.parametrize(("a", "k"), [(6.0, 0.0), (0.0, 0.03)])
def test_a_history_without_one_of_both_parts_does_not_invent_it(a: float, k: float) -> None:
    found = pool(history(a, k, 3000, 3)).repeatability
    for x in (30.0, 400.0, 850.0):
        assert found.sigma(x) == pytest.approx(Repeatability(a, k).sigma(x), rel=0.1)


def test_degrees_of_freedom_are_those_of_the_fitted_variance() -> None:
    """Over repeated histories the variance of sigma^2 is 2 sigma^4 / dof at the least known level."""
    levels = (30, 60, 150, 400, 700, 850)
    fits = [pool(history(4.0, 0.025, 60, seed)).repeatability for seed in range(400)]
    worst = min(2 * np.mean(v) ** 2 / np.var(v) for v in ([f.sigma(x) ** 2 for f in fits] for x in levels))
    assert np.median([f.dof for f in fits]) == pytest.approx(worst, rel=0.25)
    assert all(f.dof <= 120 for f in fits)


def test_the_same_tubes_again_do_not_scatter() -> None:
    found = pool([TubeSet((300.0, 300.0))] * 20).repeatability
    assert (found.a, found.k) == (0.0, 0.0)


def test_absolute_scatter_of_different_levels_is_not_pooled() -> None:
    """One strong sample with a large scatter must not widen the scatter of weak ones."""
    weak = history(2.0, 0.0, 40, 4, levels=(30, 60))
    strong = history(2.0, 0.05, 40, 5, levels=(700, 850))
    assert pool([*weak, *strong]).repeatability.sigma(30.0) < 4.0


def test_wrong_sets_are_named() -> None:
    with pytest.raises(InputError) as refused:
        pool([TubeSet((1.0,)), TubeSet((1.0, float("nan")))])
    assert set(refused.value.fields) == {"history.0.cod", "history.1.cod.1"}
