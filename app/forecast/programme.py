"""What the points of a programme have in common.

A point's ln COD is taken as a sector's level, plus the pull of readings,
activity and season, plus a level that wanders and comes back, plus noise. The
programme holds where each of these starts: what a point without a past is
given, and what a short past is shrunk to. :mod:`app.forecast.learning` moves
these numbers to what a programme's own points show.

The starting values of slopes and memories are from experience with open series
of rivers and storm water (Environmental Protection Department, Hong Kong; the
National Stormwater Quality Database), rounded; they are wide, and a point's own
results soon outweigh them.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from app.errors import InputError
from app.forecast.observations import ACTIVITIES, INPUTS
from app.forecast.sectors import Level, level_of

#: Names of what is constant at a point, after its level.
PULLS = (*INPUTS, *ACTIVITIES, "season_cosine", "season_sine")
PULL_MEAN = (0.25, 0.2, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0)
PULL_SD = (0.35, 0.25, 0.3, 0.15, 0.25, 0.25, 0.4, 0.4, 0.4, 0.1, 0.1)
NOISE = 0.6
#: The kinds of wandering that are weighed: days it is remembered, variance against the noise.
MEMORIES = ((200.0, 0.2), (200.0, 2.0), (3000.0, 0.2), (3000.0, 2.0))
VERSION = 1
LARGEST = 1e6


@dataclass(frozen=True)
class Programme:
    """What a programme's points have in common.

    Parameters
    ----------
    levels : mapping of str to Level
        Where points of a sector start, ln(mg/L) at the reference readings, and
        the standard deviation between them; ``""`` is a point without a
        sector. A sector that is not there starts from the handbook table.
    pull_mean, pull_sd : tuple of float
        For each of :data:`PULLS`: ln COD per unit of the input between points.
    noise : float
        Usual standard deviation of ln COD about its level at one point.
    memory_weights : tuple of float
        Share of points that wander as each of :data:`MEMORIES`; sums to one.
    points : int
        Points it was learnt from.
    """

    levels: Mapping[str, Level] = field(default_factory=dict)
    pull_mean: tuple[float, ...] = PULL_MEAN
    pull_sd: tuple[float, ...] = PULL_SD
    noise: float = NOISE
    memory_weights: tuple[float, ...] = (0.25, 0.25, 0.25, 0.25)
    points: int = 0

    @classmethod
    def default(cls) -> Programme:
        """Return a programme that has learnt nothing yet."""
        return cls()

    def level(self, sector: str | None) -> Level:
        """Return where a point of a sector starts, ln COD."""
        return self.levels.get(key_of(sector), level_of(sector))

    def start(self, sector: str | None) -> tuple[np.ndarray, np.ndarray]:
        """Return mean and standard deviation of the level and the pulls before any result."""
        level = self.level(sector)
        return np.array([level.mean, *self.pull_mean]), np.array([level.sd, *self.pull_sd])

    def to_json(self) -> dict[str, Any]:
        """Return plain JSON; the names are those of the parameters."""
        return {
            "version": VERSION,
            "points": self.points,
            "levels": {name: {"mean": one.mean, "sd": one.sd} for name, one in self.levels.items()},
            "pulls": {
                name: {"mean": mean, "sd": sd}
                for name, mean, sd in zip(PULLS, self.pull_mean, self.pull_sd, strict=True)
            },
            "noise": self.noise,
            "memory_weights": list(self.memory_weights),
        }

    @classmethod
    def from_json(cls, told: Any) -> Programme:
        """Return the programme that :meth:`to_json` wrote.

        Raises
        ------
        InputError
            If it is no such thing; a programme is never repaired by guessing.
        """
        try:
            if told["version"] != VERSION:
                raise ValueError
            found = cls(
                {str(name): Level(*_pair(one)) for name, one in told["levels"].items()},
                tuple(_pair(told["pulls"][name])[0] for name in PULLS),
                tuple(_pair(told["pulls"][name])[1] for name in PULLS),
                _above_zero(told["noise"]),
                _shares(told["memory_weights"]),
                int(told["points"]),
            )
        except (KeyError, TypeError, ValueError, AttributeError, OverflowError):
            words = "is not what `learn` answered"
            raise InputError("The programme cannot be used.", {"programme": [words]}) from None
        return found


def key_of(sector: str | None) -> str:
    """Return a sector's name as the levels are kept under."""
    return (sector or "").strip().lower()


def _number(value: Any) -> float:
    if isinstance(value, bool) or not isinstance(value, (int, float)) or not abs(value) <= LARGEST:
        raise ValueError
    return float(value)


def _above_zero(value: Any) -> float:
    number = _number(value)
    if not number > 0:
        raise ValueError
    return number


def _pair(value: Any) -> tuple[float, float]:
    return _number(value["mean"]), _above_zero(value["sd"])


def _shares(values: Any) -> tuple[float, ...]:
    found = tuple(_above_zero(value) for value in values)
    if len(found) != len(MEMORIES) or not math.isclose(sum(found), 1.0, abs_tol=1e-6):
        raise ValueError
    return found
