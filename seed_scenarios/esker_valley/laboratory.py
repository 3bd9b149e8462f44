"""What the invented laboratory does beside its runs: a detection limit study, chloride and nitrite.

Everything is invented; :mod:`make` tells these statements among its own. Each is
(hours before now, who, kind, about, body).
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

Body = dict[str, Any]
Statement = tuple[float, str, str, str, Body]

# Results in mg/L by day: spikes of 10 mg/L in reagent water, and method blanks.
STUDY: dict[int, tuple[tuple[str, ...], tuple[str | None, ...]]] = {
    -66: (("9.6", "10.9", "8.9"), ("0.4", None, "-0.9")),
    -65: (("11.2", "9.8"), ("1.1", "0.2")),
    -59: (("10.5", "8.8"), (None, "0.7")),
}


def mg_l(text: str) -> Body:
    """Return a concentration as it is typed."""
    return {"text": text, "unit": "mg/L"}


def study() -> Iterator[Statement]:
    """Yield a finished detection limit study, and a blank of a later run that goes into it."""
    body: Body = {"name": "High range, first study", "recipe": "high-range", "instruments": ["photometer-2"]}
    body |= {"estimate": mg_l("4"), "level": mg_l("10"), "note": "", "days": [f"@day{day}" for day in STUDY]}
    yield -67 * 24, "fenwright", "study.planned", "study-1", body
    kept: Body = {"instrument": "photometer-2", "left_out": "", "reason": ""}
    for batch, (day, tubes) in enumerate(STUDY.items(), start=1):
        told = kept | {"on": f"@day{day}", "batch": f"Run {batch}", "run": None, "position": None}
        for tube, texts in zip(("spike", "blank"), tubes, strict=True):
            for i, text in enumerate(texts):
                row = told | {"row": f"{tube}-{batch}-{i}", "tube": tube, "result": text and mg_l(text)}
                yield 24 * day + 9 + i / 100, "fenwright", "study.result", "study-1", row
    yield -58 * 24, "fenwright", "study.finished", "study-1", {"keep": False, "note": ""}
    row = kept | {"row": "blank-run-12", "tube": "blank", "on": "@day-6", "batch": "Run 12, high range"}
    row |= {"result": None, "run": "run-12", "position": 2}
    yield -119, "fenwright", "study.result", "study-1", row


def measured(codes: list[str]) -> Iterator[Statement]:
    """Yield what was measured beside the COD of two bottles."""
    for hours, code, how, species in (
        (-139.0, codes[2], "strip, and nitrite by photometer", {"chloride": "640", "nitrite": "3.2"}),
        (-138.9, codes[5], "chloride strip", {"chloride": "1150"}),
    ):
        given = {name: mg_l(text) for name, text in species.items()}
        body = {"bottle": code, "species": given, "how": how, "note": ""}
        yield hours, "calloway", "bottle.measured", code, body


def care() -> Iterator[Statement]:
    """Yield a probe in the block, a container that left last quarter, and another waste of the site."""
    probe: Body = {"what": "block temperature", "on": "@day-20", "wanted": "150", "water_c": None, "note": ""}
    found = {"found": ["150.6", "149.2"], "next_on": "@day10"}
    yield -480, "calloway", "instrument.checked", "block-1", probe | found
    container = {"name": "Container 11, acid COD digest", "capacity_ml": "5000"}
    yield -2400, "calloway", "container.opened", "container-11", container
    left: Body = {"to": "picked up", "on": "@day-40", "by": "Ridgeline Haulers", "manifest": "014-772"}
    yield -960, "calloway", "container.moved", "container-11", left | {"note": ""}
    other: Body = {"stream": "spent solvent, metals bench", "on": "@day-3", "acute": False, "note": ""}
    mass = {"mass": {"text": "3.2", "unit": "kg"}}
    yield -70, "calloway", "waste.added", "waste-1", other | mass
