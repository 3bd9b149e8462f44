"""Dilution steps from the pipettes and flasks on the shelf, two at most.

Common practice: transfer 5 mL or more (10 mL or more of a sample with solids,
with a wide bore) and never under 1 mL, dilute a step at most about 1:20, use
one flask of 100 mL rather than a litre. Of the chains that make a factor the
first by these rules is taken; a sample too small for it takes the next that
its volume allows. Uncertainties are those of class A glass
(:mod:`app.chemistry.glassware`).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from app.chemistry.glassware import FLASKS_ML, PIPETTES_ML, Step, chain_factor, chain_relative_u
from app.errors import InputError

#: A small laboratory's shelf, for factors given without glassware.
PIPETTES = (1.0, 2.0, 5.0, 10.0, 20.0, 25.0, 50.0)
FLASKS = (50.0, 100.0, 200.0, 250.0, 500.0, 1000.0)
LEAST_ML, GOOD_ML, SOLIDS_ML = 1.0, 5.0, 10.0
LARGEST_STEP = 20.0
LARGEST_FACTOR = 1e5
#: Two steps are not looked for where one makes a factor this close.
NEAR = 1.1


@dataclass(frozen=True)
class Chain:
    """Steps that make a factor.

    Parameters
    ----------
    factor : float
        Product of flask over pipette; 1 without a step.
    steps : tuple of Step
        In order, two at most.
    relative_u : float
        Relative standard uncertainty of the factor.
    """

    factor: float
    steps: tuple[Step, ...]
    relative_u: float

    @property
    def transfer_ml(self) -> float:
        """Return what is taken of the sample, 0 when it is not diluted."""
        return self.steps[0].pipette_ml if self.steps else 0.0


UNDILUTED = Chain(1.0, (), 0.0)


def _key(steps: Sequence[Step], solids: bool) -> tuple[float, ...]:
    first = steps[0].pipette_ml
    small = first < (SOLIDS_ML if solids else GOOD_ML) or min(s.pipette_ml for s in steps) < GOOD_ML
    steepest = max(s.flask_ml / s.pipette_ml for s in steps)
    steep = steepest > LARGEST_STEP * (1 + 1e-9)
    size = sum(abs(math.log(s.flask_ml / 100.0)) for s in steps)
    return float(small), float(steep), float(len(steps)), round(size, 9), steepest


def _check(pipettes_ml: Sequence[float], flasks_ml: Sequence[float]) -> None:
    wrong: dict[str, list[str]] = {}
    for name, sizes, known in (
        ("pipettes_ml", pipettes_ml, PIPETTES_ML),
        ("flasks_ml", flasks_ml, FLASKS_ML),
    ):
        for i, size in enumerate(sizes):
            if size not in known or known[size].astm_ml is None:
                wrong[f"{name}.{i}"] = [f"no class A size: {size:g} mL"]
    if wrong:
        raise InputError("The shelf has a size that is not made in class A.", wrong)


@lru_cache(maxsize=64)
def _all_chains(
    pipettes_ml: tuple[float, ...], flasks_ml: tuple[float, ...], solids: bool
) -> dict[float, tuple[Chain, ...]]:
    _check(pipettes_ml, flasks_ml)
    least = SOLIDS_ML if solids else LEAST_ML
    single = [Step(p, f) for p in pipettes_ml for f in flasks_ml if LEAST_ML <= p < f]
    first = [step for step in single if step.pipette_ml >= least]
    pairs = [(a, b) for a in first for b in single if b.pipette_ml < a.flask_ml]
    found: dict[float, list[tuple[Step, ...]]] = {}
    for steps in [*((one,) for one in first), *pairs]:
        factor = float(f"{chain_factor(steps):.12g}")
        if factor <= LARGEST_FACTOR:
            found.setdefault(factor, []).append(steps)
    return {
        factor: tuple(
            Chain(factor, steps, chain_relative_u(steps))
            for steps in sorted(chains, key=lambda steps: _key(steps, solids))
        )
        for factor, chains in sorted(found.items())
    }


def chains_for(
    factor: float,
    pipettes_ml: Sequence[float] = PIPETTES,
    flasks_ml: Sequence[float] = FLASKS,
    solids: bool = False,
) -> tuple[Chain, ...]:
    """Return the chains of at most two steps that make a factor, best first.

    Parameters
    ----------
    factor : float
        1 or more.
    pipettes_ml, flasks_ml : sequence of float
        Class A sizes on the shelf.
    solids : bool
        Whether the sample holds solids, so that 10 mL or more is taken of it.

    Returns
    -------
    tuple of Chain
        Empty when the shelf does not make it.

    Raises
    ------
    InputError
        When a size is not made in class A.
    """
    if factor == 1.0:
        return (UNDILUTED,)
    return _all_chains(tuple(pipettes_ml), tuple(flasks_ml), solids).get(float(f"{factor:.12g}"), ())


@lru_cache(maxsize=64)
def _factors(pipettes_ml: tuple[float, ...], flasks_ml: tuple[float, ...], solids: bool) -> tuple[float, ...]:
    made = _all_chains(pipettes_ml, flasks_ml, solids)
    kept = [1.0, *(factor for factor, chains in made.items() if any(len(c.steps) == 1 for c in chains))]
    for factor in made:
        if all(not 1 / NEAR < factor / known < NEAR for known in kept):
            kept.append(factor)
    return tuple(sorted(kept))


def factors_of(
    pipettes_ml: Sequence[float], flasks_ml: Sequence[float], solids: bool = False
) -> tuple[float, ...]:
    """Return the factors a shelf makes: all of one step, and of two steps those not near another.

    Parameters
    ----------
    pipettes_ml, flasks_ml : sequence of float
        Class A sizes on the shelf.
    solids : bool
        Whether the sample holds solids.

    Returns
    -------
    tuple of float
        Rising, from 1.

    Raises
    ------
    InputError
        When a size is not made in class A.
    """
    return _factors(tuple(pipettes_ml), tuple(flasks_ml), solids)
