"""The invented laboratory's earlier runs: one of its own pooled sample after another, with all controls.

Everything is invented. Twenty runs make the baselines of the control charts;
in the one after them the control fails with a cause that was found, and the
last two drift. Each statement is (hours before now, who, kind, about, body).
"""

from __future__ import annotations

import math
import random
from collections.abc import Iterator
from typing import Any

Body = dict[str, Any]
Statement = tuple[float, str, str, str, Body]

SLOPE, INTERCEPT, BLANK, CAPACITY = 3.803e-4, 2.5e-4, 0.011, 1000.07
POOLED = "3FGWMV"
POOLED_MG_L = 620.0
RUNS, BASELINE, FAILED = 24, 20, 20
CONTROL: Body = {"role": "control", "expected": "400", "source": "glucose and glutamic acid, weighed in May"}
SPIKE: Body = {"sample_ml": "50", "spike_ml": "1", "spike_mg_l": "10000"}
DILUTIONS = {2: (50, 100, 0.0005), 5: (20, 100, 0.0007), 10: (10, 100, 0.0009)}
CHARTS = ("bla", "ver", "con", "dup", "spi")
GATES = ("hood_on", "chloride_within_limit", "order_of_addition", "caps_tight")

rng = random.Random(20310604)


def au(text: str) -> Body:
    """Return an absorbance as it is typed."""
    return {"text": text, "unit": "AU"}


def absorbance(in_tube: float, scatter: float = 1.0) -> str:
    """Return what the photometer shows of a tube."""
    seen = in_tube + scatter * math.hypot(2.0, 0.008 * in_tube) * rng.gauss(0, 1)
    return f"{BLANK + INTERCEPT + SLOPE * max(0.0, seen) + 0.0003 * rng.gauss(0, 1):.4f}"


def reading(tube: Body, true: float, shift: float = 0.0) -> Body:
    """Return the reading of one tube of a rack; true is the COD of its sample as diluted."""
    made = tube.get("spike")
    in_tube = true
    if made:
        s, v, c = (float(made[name]) for name in ("sample_ml", "spike_ml", "spike_mg_l"))
        in_tube = (true * s + c * v) / (s + v)
    in_tube = {"blank": 0.0, "verification": 497.0, "control": 401.0 * (1 + shift)}.get(tube["role"], in_tube)
    text = (
        f"{BLANK + 0.0006 * rng.gauss(0, 1):.4f}"
        if tube["role"] == "blank"
        else absorbance(in_tube, 0.1 if shift and tube["role"] == "control" else 1.0)
    )
    colour = "olive" if in_tube > 0.6 * CAPACITY else "orange"
    return {"position": tube["position"], "absorbance": au(text), "colour": colour}


def rack(factor: int) -> list[Body]:
    """Return the tubes of a run of the pooled sample."""
    pipette, flask, u = DILUTIONS[factor]
    dilution = {"factor": factor, "steps": [{"pipette_ml": pipette, "flask_ml": flask}], "relative_u": u}
    of: Body = {"bottle": POOLED, "dilution": dilution | {"reason": "pooled sample of the laboratory"}}
    check: Body = {"role": "verification", "expected": "500"}
    blank: Body = {"role": "blank"}
    tubes: list[Body] = [blank] * 3 + [check, CONTROL] + [{"role": "sample"} | of] * 3
    tubes += [{"role": "duplicate"} | of, {"role": "spike", "spike": SPIKE} | of, check]
    return [{"position": i} | tube for i, tube in enumerate(tubes, start=1)]


NO_SPIKE = [{"role": "spike", "reason": "spiked in the control runs of this week"}]


def extra(tubes: list[Body]) -> list[Body]:
    """Return a control and a duplicate of the first sample for a rack."""
    first = next(tube for tube in tubes if tube["role"] == "sample")
    of = {"bottle": first["bottle"], "dilution": first["dilution"]}
    found: list[Body] = [CONTROL, {"role": "duplicate"} | of]
    return [{"position": len(tubes) + i} | tube for i, tube in enumerate(found, start=1)]


