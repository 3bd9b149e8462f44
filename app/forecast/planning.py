"""Dilutions with their chances, and the one that needs the fewest tubes.

A run that misses is repeated: with probability p of being in range, a plan of
r tubes needs r/p tubes in expectation. The plan with the fewest is chosen; of
equals, the one with the lower risk of going over range, because a green tube
gives no number at all. Two dilutions digested side by side, with the two tubes
each that can be compared (half of r, if that is more), miss only where both
do; they are offered where that needs fewer tubes.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from app.errors import InputError
from app.forecast.glass import FLASKS, PIPETTES, Chain, chains_for, factors_of
from app.forecast.predictive import Expected

LEAST_CHANCE = 1e-6
#: Sample a tube takes where the recipe does not say, mL.
TUBE_ML = 2.5


@dataclass(frozen=True)
class Range:
    """A recipe's working range in the tube.

    Parameters
    ----------
    name : str
        The recipe's name.
    low, high : float
        mg/L in the tube.
    chloride_limit : float or None
        mg/L in the tube's sample; None where it is not judged.
    reporting : float or None
        Reporting level in the tube, mg/L.
    mercury_mg : float or None
        Mercury in one tube, mg.
    """

    name: str
    low: float
    high: float
    chloride_limit: float | None = None
    reporting: float | None = None
    mercury_mg: float | None = None

    def __post_init__(self) -> None:
        """Refuse a range that is none."""
        if not 0 <= self.low < self.high:
            raise InputError("A working range's lower end lies under its top.", {"low": ["not under high"]})


@dataclass(frozen=True)
class Shelf:
    """The glassware at hand, class A sizes in mL."""

    pipettes_ml: tuple[float, ...] = PIPETTES
    flasks_ml: tuple[float, ...] = FLASKS


@dataclass(frozen=True)
class Sample:
    """What is known of the sample besides its expected COD.

    Parameters
    ----------
    chloride : float or None
        mg/L in the undiluted sample.
    volume_ml : float or None
        At hand; None where it is not judged.
    decision_limit : float or None
        The limit the result will be held against, mg/L.
    replicates : int
        Tubes a sample.
    solids : bool
        Whether it holds solids, so that 10 mL or more is taken of it.
    """

    chloride: float | None = None
    volume_ml: float | None = None
    decision_limit: float | None = None
    replicates: int = 3
    solids: bool = False


@dataclass(frozen=True)
class Plan:
    """One dilution in one range and its chances.

    ``chain`` is None where the shelf does not make the factor;
    ``expected_tubes`` where practically no sample would be in range.
    """

    range: str
    dilution_factor: float
    p_in_range: float
    p_over: float
    p_below: float
    expected_tubes: float | None
    usable: bool
    objections: tuple[str, ...]
    chain: Chain | None = None
    chloride_after: float | None = None
    reporting_after: float | None = None
    expected_mercury_mg: float | None = None


@dataclass(frozen=True)
class Split:
    """Two dilutions of one sample, digested side by side.

    Parameters
    ----------
    plans : tuple of int
        Their places in the list of plans.
    tubes_each : int
        Tubes at each dilution.
    p_in_range : float
        That at least one is in range.
    expected_tubes : float
        Of both.
    """

    plans: tuple[int, int]
    tubes_each: int
    p_in_range: float
    expected_tubes: float


@dataclass(frozen=True)
class Planned:
    """All plans, the choice and why; ``choice`` is None when no plan is usable."""

    plans: tuple[Plan, ...]
    choice: Plan | None
    why: str
    split: Split | None = None


def _too_little(chain: Chain | None, sample: Sample) -> tuple[str, ...]:
    if sample.volume_ml is None:
        return ()
    needed = chain.transfer_ml if chain is not None and chain.steps else sample.replicates * TUBE_ML
    if chain is None or sample.volume_ml >= needed:
        return ()
    return (f"{needed:g} mL of sample are needed, {sample.volume_ml:g} mL are at hand",)


def _objections(one: Range, factor: float, chain: Chain | None, sample: Sample) -> tuple[str, ...]:
    found = []
    if (
        sample.chloride is not None
        and one.chloride_limit is not None
        and sample.chloride / factor > one.chloride_limit
    ):
        after = sample.chloride / factor
        found.append(f"{after:.0f} mg/L chloride after dilution is above {one.chloride_limit:.0f}")
    if (
        one.reporting is not None
        and sample.decision_limit is not None
        and one.reporting * factor > sample.decision_limit
    ):
        found.append(
            f"the reporting level after dilution, {one.reporting * factor:.0f} mg/L, is above the limit of "
            f"{sample.decision_limit:.0f}"
        )
    return (*found, *_too_little(chain, sample))


def _not_made(chain: Chain | None, shelf: Shelf | None) -> tuple[str, ...]:
    return (
        ("the glassware at hand does not make this dilution",) if shelf is not None and chain is None else ()
    )


def _chain(factor: float, shelf: Shelf, sample: Sample) -> Chain | None:
    chains = chains_for(factor, shelf.pipettes_ml, shelf.flasks_ml, sample.solids)
    fitting = (c for c in chains if sample.volume_ml is None or c.transfer_ml <= sample.volume_ml)
    return next(fitting, chains[0] if chains else None)


def _plan(
    one: Range,
    factor: float,
    ends: tuple[float, float],
    chain: Chain | None,
    sample: Sample,
    shelf: Shelf | None,
) -> Plan:
    below, over = ends
    inside = max(0.0, 1.0 - below - over)
    tubes = sample.replicates / inside if inside > LEAST_CHANCE else None
    objections = (*_objections(one, factor, chain, sample), *_not_made(chain, shelf))
    return Plan(
        one.name,
        factor,
        inside,
        over,
        below,
        tubes,
        not objections,
        objections,
        chain,
        None if sample.chloride is None else sample.chloride / factor,
        None if one.reporting is None else one.reporting * factor,
        None if one.mercury_mg is None or tubes is None else one.mercury_mg * tubes,
    )


def _why(choice: Plan | None, plans: Sequence[Plan]) -> str:
    if choice is None:
        lines = sorted({line for p in plans for line in p.objections})
        return f"No dilution is usable: {'; '.join(lines) or 'practically no sample would be in range'}."
    share = f"{100 * choice.p_in_range:.0f} % of samples like this fall in range"
    rest = f"{100 * choice.p_over:.0f} % would go over, {100 * choice.p_below:.0f} % under"
    return f"{share}; {rest}."


def _split(plans: Sequence[Plan], best: Plan | None, replicates: int) -> Split | None:
    """Return the two usable plans that together need fewer tubes than any single one."""
    places = [i for i, p in enumerate(plans) if p.usable]
    if best is None or best.expected_tubes is None or len(places) < 2:
        return None
    low = np.array([plans[i].p_below for i in places])
    high = np.array([1.0 - plans[i].p_over for i in places])
    inside = np.maximum(high - low, 0.0)
    shared = np.minimum(high[:, None], high) - np.maximum(low[:, None], low)
    together = np.triu(inside[:, None] + inside - np.maximum(shared, 0.0), 1)
    i, j = divmod(int(np.argmax(np.round(together, 9))), len(places))
    chance = float(together[i, j])
    each = max(min(replicates, 2), math.ceil(replicates / 2))
    tubes = 2 * each / max(chance, LEAST_CHANCE)
    if tubes >= best.expected_tubes * (1 - 1e-9):
        return None
    return Split((places[i], places[j]), each, chance, tubes)


def plan(
    predictive: Expected,
    ranges: Sequence[Range],
    dilutions: Sequence[float] | None,
    sample: Sample | None = None,
    shelf: Shelf | None = None,
) -> Planned:
    """Return every dilution's chances and the one to choose.

    Parameters
    ----------
    predictive : Predictive or Beyond
        What is expected.
    ranges : sequence of Range
        Working ranges of the recipes at hand.
    dilutions : sequence of float or None
        Factors allowed, each at least 1; None for all that the shelf makes.
    sample : Sample, optional
        What else is known of it; nothing without.
    shelf : Shelf, optional
        Glassware at hand, so that a factor it does not make is not usable.
        Without, steps are found from a small laboratory's, and any factor may
        be made by other means.

    Returns
    -------
    Planned

    Raises
    ------
    InputError
        If there is no range or no dilution, or a factor is under 1.
    """
    sample, glass = sample or Sample(), shelf or Shelf()
    factors = (
        factors_of(glass.pipettes_ml, glass.flasks_ml, sample.solids) if dilutions is None else dilutions
    )
    if not ranges or not factors or any(not math.isfinite(f) or f < 1 for f in factors):
        raise InputError("A plan needs a range and dilutions of 1 or more.", {"dilutions": ["1 or more"]})
    chains = [_chain(factor, glass, sample) for factor in factors]
    below = predictive.below([one.low * factor for one in ranges for factor in factors])
    under = predictive.below([one.high * factor for one in ranges for factor in factors])
    each = [(one, factor, chain) for one in ranges for factor, chain in zip(factors, chains, strict=True)]
    plans = tuple(
        _plan(one, factor, (float(below[i]), 1.0 - float(under[i])), chain, sample, shelf)
        for i, (one, factor, chain) in enumerate(each)
    )
    usable = [p for p in plans if p.usable and p.expected_tubes is not None]
    choice = min(usable, key=lambda p: (round(p.expected_tubes or 0.0, 9), p.p_over), default=None)
    return Planned(plans, choice, _why(choice, plans), _split(plans, choice, sample.replicates))
