"""Makes history.csv and story.json from programme.json, the same every time.

Everything is invented. Run it from this folder after changing programme.json:
``python make.py``. Moments are hours from the moment at which the scenario is
told: ``"@-26.5"`` is a moment, ``"@day-30"`` a day.
"""

from __future__ import annotations

import csv
import json
import math
import random
from pathlib import Path
from typing import Any

import controls
import fieldwork
import laboratory
from fieldwork import measured

HERE = Path(__file__).resolve().parent
DAYS = 730
SLOPE, INTERCEPT, BLANK = 3.803e-4, 2.5e-4, 0.011
CAPACITY = 1000.07
GLASS: dict[int, list[tuple[int, int]]] = {
    1: [],
    2: [(50, 100)],
    4: [(25, 100)],
    5: [(20, 100)],
    10: [(10, 100)],
    20: [(5, 100)],
    50: [(5, 250)],
}
RELATIVE_U = {1: 0.0, 2: 0.0005, 4: 0.0006, 5: 0.0007, 10: 0.0009, 20: 0.0009, 50: 0.0009}

rng = random.Random(20310601)
Body = dict[str, Any]


def cod_of(point: Body, days_ago: float, noise: float) -> float:
    """Return a plausible COD: level, trend, season, scatter."""
    shape = point["history"]
    years = (DAYS - days_ago) / 365.25
    season = shape.get("season", 0.0) * math.sin(2 * math.pi * (days_ago / 365.25))
    log = math.log(shape["median"]) + shape.get("trend", 0.0) * years + season + shape["spread"] * noise
    return math.exp(log)


def three(value: float) -> str:
    """Return a number with three significant figures, as it would be typed."""
    digits = max(0, 2 - math.floor(math.log10(value)))
    step = 10 ** (math.floor(math.log10(value)) - 2)
    return f"{round(value / step) * step:.{digits}f}" if value < 100 else f"{round(value / step) * step:.0f}"


def typed(point: Body, cod: float) -> str:
    """Return a result as the laboratory's book has it, a bound where it was one."""
    top, floor = point["history"].get("top", 1e9), point["history"].get("floor", 20)
    if cod > top:
        return f"> {three(top)}"
    return f"< {floor}" if cod < floor else three(cod)


def readings_of(point: Body, noise: float) -> dict[str, str]:
    """Return conductivity, turbidity and pH that go with a sample's strength."""
    shape = point["history"]
    conductivity = shape["conductivity"] * math.exp(0.45 * shape["spread"] * noise + 0.08 * rng.gauss(0, 1))
    turbidity = shape["turbidity"] * math.exp(0.8 * shape["spread"] * noise + 0.15 * rng.gauss(0, 1))
    return {
        "conductivity": f"{conductivity:.0f}",
        "turbidity": f"{turbidity:.0f}",
        "ph": f"{shape['ph'] + 0.25 * rng.gauss(0, 1):.1f}",
    }


def history(points: list[Body]) -> list[Body]:
    """Return two years of results, oldest first, with a bound now and then."""
    rows = []
    for point in points:
        day = float(DAYS - rng.randint(0, 12))
        while day > 8:
            noise = rng.gauss(0, 1)
            cod = cod_of(point, day, noise)
            activity = "cleaning" if noise > 1.2 else "idle" if noise < -1.6 else "production"
            row = {"point": point["id"], "days_ago": f"{day:.2f}", "cod": typed(point, cod)}
            rows.append(row | {"activity": activity} | readings_of(point, noise))
            day -= point["history"]["every"] * rng.uniform(0.75, 1.3)
    return sorted(rows, key=lambda row: (-float(row["days_ago"]), row["point"]))


class Story:
    """Statements in order, each by somebody at some hour."""

    def __init__(self) -> None:
        self.told: list[Body] = []

    def tell(self, hours: float, by: str, kind: str, about: str, body: Body) -> None:
        """Add one statement; hours are negative before now."""
        self.told.append({"hours": round(hours, 3), "by": by, "kind": kind, "about": about, "body": body})


def sample(story: Story, hours: float, point: Body, code: str, factor: int, note: str = "") -> float:
    """Tell a sample and return its true COD."""
    noise = rng.gauss(0, 0.7)
    read = readings_of(point, noise)
    cod = cod_of(point, -hours / 24, noise)
    body = {
        "point": point["id"],
        "visit": None,
        "purpose": "sample",
        "of": None,
        "bottle": code,
        "sample_kind": "grab",
        "collected_at": f"@{hours:.2f}",
        "composite": None,
        "meter": None,
        "field": {
            "conductivity_us_cm": measured(read["conductivity"], "uS/cm"),
            "turbidity_ntu": measured(read["turbidity"], "NTU"),
            "ph": measured(read["ph"], "pH"),
        },
        "activity": "production",
        "appearance": point["history"].get("looks", "cloudy"),
        "preservation": {"acid": True, "ph": measured("< 2", "pH"), "cooled": True},
        "plan": plan(factor),
        "note": note,
    }
    story.tell(hours + 0.1, "teague", "sample.taken", f"sample-{code}", body)
    return cod