def diluted(tube: Body, true: dict[str, float]) -> float:
    """Return the COD that a tube's sample has after dilution; 0 where it has none."""
    return true[tube["bottle"]] / tube["dilution"]["factor"] if "bottle" in tube else 0.0


def shift_of(i: int) -> float:
    """Return how far a run's control is off: it fails once, and the last ones drift."""
    return {FAILED: 0.125, RUNS - 2: 0.0165, RUNS - 1: 0.0165}.get(i, 0.0)


def runs() -> Iterator[Statement]:
    """Yield the earlier runs, and the baselines after the twentieth."""
    chloride = {"text": "180", "unit": "mg/L"}
    body: Body = {"bottle": POOLED, "species": {"chloride": chloride}, "how": "chloride strip", "note": ""}
    yield -24 * 44.5, "fenwright", "bottle.measured", POOLED, body
    for i in range(RUNS):
        hours = -24 * (44 - 1.5 * i) + 0.0
        yield from run(i, hours)
        if i == BASELINE - 1:
            body = {"name": "first twenty runs", "spread": "standard deviation", "left_out": []}
            body |= {"first": "control-1", "last": f"control-{BASELINE}"}
            for chart in CHARTS:
                about = f"{chart}:high-range:photometer-2"
                yield hours + 8, "fenwright", "baseline.frozen", about, body


def run(i: int, hours: float) -> Iterator[Statement]:
    """Yield one run from the rack to the end."""
    id_, who, factor = f"control-{i + 1}", "fenwright", (2, 5, 10)[i % 3]
    tubes = rack(factor)
    body: Body = {"name": f"Control run {i + 1}", "recipe": "high-range", "lot": "lot-14"}
    body |= {"instrument": "photometer-2", "block": "block-1", "calibration": "curve-high"}
    yield hours, who, "run.planned", id_, body | {"container": "container-12", "tubes": tubes, "without": []}
    for k, gate in enumerate(GATES):
        yield hours + 0.1 + k / 50, who, "gate.confirmed", id_, {"gate": gate}
    hot = {"text": "150.2", "unit": "Cel"}
    yield hours + 0.2, who, "gate.confirmed", id_, {"gate": "block_at_temperature", "value": hot}
    started = {
        "started_at": f"@{hours + 0.25:.3f}",
        "minutes": 120,
        "temperature": {"text": "150", "unit": "Cel"},
    }
    yield hours + 0.25, who, "heating.started", id_, started
    ended = {"ended_at": f"@{hours + 2.25:.3f}", "complete": True, "reason": ""}
    yield hours + 2.25, who, "heating.ended", id_, ended
    yield hours + 2.8, who, "gate.confirmed", id_, {"gate": "cooling_done"}
    for tube in tubes:
        given = reading(tube, POOLED_MG_L / factor, shift_of(i))
        yield hours + 3 + tube["position"] / 100, who, "tube.read", id_, given
    yield hours + 3.5, who, "readings.finished", id_, {}
    yield hours + 3.6, who, "gate.confirmed", id_, {"gate": "waste_container"}
    yield hours + 3.7, who, "run.closed", id_, {"decisions": list(decisions(i))}
    accepted = {"decision": "accepted", "reason": ""}
    yield hours + 5, "ostby", "result.reviewed", f"{id_}:{POOLED}", accepted


def decisions(i: int) -> Iterator[Body]:
    """Yield what was decided about the control that failed."""
    if i == FAILED:
        why = "the control had stood open and had lost water; made anew, the next run holds"
        said = {"decision": "not used", "reason": why}
        yield said | {"what": "control", "subject": "position 5: 400 mg/L"}
        yield said | {"what": "control chart", "subject": "laboratory control, position 5"}
