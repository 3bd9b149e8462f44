"""What one more field reading would add, and the dilution after a tube that missed.

Before leaving the manhole: for each reading not taken, the chance of being in
range is averaged over what the meter would probably show (21 Gauss-Hermite
points of what is usual here), each time with the dilution that would then be
chosen.

References
----------
.. [1] Howard, Information value theory, IEEE Trans. Syst. Sci. Cybern. 2 (1966) 22-26.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy import special

from app.errors import InputError
from app.forecast.observations import READINGS, SOURCE, Now, settle
from app.forecast.planning import Plan, Planned, Range, Sample, Shelf, plan
from app.forecast.posterior import Posterior, inputs_now, moments
from app.forecast.predictive import Beyond, Predictive

#: A reading is named from this gain on.
LEAST_GAIN = 0.005
NODES, _SHARES = np.polynomial.hermite_e.hermegauss(21)
SHARES = _SHARES / _SHARES.sum()
#: Input of each reading, its bend where it has one, and where the bend begins on the input's scale.
BEND = {0: (4, float(np.log(2.0))), 1: (5, 0.0)}


@dataclass(frozen=True)
class Worth:
    """What a reading would add.

    Parameters
    ----------
    field : str
        Of :data:`app.forecast.observations.READINGS`.
    p_in_range_now, p_in_range_expected : float
        Without it, and on average with it.
    low, high : float
        The range that nine in ten samples lie in if the meter shows what is
        usual here, mg/L.
    """

    field: str
    p_in_range_now: float
    p_in_range_expected: float
    low: float
    high: float


def _shown(known: Posterior, now: Now, place: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return inputs, kept shares and missing flags for what the meter of one reading may show."""
    inputs, keeps, missing, _ = inputs_now(known, now)
    centre, spread = np.array(known.centre), np.array(known.spread)
    raw = np.tile(centre, (len(NODES), 1))
    raw[:, place] = centre[place] + NODES * spread[place]
    if place in BEND:
        bend, begins = BEND[place]
        raw[:, bend] = np.maximum(raw[:, place] - begins, 0.0)
    settled, _, _ = settle(raw, centre, spread)
    own = [i for i, source in enumerate(SOURCE) if source == place]
    all_inputs, all_missing = np.tile(inputs, (len(NODES), 1)), np.tile(missing, (len(NODES), 1))
    for i in own:
        all_inputs[:, 1 + i] = settled[:, i] - centre[i]
        all_missing[:, i] = False
    return all_inputs, keeps, all_missing


def worth_measuring(
    known: Posterior, now: Now, planned: Planned, ranges: Sequence[Range]
) -> tuple[Worth, ...]:
    """Return the readings not taken that would add to the chance of being in range, best first.

    Parameters
    ----------
    known : Posterior
        Of the point.
    now : Now
        Moment and readings so far.
    planned : Planned
        What was planned without them.
    ranges : sequence of Range
        That it was planned for.

    Returns
    -------
    tuple of Worth
        Those that add half a percent or more.
    """
    if planned.choice is None:
        return ()
    by_name = {one.name: one for one in ranges}
    usable = [p for p in planned.plans if p.usable]
    bounds = np.log(
        [
            [max(by_name[p.range].low * p.dilution_factor, 1e-300) for p in usable],
            [by_name[p.range].high * p.dilution_factor for p in usable],
        ]
    )
    found = []
    for place, name in enumerate(READINGS):
        if name in now.field:
            continue
        mean, scale = moments(known, *_shown(known, now, place))
        low, high = special.stdtr(known.dof, (bounds[:, None] - mean[:, None]) / scale[:, None])
        chance = float(SHARES @ (high - low).max(axis=1))
        usual = len(NODES) // 2
        ends = np.exp(mean[usual] + scale[usual] * special.stdtrit(known.dof, [0.05, 0.95]))
        found.append(Worth(name, planned.choice.p_in_range, chance, *ends.tolist()))
    gains = [one for one in found if one.p_in_range_expected - one.p_in_range_now >= LEAST_GAIN]
    return tuple(sorted(gains, key=lambda one: -one.p_in_range_expected))


def next_dilution(
    predictive: Predictive,
    bound: float,
    state: str,
    ranges: Sequence[Range],
    dilutions: Sequence[float] | None,
    sample: Sample | None = None,
    shelf: Shelf | None = None,
) -> Plan | None:
    """Return the dilution for a sample whose tube went over or stayed below.

    What was expected is cut at what the tube has shown; the rest is planned
    anew. Where the cut leaves no usable plan with a chance, None.

    Parameters
    ----------
    predictive : Predictive
        What was expected before the tube.
    bound : float
        mg/L of the sample: top or lower end of the tube's range times its dilution.
    state : {"over", "below"}
        What the tube has shown.
    ranges, dilutions, sample, shelf
        As :func:`app.forecast.planning.plan`.

    Returns
    -------
    Plan or None

    Raises
    ------
    InputError
        If the state is another, or the bound not above zero.
    """
    if state not in ("over", "below") or not bound > 0:
        words = "a tube is over or below a bound above zero"
        raise InputError("The tube cannot be used.", {"state": [words]})
    return plan(Beyond(predictive, bound, state == "over"), ranges, dilutions, sample, shelf).choice
