"""The vectors that the tablet's twin is held to, made by the server's side."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from app.forecast import Now, Observation, Posterior, Programme, Range, Sample, expected, plan, posterior

VECTORS = Path(__file__).with_name("vectors.json")
RANGE = Range("high", 20.0, 900.0, 1998.0, 20.0)
DILUTIONS = (1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0)


def history(n: int, level: float) -> list[Observation]:
    """Return a plausible past: a slow wave, readings that follow it, a bound now and then."""
    found = []
    for i in range(n):
        swing = 1.0 + 0.4 * ((i * 7) % 5 - 2) / 2
        state = "over" if i % 9 == 8 else "below" if i % 11 == 10 else "ok"
        readings = {
            "conductivity_us_cm": 900.0 * swing,
            "turbidity_ntu": 120.0 * swing**1.5,
            "ph": 7 + i % 3 / 5,
        }
        found.append(Observation(20000.0 + 17.3 * i, level * swing, state, readings if i % 4 else {}))
    return found


def cases() -> list[dict[str, Any]]:
    """Return packs with the moment's readings and what Python makes of them."""
    found = []
    for n, level, sector in (
        (0, 1.0, "dairy"),
        (1, 800.0, None),
        (6, 2300.0, "dairy"),
        (40, 310.0, "textile"),
    ):
        pack = posterior(Programme.default(), sector, history(n, level)).to_json()
        known = Posterior.from_json(pack)
        for readings in ({}, {"conductivity_us_cm": 1500.0, "ph": 6.1}, {"turbidity_ntu": 90000.0}):
            predictive = expected(known, Now(21000.0, readings, None))
            planned = plan(predictive, (RANGE,), DILUTIONS, Sample(3000.0, decision_limit=1500.0))
            found.append(
                {
                    "pack": pack,
                    "field": readings,
                    "quantiles": {p: predictive.quantile(float(p)) for p in ("0.05", "0.25", "0.5", "0.95")},
                    "cdf": {c: predictive.cdf(float(c)) for c in ("20", "900", "4500")},
                    "density": {x: predictive.density(float(x)) for x in ("4", "6.5", "9")},
                    "p_in_range": [one.p_in_range for one in planned.plans],
                    "p_over": [one.p_over for one in planned.plans],
                    "objections": [list(one.objections) for one in planned.plans],
                    "choice": planned.choice and planned.choice.dilution_factor,
                    "why": planned.why,
                }
            )
    return found


if __name__ == "__main__":
    VECTORS.write_text(json.dumps(cases(), indent=1) + "\n", encoding="utf-8")
