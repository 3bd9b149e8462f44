"""Dilutions with their chances, and the one that needs the fewest tubes.

A run that misses is repeated: with probability p of being in range, a plan of
r tubes needs r/p tubes in expectation. The plan with the fewest is chosen; of
equals, the one with the lower risk of going over range, because a green tube
gives no number at all.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from app.errors import InputError
from app.forecast.predictive import Predictive


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
    """

    name: str
    low: float
    high: float
    chloride_limit: float | None = None
    reporting: float | None = None

    def __post_init__(self) -> None:
        """Refuse a range that is none."""
        if not 0 <= self.low < self.high:
            raise InputError("A working range's lower end lies under its top.", {"low": ["not under high"]})


@dataclass(frozen=True)
class Plan:
    """One dilution in one range and its chances."""

    range: str
    dilution_factor: float
    p_in_range: float
    p_over: float
    p_below: float
    expected_tubes: float | None
    usable: bool
    objections: tuple[str, ...]


@dataclass(frozen=True)
class Planned:
    """All plans, the choice and why; ``choice`` is None when no plan is usable."""

    plans: tuple[Plan, ...]
    choice: Plan | None
    why: str


def _objections(
    one: Range, factor: float, chloride: float | None, decision_limit: float | None
) -> tuple[str, ...]:
    found = []
    if chloride is not None and one.chloride_limit is not None and chloride / factor > one.chloride_limit:
        found.append(
            f"{chloride / factor:.0f} mg/L chloride after dilution is above {one.chloride_limit:.0f}"
        )
    if one.reporting is not None and decision_limit is not None and one.reporting * factor > decision_limit:
        found.append(
            f"the reporting level after dilution, {one.reporting * factor:.0f} mg/L, is above the limit of "
            f"{decision_limit:.0f}"
        )
    return tuple(found)


def _one(
    predictive: Predictive,
    one: Range,
    factor: float,
    chloride: float | None,
    decision_limit: float | None,
    replicates: int,
) -> Plan:
    below = predictive.cdf(one.low * factor)
    over = 1.0 - predictive.cdf(one.high * factor)
    inside = max(0.0, 1.0 - below - over)
    objections = _objections(one, factor, chloride, decision_limit)
    tubes = replicates / inside if inside > 1e-6 else None
    return Plan(one.name, factor, inside, over, below, tubes, not objections, objections)


def _why(choice: Plan | None, plans: Sequence[Plan]) -> str:
    if choice is None:
        return (
            "No dilution is usable: "
            + "; ".join(sorted({line for p in plans for line in p.objections}))
            + "."
        )
    share = f"{100 * choice.p_in_range:.0f} % of samples like this fall in range"
    rest = f"{100 * choice.p_over:.0f} % would go over, {100 * choice.p_below:.0f} % under"
    return f"{share}; {rest}."


def plan(
    predictive: Predictive,
    ranges: Sequence[Range],
    dilutions: Sequence[float],
    chloride: float | None = None,
    decision_limit: float | None = None,
    replicates: int = 3,
) -> Planned:
    """Return every dilution's chances and the one to choose.

    Parameters
    ----------
    predictive : Predictive
        What is expected.
    ranges : sequence of Range
        Working ranges of the recipes at hand.
    dilutions : sequence of float
        Factors allowed, each at least 1.
    chloride : float, optional
        mg/L in the undiluted sample.
    decision_limit : float, optional
        The limit the result will be held against, mg/L.
    replicates : int
        Tubes a sample.

    Returns
    -------
    Planned

    Raises
    ------
    InputError
        If there is no range or no dilution, or a factor is under 1.
    """
    if not ranges or not dilutions or any(not math.isfinite(f) or f < 1 for f in dilutions):
        raise InputError("A plan needs a range and dilutions of 1 or more.", {"dilutions": ["1 or more"]})
    plans = tuple(
        _one(predictive, one, factor, chloride, decision_limit, replicates)
        for one in ranges
        for factor in dilutions
    )
    usable = [p for p in plans if p.usable and p.expected_tubes is not None]
    choice = min(usable, key=lambda p: (round(p.expected_tubes or 0.0, 9), p.p_over), default=None)
    return Planned(plans, choice, _why(choice, plans))
