"""Invented programmes from ``seed_scenarios/``, told to a store as if they had happened.

A scenario holds people, places, recipes and two years of results, with days
counted from the last one, so that the example is always of today. It is told
through the one write path, with a clock of its own: the journal of an example
is a journal like any other.
"""

from __future__ import annotations

from app.journal.store import Store


def load(store: Store, name: str = "esker_valley") -> None:
    """Fill an empty store with a scenario."""
    raise NotImplementedError
