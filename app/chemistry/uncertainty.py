"""An uncertainty budget: components, degrees of freedom, expanded uncertainty.

Components are standard uncertainties in the unit of the result and independent
of each other; they add in quadrature. The effective degrees of freedom are
those of Welch and Satterthwaite over the components whose own are finite. They
are rounded to three decimals before they are truncated, so that a nineteen with
rounding noise (18.99996) does not become 18; at least 1. The 18.9987 of the
GUM's own example, printed there as 19.0, is 18 by this rule, which errs on the
safe side by half a percent of the factor. Where none is finite, or more than a
million, the normal quantile serves.

References
----------
JCGM 100:2008 (GUM), G.4 and H.1.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from app.chemistry.curve import t_quantile
from app.chemistry.problems import Problems

#: Two-sided 95 % point of the normal distribution.
NORMAL_95 = 1.959963984540054
MANY_DOF = 1e6


@dataclass(frozen=True)
class Component:
    """One source of uncertainty.

    Parameters
    ----------
    name : str
        For example ``line``.
    u : float
        Standard uncertainty, zero or more.
    dof : float or None
        Degrees of freedom; None is infinite.
    """

    name: str
    u: float
    dof: float | None = None


@dataclass(frozen=True)
class Budget:
    """Components and what they add up to.

    Parameters
    ----------
    components : tuple of Component
        As given.
    u : float
        Combined standard uncertainty.
    dof : float or None
        Effective degrees of freedom before truncation; None for infinite.
    coverage_factor, expanded_u : float
        Factor for 95 %, and u times it.
    """

    components: tuple[Component, ...]
    u: float
    dof: float | None
    coverage_factor: float
    expanded_u: float

    def shares(self) -> tuple[float, ...]:
        """Return the share of the variance that each component carries; they add to 1."""
        if self.u == 0.0:
            return tuple(0.0 for _ in self.components)
        return tuple((part.u / self.u) ** 2 for part in self.components)


def effective_dof(u: float, components: Iterable[Component]) -> float | None:
    """Return the effective degrees of freedom of Welch and Satterthwaite.

    Parameters
    ----------
    u : float
        Combined standard uncertainty.
    components : iterable of Component
        Those without finite degrees of freedom add nothing to the sum.

    Returns
    -------
    float or None
        u^4 / sum(u_i^4 / dof_i); None where infinite or above a million.
    """
    if u == 0.0:
        return None
    total = math.fsum((part.u / u) ** 4 / part.dof for part in components if part.dof is not None)
    if total == 0.0 or total < 1.0 / MANY_DOF:
        return None
    return 1.0 / total


def whole_dof(dof: float) -> int:
    """Return degrees of freedom as the factor takes them: to three decimals, truncated, at least 1."""
    return max(1, math.floor(round(dof, 3)))


def coverage_factor(dof: float | None) -> float:
    """Return the factor for 95 % at some degrees of freedom.

    Parameters
    ----------
    dof : float or None
        Before truncation; None is infinite.

    Returns
    -------
    float
        Student's t at 97.5 % for :func:`whole_dof`.
    """
    if dof is None:
        return NORMAL_95
    return t_quantile(whole_dof(dof), 0.95)


def combine(components: Sequence[Component]) -> Budget:
    """Combine independent components.

    Parameters
    ----------
    components : sequence of Component
        All in the unit of the result.

    Returns
    -------
    Budget
    """
    u = math.sqrt(math.fsum(part.u * part.u for part in components))
    dof = effective_dof(u, components)
    factor = coverage_factor(dof)
    return Budget(tuple(components), u, dof, factor, factor * u)


@dataclass(frozen=True)
class Bias:
    """What a laboratory's own control samples say about its bias.

    Parameters
    ----------
    relative_u : float
        Root mean square of the relative deviations and the reference's own
        relative standard uncertainty, together.
    dof : int
        Number of control samples less one.
    n : int
        Number of control samples.
    mean_recovery_percent : float
        For the eye; not used.
    enough : bool
        Whether the laboratory has the number it asks for before its own bias
        replaces the starting value.
    """

    relative_u: float
    dof: int
    n: int
    mean_recovery_percent: float
    enough: bool


ENOUGH_CONTROLS = 20


def bias_from_controls(recoveries_percent: Sequence[float], reference_relative_u: float = 0.0) -> Bias:
    """Estimate the relative uncertainty of bias from control samples.

    Parameters
    ----------
    recoveries_percent : sequence of float
        Of laboratory control samples, each digested; at least two.
    reference_relative_u : float
        Relative standard uncertainty of their assigned value.

    Returns
    -------
    Bias

    Raises
    ------
    InputError
        Naming the wrong fields.

    References
    ----------
    Nordtest TR 537, bias from a certified reference or control sample.
    """
    wrong = Problems()
    for i, value in enumerate(recoveries_percent):
        wrong.number(f"recoveries_percent.{i}", value, least=0)
    wrong.number("reference_relative_u", reference_relative_u, least=0, most=1)
    if len(recoveries_percent) < 2:
        wrong.add("recoveries_percent", "at least two control samples are needed")
    wrong.stop("The bias cannot be estimated.")
    n = len(recoveries_percent)
    deviations = [value / 100.0 - 1.0 for value in recoveries_percent]
    square = math.fsum(d * d for d in deviations) / n
    mean = math.fsum(recoveries_percent) / n
    return Bias(math.sqrt(square + reference_relative_u**2), n - 1, n, mean, n >= ENOUGH_CONTROLS)
