"""``make bench``: every promised speed beside what was measured here, in one table.

Each ``measure_*.py`` of this folder offers ``measures()``, which yields a
:class:`~tests.bench.measure.Measure` for each promise. The exit status is 1
when a promise is not kept, so that a slow change shows itself. ``python -m tests.bench forecast
FOLDER`` prints the long table of the forecast on open series instead.
"""

from __future__ import annotations

import platform
import sys
from collections.abc import Iterator
from importlib import import_module
from pathlib import Path

from tests.bench import forecast_table
from tests.bench.measure import Measure

HERE = Path(__file__).resolve().parent


def all_measures() -> Iterator[Measure]:
    """Take the measurements of all modules, one after the other."""
    for path in sorted(HERE.glob("measure_*.py")):
        yield from import_module(f"tests.bench.{path.stem}").measures()


def main() -> int:
    """Print the table and return the exit status."""
    print(f"Python {platform.python_version()} on {platform.machine()}; one run, one machine.")
    kept = []
    for measure in all_measures():
        kept.append(measure.kept)
        print(measure.line(), flush=True)
    print(f"{sum(kept)} of {len(kept)} promises kept")
    return 0 if kept and all(kept) else 1


if __name__ == "__main__":
    if sys.argv[1:2] == ["forecast"]:
        raise SystemExit(forecast_table.main(sys.argv[2] if len(sys.argv) > 2 else "."))
    raise SystemExit(main())
