r"""Exponentially weighted moving average of a point's results.

:math:`z_i = \lambda x_i + (1 - \lambda) z_{i-1}`, limits
:math:`z_0 \pm L s \sqrt{\lambda/(2-\lambda)\,[1-(1-\lambda)^{2i}]}`, or their
steady state without the bracket. The baseline (centre and s) is frozen before
it is used; skewed data are charted as logarithms.

References
----------
NIST/SEMATECH e-Handbook of Statistical Methods, section 6.3.2.4.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from app.compliance.exact import need_number


@dataclass(frozen=True)
class Ewma:
    """A chart.

    Parameters
    ----------
    points : tuple of float
        The averages, one for each value.
    lower, upper : tuple of float
        The limits at each.
    out : tuple of int
        Indices of the points beyond a limit.
    """

    points: tuple[float, ...]
    lower: tuple[float, ...]
    upper: tuple[float, ...]
    out: tuple[int, ...]


def ewma(
    values: Sequence[float],
    centre: float,
    sd: float,
    *,
    weight: float = 0.3,
    width: float = 3.0,
    steady: bool = True,
) -> Ewma:
    """Chart values against a frozen baseline.

    Parameters
    ----------
    values : sequence of float
        In order of time, shape (n,).
    centre, sd : float
        Of the baseline.
    weight : float
        Lambda, above 0 and at most 1.
    width : float
        Limits in standard deviations.
    steady : bool
        Steady-state limits; otherwise they widen from the start.

    Returns
    -------
    Ewma
    """
    need_number("weight", weight, above=0)
    need_number("rest", 1.0 - weight, least=0)
    need_number("sd", sd, least=0)
    need_number("width", width, above=0)
    points, lower, upper = [], [], []
    last, rest = centre, 1.0
    for i, value in enumerate(values):
        need_number(f"values.{i}", value)
        last = weight * value + (1.0 - weight) * last
        rest *= (1.0 - weight) ** 2
        spread = width * sd * math.sqrt(weight / (2.0 - weight) * (1.0 if steady else 1.0 - rest))
        points.append(last)
        lower.append(centre - spread)
        upper.append(centre + spread)
    out = [i for i, p in enumerate(points) if not lower[i] <= p <= upper[i]]
    return Ewma(tuple(points), tuple(lower), tuple(upper), tuple(out))
