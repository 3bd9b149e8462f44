r"""Percentiles and variability of a point, and how many samples tell what.

A lognormal percentile is :math:`\exp(m + z s)` with :math:`m` and :math:`s` of
the logarithms. An empirical percentile always names its definition, because the
common ones differ by a lot in small samples. Multipliers of the long-term
average are :math:`\exp(z \sigma - \sigma^2/2)`, :math:`\sigma^2 = \ln(1 + CV^2)`,
for the mean of :math:`n` values :math:`\sigma_n^2 = \ln(1 + CV^2/n)`.

References
----------
US EPA, Technical Support Document for Water Quality-based Toxics Control
(EPA/505/2-90-001, 1991), ch. 3 and appendix E.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from scipy.special import nctdtrit, ndtr, ndtri, stdtrit

from app.compliance.exact import need_number
from app.errors import InputError

Definition = Literal["linear", "weibull"]


@dataclass(frozen=True)
class Lognormal:
    """A lognormal description of a point.

    Parameters
    ----------
    n : int
        Values.
    mean, sd, cv : float
        Of the values; sd with n - 1.
    log_mean, log_sd : float
        Of their natural logarithms; sd with n - 1.
    """

    n: int
    mean: float
    sd: float
    cv: float
    log_mean: float
    log_sd: float

    def percentile(self, share: float) -> float:
        """Return ``exp(m + z s)`` for a share between 0 and 1."""
        return math.exp(self.log_mean + float(ndtri(share)) * self.log_sd)

    def chance_above(self, value: float) -> float:
        """Return the chance that a value is exceeded."""
        if self.log_sd == 0:
            return 1.0 if math.log(value) < self.log_mean else 0.0
        return float(ndtr(-(math.log(value) - self.log_mean) / self.log_sd))

    def upper_tolerance_limit(self, share: float = 0.95, confidence: float = 0.95) -> float:
        """Return a number that holds a share of all values with a confidence.

        Parameters
        ----------
        share, confidence : float
            Between 0 and 1.

        Returns
        -------
        float
            ``exp(m + k s)``, k from the noncentral t distribution.
        """
        root = math.sqrt(self.n)
        k = float(nctdtrit(self.n - 1, float(ndtri(share)) * root, confidence)) / root
        return math.exp(self.log_mean + k * self.log_sd)


def lognormal(values: Sequence[float]) -> Lognormal:
    """Describe values by a lognormal distribution.

    Parameters
    ----------
    values : sequence of float
        Above zero, shape (n,), n at least 2; without bounds (see
        :mod:`app.compliance.nondetects` for those).

    Returns
    -------
    Lognormal

    Raises
    ------
    InputError
        If there are fewer than two or one is not above zero.
    """
    for i, value in enumerate(values):
        need_number(f"values.{i}", value, above=0)
    if len(values) < 2:
        raise InputError("A spread needs at least two values.", {"values": ["needs at least two"]})
    v = np.array(values, dtype=float)
    logs = np.log(v)
    mean, sd = float(v.mean()), float(v.std(ddof=1))
    return Lognormal(len(v), mean, sd, sd / mean, float(logs.mean()), float(logs.std(ddof=1)))


def empirical_percentile(values: Sequence[float], share: float, definition: Definition) -> float:
    """Return a percentile of the values themselves, by a named definition.

    Parameters
    ----------
    values : sequence of float
        Shape (n,), n at least 1.
    share : float
        Between 0 and 1.
    definition : {"linear", "weibull"}
        "linear" interpolates between positions ``(n - 1) share``; "weibull" uses
        ``(n + 1) share`` and never goes beyond the largest value.

    Returns
    -------
    float
    """
    if not values:
        raise InputError("There is no value.", {"values": ["needs at least one"]})
    return float(np.quantile(np.array(values, dtype=float), share, method=definition))


def multiplier(cv: float, share: float, n: int = 1) -> float:
    """Return how far a percentile of the mean of n values lies above the long-term average.

    Parameters
    ----------
    cv : float
        Coefficient of variation between days.
    share : float
        0.95 or 0.99 as a rule.
    n : int
        Values in the mean.

    Returns
    -------
    float
    """
    need_number("cv", cv, least=0)
    variance = math.log1p(cv**2 / n)
    return math.exp(float(ndtri(share)) * math.sqrt(variance) - variance / 2.0)


def projected_maximum_multiplier(cv: float, n: int, share: float = 0.99, confidence: float = 0.99) -> float:
    """Return by how much the largest of n samples is raised to an upper percentile.

    Parameters
    ----------
    cv : float
        Coefficient of variation; 0.6 is usual with fewer than ten values.
    n : int
        Samples, at least one.
    share, confidence : float
        The percentile, and the confidence with which it is not underestimated.

    Returns
    -------
    float
    """
    need_number("cv", cv, least=0)
    sigma = math.sqrt(math.log1p(cv**2))
    reached = (1.0 - confidence) ** (1.0 / n)
    return math.exp((float(ndtri(share)) - float(ndtri(reached))) * sigma)


def samples_for(cv: float, relative_error: float, confidence: float = 0.95) -> int:
    """Return the least number of samples whose mean is known to a relative error.

    Parameters
    ----------
    cv : float
        Coefficient of variation.
    relative_error : float
        Half-width of the interval over the mean, above zero.
    confidence : float
        Of the interval, by Student's t.

    Returns
    -------
    int
        Found by counting upwards: a fixed-point iteration on t can oscillate.
    """
    need_number("cv", cv, least=0)
    need_number("relative_error", relative_error, above=0)
    level = 0.5 + confidence / 2.0
    normal = (float(ndtri(level)) * cv / relative_error) ** 2
    if normal > 1e6:
        raise InputError(
            "No sampling reaches this error.", {"relative_error": ["needs over a million samples"]}
        )
    n = max(2, math.ceil(normal))
    while float(stdtrit(n - 1, level)) * cv / math.sqrt(n) > relative_error:
        n += 1
    return n


def chance_of_seeing(share_exceeding: float, n: int) -> float:
    """Return the chance that n samples show at least one exceedance.

    Parameters
    ----------
    share_exceeding : float
        Share of days above the limit, 0 to 1.
    n : int
        Samples.

    Returns
    -------
    float
        ``1 - (1 - p)**n``.
    """
    return 1.0 - (1.0 - share_exceeding) ** n
