"""The value beside a reported result, for information: measured inorganic species taken out.

Limits are held against the reported value. Chloride is never among the species:
the mercury in the tube binds it, and nobody knows how much of it reacted.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Correction:
    """A measured species and what it takes, in mg/L as texts; never chloride."""

    name: str
    measured: str
    oxygen_demand: str


@dataclass(frozen=True)
class Corrected:
    """The value with measured species taken out, beside the reported one, for information."""

    value: str
    corrections: tuple[Correction, ...]
