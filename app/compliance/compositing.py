"""Composite samples by hand and by sampler, and values that must not be averaged.

Volumes by flow: ``V_i = V_total Q_i / sum(Q)``. A flow-paced sampler takes one
aliquot for each pulse of volume. How many aliquots may be missed is a setting
(80 to 90 % are usual; from memory).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from app.compliance.exact import exact, need_number
from app.errors import InputError


def manual_volumes_ml(total_ml: float, flows: Sequence[float]) -> list[float]:
    """Share out the volume of a composite by the flow at each aliquot.

    Parameters
    ----------
    total_ml : float
        Volume of the composite.
    flows : sequence of float
        Flow at each aliquot, any one unit, shape (n,).

    Returns
    -------
    list of float
        Volumes in mL, shape (n,).
    """
    need_number("total_ml", total_ml, above=0)
    for i, flow in enumerate(flows):
        need_number(f"flows.{i}", flow, least=0)
    total = math.fsum(flows)
    if total <= 0:
        raise InputError("Without flow there is nothing to composite.", {"flows": ["need a flow above zero"]})
    return [total_ml * flow / total for flow in flows]


@dataclass(frozen=True)
class Pacing:
    """What a flow-paced sampler will collect.

    Parameters
    ----------
    aliquots : int
        Pulses that fit in the expected volume.
    collected_l : float
        Volume in the bottle.
    fits : bool
        Whether that is less than the bottle holds.
    """

    aliquots: int
    collected_l: float
    fits: bool


def pacing(expected_volume: float, volume_per_pulse: float, aliquot_ml: float, bottle_l: float) -> Pacing:
    """Work out the pacing of a flow-paced sampler.

    Parameters
    ----------
    expected_volume, volume_per_pulse : float
        Discharge expected in the period and per pulse, same unit.
    aliquot_ml : float
        Volume of one aliquot.
    bottle_l : float
        Volume of the bottle.

    Returns
    -------
    Pacing
    """
    for name, value in (
        ("expected_volume", expected_volume),
        ("volume_per_pulse", volume_per_pulse),
        ("aliquot_ml", aliquot_ml),
        ("bottle_l", bottle_l),
    ):
        need_number(name, value, above=0)
    aliquots = math.floor(exact(expected_volume) / exact(volume_per_pulse))
    collected = aliquots * aliquot_ml / 1000.0
    return Pacing(aliquots, collected, collected < bottle_l)


def aliquots_percent(taken: int, planned: int) -> float:
    """Return the share of planned aliquots that were taken, in percent."""
    if planned < 1 or not 0 <= taken <= planned:
        raise InputError("These counts cannot be.", {"taken": ["needs 0 to the number planned"]})
    return 100.0 * taken / planned


def mean_ph(values: Sequence[float]) -> float:
    """Return the pH of equal parts mixed without reaction: the mean of [H+].

    pH is a logarithm; its arithmetic mean is never used. Buffering is ignored,
    so this is information and no result.

    Parameters
    ----------
    values : sequence of float
        pH values, shape (n,), n at least 1.

    Returns
    -------
    float
    """
    if not values:
        raise InputError("There is no pH to average.", {"values": ["need at least one"]})
    for i, value in enumerate(values):
        need_number(f"values.{i}", value)
    return -math.log10(math.fsum(10.0**-value for value in values) / len(values))


def flow_weighted_mean(values: Sequence[float], flows: Sequence[float]) -> float:
    """Return the mean of several samples weighted by the flow each stands for.

    Parameters
    ----------
    values, flows : sequence of float
        Concentration and flow (or volume) of each sample, shape (n,).

    Returns
    -------
    float
        In the unit of the values.

    Raises
    ------
    InputError
        If the lengths differ or there is no flow.
    """
    if len(values) != len(flows) or not values:
        raise InputError("Each sample needs its flow.", {"flows": ["need one for each value"]})
    volumes = manual_volumes_ml(1.0, flows)
    return math.fsum(v * w for v, w in zip(values, volumes, strict=True))
