"""One promise about speed and what was found."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Measure:
    """A quantity with its unit, the promise, and whether more or less of it is better."""

    what: str
    found: float
    promised: float
    unit: str
    more_is_better: bool = True

    @property
    def kept(self) -> bool:
        """Tell whether the promise is kept."""
        return self.found >= self.promised if self.more_is_better else self.found <= self.promised

    def line(self) -> str:
        """Return the table's line."""
        bound = "at least" if self.more_is_better else "at most"
        verdict = "kept" if self.kept else "NOT KEPT"
        return f"{self.what:<56} {self.found:>10.4g} {self.unit:<10} {bound} {self.promised:<8g} {verdict}"
