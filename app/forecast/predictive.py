"""A predictive distribution of COD: a mixture of Student t distributions of its logarithm.

Every forecast of this package is one. Shares, quantiles and densities follow
from it alone, here and on the tablet (``static/parts/forecast.js`` is its twin,
held to the same vectors).

References
----------
.. [1] Gelman et al., Bayesian Data Analysis, 3rd ed., section 3.3 (Student t
   posterior predictive of a normal sample with unknown variance).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from scipy import special

from app.errors import InputError


@dataclass(frozen=True)
class Component:
    """One Student t distribution of ln COD.

    Parameters
    ----------
    weight : float
        Share in the mixture, above zero.
    mean : float
        Centre, ln(mg/L).
    scale : float
        Scale, above zero.
    dof : float
        Degrees of freedom, above zero.
    """

    weight: float
    mean: float
    scale: float
    dof: float


class Expected(Protocol):
    """Anything that says how probable a COD at or below a value is."""

    def below(self, cods_mg_l: Sequence[float]) -> np.ndarray:
        """Return the probability of a COD at or below each of some values in mg/L."""


@dataclass(frozen=True)
class Predictive:
    """A mixture of Student t distributions of ln COD.

    Parameters
    ----------
    components : tuple of Component
        At least one; the weights sum to one.
    """

    components: tuple[Component, ...]

    def __post_init__(self) -> None:
        """Refuse a mixture that is no distribution."""
        total = sum(one.weight for one in self.components)
        if not self.components or not math.isclose(total, 1.0, rel_tol=1e-9):
            raise InputError("The weights of a forecast must sum to one.", {"components": [f"sum {total:g}"]})

    def cdf(self, cod_mg_l: float) -> float:
        """Return the probability of a COD at or below a value in mg/L (0 for zero and less)."""
        if cod_mg_l <= 0:
            return 0.0
        log = math.log(cod_mg_l)
        return float(sum(c.weight * special.stdtr(c.dof, (log - c.mean) / c.scale) for c in self.components))

    def below(self, cods_mg_l: Sequence[float]) -> np.ndarray:
        """Return the probability of a COD at or below each of some values in mg/L."""
        values = np.asarray(cods_mg_l, dtype=float)
        logs = np.log(np.maximum(values, 1e-300))
        total = np.zeros(len(values))
        for c in self.components:
            total += c.weight * special.stdtr(c.dof, (logs - c.mean) / c.scale)
        return np.where(values > 0, total, 0.0)

    def density(self, log_cod: float) -> float:
        """Return the density of ln COD at a value of ln COD."""
        return float(sum(c.weight * _density(c, log_cod) for c in self.components))

    def quantile(self, probability: float) -> float:
        """Return the COD in mg/L that a share of samples stays below.

        Raises
        ------
        InputError
            If the probability is not between 0 and 1, both excluded.
        """
        if not 0.0 < probability < 1.0:
            raise InputError("A probability lies between 0 and 1.", {"probability": [f"{probability:g}"]})
        ends = [c.mean + c.scale * float(special.stdtrit(c.dof, probability)) for c in self.components]
        if len(ends) == 1:
            return math.exp(ends[0])
        low, high = min(ends), max(ends)
        while high - low > 1e-12 * max(1.0, abs(low)):
            middle = 0.5 * (low + high)
            if middle in (low, high):
                break
            low, high = (middle, high) if self._below(middle) < probability else (low, middle)
        return math.exp(0.5 * (low + high))

    def _below(self, log_cod: float) -> float:
        return float(
            sum(c.weight * special.stdtr(c.dof, (log_cod - c.mean) / c.scale) for c in self.components)
        )


@dataclass(frozen=True)
class Beyond:
    """What remains of an expectation once a tube has shown on which side of a bound the COD lies.

    Parameters
    ----------
    expected : Predictive
        Before the tube.
    bound_mg_l : float
        COD of the sample that the tube's range ends at.
    above : bool
        Whether the COD is above the bound; else below it.
    """

    expected: Predictive
    bound_mg_l: float
    above: bool

    def below(self, cods_mg_l: Sequence[float]) -> np.ndarray:
        """Return the probability of a COD at or below each of some values, given what the tube showed."""
        whole, at = self.expected.below(cods_mg_l), self.expected.cdf(self.bound_mg_l)
        cut = (whole - at) / max(1.0 - at, 1e-12) if self.above else whole / max(at, 1e-12)
        return np.clip(cut, 0.0, 1.0)


def _density(component: Component, log_cod: float) -> float:
    v = component.dof
    z = (log_cod - component.mean) / component.scale
    top = special.gammaln((v + 1) / 2) - special.gammaln(v / 2)
    return float(np.exp(top - (v + 1) / 2 * np.log1p(z * z / v)) / (component.scale * math.sqrt(v * math.pi)))
