"""What the regression's past predictions got wrong at a point, and the correction that follows.

Each result is held against what was expected of it before it was known. If they
lie mostly on one side, as where a level drifts down slowly, the next expectation
is moved by their robust mean; if they lie closer or wider than expected, its
width is drawn in or let out. Both start at "no correction", which counts like 100
results, or like the first weights of the widths. Tails are those of a Student t
distribution with eight degrees of freedom at most: ln COD has more far results
and more near ones than a normal distribution of the same width (from experience
with open series of rivers, storm water and an urban works, in time order).

Bounds say too little about the place of their values and are left out.

References
----------
.. [1] Dawid, J. R. Statist. Soc. A 147 (1984) 278-292 (prequential judgement).
.. [2] Lange, Little and Taylor, J. Am. Stat. Assoc. 84 (1989) 881-896 (weights of the t distribution).
.. [3] West and Harrison, Bayesian Forecasting and Dynamic Models, section 12.2.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import special

from app.forecast.wandering import Filtered, Past, faded

TAIL_DOF = 8.0
#: How many results "no shift" counts for.
SHIFT_COUNT = 100.0
#: Factors of the width that are weighed, and their weights before any result.
#: What a result's say about the width keeps with each later one.
WIDTH_KEEPS = 0.995
WIDTHS = np.array([0.8, 0.9, 1.0, 1.1, 1.25])
FIRST_WEIGHTS = np.array([1.0, 2.0, 3.0, 2.0, 1.0]) / 9.0


@dataclass(frozen=True)
class Correction:
    """Before each result, and after the last, what to add to the centre and to multiply the width by.

    Parameters
    ----------
    shift : ndarray of shape (n + 1,)
        ln COD.
    width : ndarray of shape (n + 1,)
        Factor of the scale.
    """

    shift: np.ndarray
    width: np.ndarray


def tail_dof(dof: np.ndarray | float) -> np.ndarray:
    """Return degrees of freedom held to the tails of ln COD."""
    found: np.ndarray = np.minimum(dof, TAIL_DOF)
    return found


def _before(values: np.ndarray) -> np.ndarray:
    """Return the sums of what lies before each value and of all."""
    return np.concatenate([[0.0], np.cumsum(values)])


def _shift(error: np.ndarray, scale: np.ndarray, free: np.ndarray) -> np.ndarray:
    """Return the robust mean of the errors, drawn to zero."""
    precise = free / scale**2
    weight = precise * (TAIL_DOF + 1.0) / (TAIL_DOF + (error / scale) ** 2)
    usual = _before(precise) / np.maximum(_before(free), 1.0)
    found: np.ndarray = _before(weight * error) / np.maximum(
        _before(weight) + SHIFT_COUNT * usual, np.finfo(float).tiny
    )
    return found


def _width(error: np.ndarray, dof: np.ndarray, free: np.ndarray) -> np.ndarray:
    """Return the geometric mean of the widths, weighed by how well each told the past."""
    half = 0.5 * (dof + 1.0)
    scores = -half[:, None] * np.log1p((error[:, None] / WIDTHS) ** 2 / dof[:, None]) - np.log(WIDTHS)
    logs = np.log(FIRST_WEIGHTS) + faded(scores * free[:, None], WIDTH_KEEPS)
    found: np.ndarray = np.exp(special.softmax(logs, axis=1) @ np.log(WIDTHS))
    return found


def correction(past: Past, known: Filtered) -> Correction:
    """Return the corrections that a point's own past asks for.

    Parameters
    ----------
    past : Past
        Its results.
    known : Filtered
        What was expected of each.

    Returns
    -------
    Correction
        Each from the results before it only.
    """
    weights = known.weights[:-1]
    mean = (weights * known.mean).sum(axis=1)
    scale = np.sqrt((weights * (known.scale**2 + (known.mean - mean[:, None]) ** 2)).sum(axis=1))
    free = (past.sign == 0).astype(float)
    error = np.where(free > 0, past.log_cod - mean, 0.0)
    shift = _shift(error, scale, free)
    dof = tail_dof(2.0 * (weights * known.shape).sum(axis=1))
    return Correction(shift, _width((error - shift[:-1]) / scale, dof, free))
