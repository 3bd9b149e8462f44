"""A run that a laboratory could have had, to be changed by the tests that need one."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from app.chemistry.calibration import Standard
from app.chemistry.recipe import Recipe
from app.chemistry.repeatability import Repeatability
from app.chemistry.run import Policy, Run, SampleTubes

HIGH = Recipe(2.5, 1.5, 3.5, 10.216, 33.3, 10.12, 600.0)
LOW = Recipe(2.5, 1.5, 3.5, 1.022, 33.3, 10.12, 420.0)
SLOPE = 3.8e-4
LEVELS = (0.0, 50.0, 100.0, 250.0, 500.0, 750.0, 900.0)
NOISE = (0.0003, -0.0004, 0.0002, -0.0001, 0.0004, -0.0003, -0.0001)
STANDARDS = tuple(Standard(cod, (SLOPE * cod + e,)) for cod, e in zip(LEVELS, NOISE, strict=True))
CURVED = tuple(
    Standard(cod, (SLOPE * cod - 1.2e-7 * cod**2 + e,)) for cod, e in zip(LEVELS, NOISE, strict=True)
)
POLICY = Policy(Repeatability(4.0, 0.025, 40), 0.02, 11, 10.0, 20.0, (90.0, 110.0))


def tubes(sample: str, *cod: float, blank: float = 0.0, **more: Any) -> SampleTubes:
    """Return tubes that read as if they held these COD."""
    return SampleTubes(sample, tuple(blank + SLOPE * c for c in cod), **more)


def run(*samples: SampleTubes, **changes: Any) -> Run:
    """Return a high-range run with these samples."""
    whole = Run(HIGH, STANDARDS, "linear", 0.005, (20.0, 900.0), None, samples, (), (), (), POLICY)
    return replace(whole, **changes)
