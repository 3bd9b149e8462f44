"""Invented histories for the forecast's tests."""

from __future__ import annotations

import math

import numpy as np

from app.forecast import Observation, Predictive, Range
from app.forecast.predictive import Component

HIGH = Range("high", 50.0, 900.0, 1998.0, 50.0, 33.8)
LADDER = (1.0, 2.0, 4.0, 5.0, 10.0, 20.0, 25.0, 50.0, 100.0)


def walk(n: int, seed: int = 1, slope: float = 0.6, noise: float = 0.3, gap: float = 30) -> list[Observation]:
    """Return a wandering point whose COD rises with conductivity to the power ``slope``."""
    chance = np.random.default_rng(seed)
    level, found = math.log(2000.0), []
    for i in range(n):
        level += 0.05 * chance.standard_normal()
        salt = 0.5 * chance.standard_normal()
        cod = math.exp(level + slope * salt + noise * chance.standard_normal())
        readings = {"conductivity_us_cm": 1500.0 * math.exp(salt), "ph": 7.2}
        found.append(Observation(20000.0 + gap * i, cod, "ok", readings, "production"))
    return found


def normal(cod: float, sd: float) -> Predictive:
    """Return what is practically a lognormal expectation."""
    return Predictive((Component(1.0, math.log(cod), sd, 1e8),))