def plan(factor: int) -> Body:
    """Return a dilution as it was settled at the manhole."""
    return {
        "recipe": "high-range",
        "dilution_factor": factor,
        "steps": glass(factor),
        "p_in_range": None,
        "median": None,
        "low": None,
        "high": None,
        "reason": "as for this point's last samples",
        "chosen_by": "person",
    }


def hand_over(story: Story, hours: float, about: str, codes: list[str], seal: str, celsius: str) -> None:
    """Tell a hand-over to the laboratory's refrigerator."""
    body: Body = {"bottles": codes, "to": "laboratory refrigerator", "to_kind": "place", "seal": seal}
    body |= {"given": None, "taken": None, "note": ""}
    body["temperature"] = measured(celsius, "Cel")
    story.tell(hours, "teague", "custody.handed_over", about, body)


def receive(story: Story, hours: float, code: str, warm: bool = False) -> None:
    """Tell a receipt; a warm one is qualified."""
    body = {
        "bottle": code,
        "temperature": measured("8.1" if warm else f"{rng.uniform(2.5, 5.2):.1f}", "Cel"),
        "ph": measured("1.7", "pH"),
        "seal": "intact",
        "container": "sound",
        "label_agrees": True,
        "decision": "qualified" if warm else "accepted",
        "reasons": ["8.1 °C on receipt, above 6 °C"] if warm else [],
        "note": "ice had melted" if warm else "",
    }
    story.tell(hours, "calloway", "bottle.received", code, body)


def absorbance(in_tube: float) -> str:
    """Return what the photometer shows of a tube; an exhausted one stays at the recipe's capacity."""
    seen = min(in_tube, CAPACITY)
    scatter = math.hypot(2.0, 0.008 * seen) * rng.gauss(0, 1)
    return f"{BLANK + INTERCEPT + SLOPE * max(0.0, seen + scatter) + 0.0003 * rng.gauss(0, 1):.4f}"


def colour(in_tube: float) -> str:
    """Return the colour that a person sees."""
    share = in_tube / CAPACITY
    return "green" if share > 0.93 else "olive" if share > 0.6 else "orange"


def glass(factor: int) -> list[Body]:
    """Return the steps of a dilution."""
    return [{"pipette_ml": a, "flask_ml": b} for a, b in GLASS[factor]]


def planned(
    story: Story, hours: float, run: str, name: str, bottles: dict[str, int], checks: int
) -> list[Body]:
    """Tell a run's rack and return its tubes."""
    tubes: list[Body] = [{"position": i, "role": "blank"} for i in (1, 2, 3)]
    tubes += [{"position": 4 + i, "role": "verification", "expected": "500"} for i in range(checks)]
    for code, factor in bottles.items():
        dilution = {"factor": factor, "steps": glass(factor), "relative_u": RELATIVE_U[factor]}
        dilution["reason"] = "as planned at the manhole"
        tube = {"role": "sample", "bottle": code, "dilution": dilution}
        start = len(tubes) + 1
        tubes += [{"position": start + i} | tube for i in range(3)]
    tubes += controls.extra(tubes)
    body = {
        "without": controls.NO_SPIKE,
        "name": name,
        "recipe": "high-range",
        "lot": "lot-14",
        "instrument": "photometer-2",
        "block": "block-1",
        "calibration": "curve-high",
        "container": "container-12",
        "tubes": tubes,
    }
    story.tell(hours, "calloway", "run.planned", run, body)
    for i, gate in enumerate(("hood_on", "chloride_within_limit", "order_of_addition", "caps_tight")):
        story.tell(hours + 0.05 + i / 20, "calloway", "gate.confirmed", run, {"gate": gate})
    return tubes


def heat(story: Story, hours: float, run: str) -> None:
    """Tell that the block is hot and the heating starts."""
    hot = {"gate": "block_at_temperature", "value": measured("150.6", "Cel")}
    story.tell(hours - 0.02, "calloway", "gate.confirmed", run, hot)
    started = {"started_at": f"@{hours:.3f}", "minutes": 120, "temperature": measured("150", "Cel")}
    story.tell(hours, "calloway", "heating.started", run, started)


