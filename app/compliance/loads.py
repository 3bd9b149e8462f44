r"""Mass of COD that a point discharges, from full flow and few samples.

One day: kg = mg/L times m3 / 1000. A month with flow on all :math:`N` days and
samples on :math:`n` of them, flow :math:`q` and load :math:`l` on those days:

- mean load times N is biased when the sampled days are not typical;
- mean concentration times total flow holds only where they are unrelated;
- the *ratio* estimate :math:`Q\,\bar l / \bar q` uses the flow of every day, and
- *Beale's* estimate corrects its small bias,

.. math::

   L = Q \frac{\bar l}{\bar q}\;
       \frac{1 + \theta s_{lq} / (\bar l \bar q)}{1 + \theta s_q^2 / \bar q^2},
   \qquad \theta = \frac1n - \frac1N .

Its relative variance is :math:`\theta (s_q^2/\bar q^2 + s_l^2/\bar l^2 - 2 s_{lq}/(\bar q \bar l))`
(survey sampling, ratio estimator). With few samples the sampling, not the
measurement, is the uncertainty; under three samples no interval is given, under
six it is called weak.

References
----------
E. M. L. Beale, Some uses of computers in operational research, Industrielle
Organisation 31 (1962) 27-28; W. G. Cochran, Sampling Techniques, ch. 6.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import stdtrit

from app.compliance.exact import need_number
from app.compliance.units import POUND_FACTOR_EXACT
from app.errors import Fields, InputError

Vector = NDArray[np.float64]
FEWEST_FOR_INTERVAL, WEAK_UNDER, MOST_FILLED = 3, 6, 0.20


def mass_kg(cod_mg_l: float, flow_m3: float) -> float:
    """Return the mass in a volume of water, kg.

    Parameters
    ----------
    cod_mg_l : float
        Concentration.
    flow_m3 : float
        Volume, of the same day.

    Returns
    -------
    float
    """
    return cod_mg_l * flow_m3 / 1000.0


def mass_lb(cod_mg_l: float, flow_million_gallons: float, factor: float = POUND_FACTOR_EXACT) -> float:
    """Return the mass in a volume of water, lb.

    Parameters
    ----------
    cod_mg_l : float
        Concentration.
    flow_million_gallons : float
        Volume in million US gallons, of the same day.
    factor : float
        8.345404452 exactly; ordinances print 8.34, which then is the setting
        and is printed on the report.

    Returns
    -------
    float
    """
    return cod_mg_l * flow_million_gallons * factor


@dataclass(frozen=True)
class Load:
    """The load of a period.

    Parameters
    ----------
    days, sampled, filled : int
        Days of the period, days sampled, days whose flow was missing and filled
        with the mean of the others.
    flow_m3 : float
        Total flow.
    flow_weighted_mean : float
        mg/L.
    ratio_kg : float
        Ratio estimate.
    beale_kg : float or None
        Beale's estimate; None from a single sample.
    relative_standard_error : float or None
        Of the ratio; None from a single sample or without load.
    interval_kg : tuple of float or None
        95 % interval of the ratio estimate; None under three samples.
    mean_load_kg, mean_concentration_kg : float
        The two naive estimates, for comparison only.
    """

    days: int
    sampled: int
    filled: int
    flow_m3: float
    flow_weighted_mean: float
    ratio_kg: float
    beale_kg: float | None
    relative_standard_error: float | None
    interval_kg: tuple[float, float] | None
    mean_load_kg: float
    mean_concentration_kg: float

    @property
    def weak(self) -> bool:
        """Whether fewer than six days were sampled."""
        return self.sampled < WEAK_UNDER

    @property
    def qualified(self) -> bool:
        """Whether more than a fifth of the flows had to be filled."""
        return self.filled > MOST_FILLED * self.days


def _fill(flow_m3: Sequence[float | None]) -> tuple[Vector, int]:
    wrong: Fields = {}
    for i, q in enumerate(flow_m3):
        if q is not None and not 0 <= q < math.inf:
            wrong[f"flow_m3.{i}"] = ["must be a finite number, 0 or more"]
    known = [q for q in flow_m3 if q is not None]
    if not known and not wrong:
        wrong["flow_m3"] = ["needs the flow of at least one day"]
    if wrong:
        raise InputError("The flow record cannot be used.", wrong)
    mean = math.fsum(known) / len(known)
    filled = np.array([mean if q is None else q for q in flow_m3], dtype=float)
    return filled, len(flow_m3) - len(known)


def _sampled(loads_kg: Mapping[int, float], days: int) -> list[int]:
    wrong: Fields = {}
    for day, load in loads_kg.items():
        if not 1 <= day <= days:
            wrong[f"loads_kg.{day}"] = [f"the flow record has days 1 to {days}"]
        elif not 0 <= load < math.inf:
            wrong[f"loads_kg.{day}"] = ["must be a finite number, 0 or more"]
    if not loads_kg:
        wrong["loads_kg"] = ["needs at least one sampled day"]
    if wrong:
        raise InputError("The sampled days cannot be used.", wrong)
    return sorted(loads_kg)


def estimate(flow_m3: Sequence[float | None], loads_kg: Mapping[int, float]) -> Load:
    """Estimate the load of a period from its flows and the loads of some days.

    Parameters
    ----------
    flow_m3 : sequence of float or None
        Flow of each day, shape (N,); None where it is missing.
    loads_kg : mapping of int to float
        Load of each sampled day, days counted from 1.

    Returns
    -------
    Load

    Raises
    ------
    InputError
        If a number is negative or not finite, a day lies outside the record,
        nothing was sampled, or no water flowed on the sampled days.
    """
    flows, filled = _fill(flow_m3)
    days = _sampled(loads_kg, len(flows))
    q = flows[np.array(days) - 1]
    load = np.array([loads_kg[day] for day in days], dtype=float)
    total, n = float(flows.sum()), len(days)
    if q.sum() <= 0:
        raise InputError("No water flowed on the sampled days.", {"flow_m3": ["is 0 on every sampled day"]})
    ratio = total * float(load.mean() / q.mean())
    theta = 1.0 / n - 1.0 / len(flows)
    beale, error = _beale(ratio, q, load, theta)
    interval = None
    if error is not None and n >= FEWEST_FOR_INTERVAL:
        half = float(stdtrit(n - 1, 0.975)) * error
        interval = (max(ratio * (1.0 - half), 0.0), ratio * (1.0 + half))
    flowing = q > 0
    concentrations = 1000.0 * load[flowing] / q[flowing]
    return Load(
        days=len(flows),
        sampled=n,
        filled=filled,
        flow_m3=total,
        flow_weighted_mean=1000.0 * float(load.sum() / q.sum()),
        ratio_kg=ratio,
        beale_kg=beale,
        relative_standard_error=error,
        interval_kg=interval,
        mean_load_kg=float(load.mean()) * len(flows),
        mean_concentration_kg=float(concentrations.mean()) * total / 1000.0,
    )


def _beale(ratio: float, q: Vector, load: Vector, theta: float) -> tuple[float | None, float | None]:
    if len(q) < 2:
        return None, None
    q_bar, l_bar = float(q.mean()), float(load.mean())
    if l_bar == 0:
        return 0.0, None
    cov = np.cov(load / l_bar, q / q_bar, ddof=1)
    s_ll, s_lq, s_qq = float(cov[0, 0]), float(cov[0, 1]), float(cov[1, 1])
    beale = ratio * (1.0 + theta * s_lq) / (1.0 + theta * s_qq)
    variance = max(theta * (s_qq + s_ll - 2.0 * s_lq), 0.0)
    return beale, math.sqrt(variance)


def load_of(flow_m3: Sequence[float | None], samples: Sequence[tuple[int, float]]) -> Load:
    """Estimate the load of a period from its flows and the COD of some days.

    Parameters
    ----------
    flow_m3 : sequence of float or None
        Flow of each day, shape (N,).
    samples : sequence of (int, float)
        Day, counted from 1, and COD in mg/L; one for each sampled day.

    Returns
    -------
    Load

    Raises
    ------
    InputError
        As :func:`estimate`, and if a day is sampled twice or has no flow.
    """
    wrong: Fields = {}
    loads: dict[int, float] = {}
    for i, (day, cod) in enumerate(samples):
        if not 1 <= day <= len(flow_m3):
            wrong[f"samples.{i}.day"] = [f"the flow record has days 1 to {len(flow_m3)}"]
            continue
        flow = flow_m3[day - 1]
        if day in loads:
            wrong[f"samples.{i}.day"] = ["is given twice: make one daily value first"]
        elif flow is None:
            wrong[f"samples.{i}.day"] = ["has no flow: the load of a sampled day needs its own"]
        elif not 0 <= cod < math.inf:
            wrong[f"samples.{i}.cod"] = ["must be a finite number, 0 or more"]
        else:
            loads[day] = mass_kg(cod, flow)
    if wrong:
        raise InputError("The samples do not fit the flow record.", wrong)
    if not samples:
        raise InputError("Nothing was sampled.", {"samples": ["needs at least one"]})
    return estimate(flow_m3, loads)


def relative_u_of_load(relative_u_cod: float, relative_u_flow: float) -> float:
    """Return the relative standard uncertainty of one day's load.

    Parameters
    ----------
    relative_u_cod, relative_u_flow : float
        Of its two factors, unrelated.

    Returns
    -------
    float
    """
    return math.hypot(relative_u_cod, relative_u_flow)


def expected_relative_error(cv: float, n: int, days: int) -> tuple[float, float | None]:
    """Return what a number of samples can give for a month's mean.

    Parameters
    ----------
    cv : float
        Coefficient of variation between days.
    n, days : int
        Days sampled, of how many.

    Returns
    -------
    tuple of float
        Relative standard error, with finite population correction, and the
        relative half-width of the 95 % interval (None under three samples).
    """
    need_number("cv", cv, least=0)
    if not 1 <= n <= days:
        raise InputError("These counts cannot be.", {"n": ["needs 1 to the number of days"]})
    error = cv / math.sqrt(n) * math.sqrt(1.0 - n / days)
    return error, float(stdtrit(n - 1, 0.975)) * error if n >= FEWEST_FOR_INTERVAL else None