def read(
    story: Story, hours: float, run: str, tubes: list[Body], true: dict[str, float], leaked: int
) -> None:
    """Tell every reading; one tube leaked and is left out for that cause."""
    ended = {"ended_at": f"@{hours:.3f}", "complete": True, "reason": ""}
    story.tell(hours, "calloway", "heating.ended", run, ended)
    story.tell(hours + 0.5, "calloway", "gate.confirmed", run, {"gate": "cooling_done"})
    for tube in tubes:
        if tube["role"] in ("control", "duplicate"):
            body = controls.reading(tube, controls.diluted(tube, true), 0.0165)
            story.tell(hours + 0.6 + tube["position"] / 100, "calloway", "tube.read", run, body)
            continue
        cod = {"blank": 0.0, "verification": 495.0}.get(tube["role"])
        in_tube = true[tube["bottle"]] / tube["dilution"]["factor"] if cod is None else cod
        shown = in_tube * (0.62 if tube["position"] == leaked else 1.0)
        text = f"{BLANK + 0.0006 * rng.gauss(0, 1):.4f}" if tube["role"] == "blank" else absorbance(shown)
        body = {"position": tube["position"], "absorbance": measured(text, "AU"), "colour": colour(shown)}
        story.tell(hours + 0.6 + tube["position"] / 100, "calloway", "tube.read", run, body)
    body = {"position": leaked, "cause": "cap leaked", "note": "level lower than its neighbours"}
    story.tell(hours + 0.9, "calloway", "tube.excluded", run, body)
    story.tell(hours + 1.0, "calloway", "readings.finished", run, {})


def close(story: Story, hours: float, run: str, over: str) -> None:
    """Tell that the run is closed: the sample over range is repeated."""
    story.tell(hours, "calloway", "gate.confirmed", run, {"gate": "waste_container"})
    decision = {"what": "over", "subject": over, "decision": "repeat"}
    decision["reason"] = "all three tubes went green; repeat at 1:50"
    story.tell(hours + 0.1, "calloway", "run.closed", run, {"decisions": [decision]})


def story_of(points: dict[str, Body], codes: list[str]) -> list[Body]:
    """Return the last days, from a closed run to this morning's bottles."""
    story = Story()
    first = ["hollin-b", "brackwater-a", "corrie-a", "ousel-c", "pell-a", "tarn-1"]
    factors = {"hollin-b": 5, "brackwater-a": 2, "corrie-a": 4, "ousel-c": 10, "pell-a": 5, "tarn-1": 1}
    true: dict[str, float] = {}
    for i, name in enumerate(first):
        true[codes[i]] = sample(story, -146 + 0.6 * i, points[name], codes[i], factors[name])
    true[codes[3]] = 11800.0
    hand_over(story, -141, "hand-1", codes[:6], "4471", "3.4")
    for i in range(6):
        receive(story, -140.5 + i / 20, codes[i], warm=i == 4)
    for one in (*laboratory.study(), *laboratory.measured(codes), *controls.runs()):
        story.tell(*one)
    bottles = {codes[i]: factors[name] for i, name in enumerate(first)}
    tubes = planned(story, -124, "run-12", "Run 12, high range", bottles, 2)
    heat(story, -123.5, "run-12")
    read(story, -121.45, "run-12", tubes, true, leaked=11)
    close(story, -120, "run-12", codes[3])
    for code in (codes[0], codes[1], codes[2]):
        story.tell(-98, "ostby", "result.reviewed", f"run-12:{code}", {"decision": "accepted", "reason": ""})
    second = {codes[3]: 50, codes[6]: 10, codes[7]: 2, codes[8]: 5}
    for i, (name, factor) in enumerate((("quarrel-1", 10), ("larch-a", 2), ("wend-b", 5))):
        sample(story, -27 + 0.7 * i, points[name], codes[6 + i], factor)
    hand_over(story, -23.5, "hand-2", codes[6:9], "4475", "4.0")
    for i in range(6, 9):
        receive(story, -22 + i / 20, codes[i])
    planned(story, -2.2, "run-13", "Run 13, high range", second, 1)
    heat(story, -1.25, "run-13")
    for i, (name, factor) in enumerate((("hollin-b", 5), ("marl-2", 20), ("sable-a", 1))):
        sample(story, -6 + 1.2 * i, points[name], codes[9 + i], factor, "white foam" if i == 0 else "")
        story.told[-1]["body"] |= {"visit": f"visit-{name}", "meter": "meter-4"}
    hand_over(story, -2.4, "hand-3", codes[9:10], "4480", "4.4")
    sample(story, -0.6, points["wend-b"], codes[9], 5, "label read in the rain")
    story.told[-1]["about"] = "sample-twice"
    fieldwork.round_of_today(story, f"sample-{codes[9]}")
    for one in laboratory.care():
        story.tell(*one)
    return sorted(story.told, key=lambda one: one["hours"])


def main() -> None:
    """Write both files."""
    programme = json.loads((HERE / "programme.json").read_text(encoding="utf-8"))
    points = [point for one in programme["dischargers"] for point in one["points"]]
    with (HERE / "history.csv").open("w", encoding="utf-8", newline="") as file:
        rows = history(points)
        writer = csv.DictWriter(file, list(rows[0]), lineterminator="\n")
        writer.writeheader()
        writer.writerows(rows)
    story = story_of({point["id"]: point for point in points}, programme["codes"])
    lines = ",\n".join(json.dumps(one, ensure_ascii=False) for one in story)
    (HERE / "story.json").write_text(f"[\n{lines}\n]\n", encoding="utf-8")


if __name__ == "__main__":
    main()
