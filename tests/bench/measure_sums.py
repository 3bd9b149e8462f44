"""The sums on the command line: how many lines a second one process answers, its start not counted."""

from __future__ import annotations

import json
import random
import subprocess
import sys
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from tests.bench.bench_chemistry import fit_times, one_run
from tests.bench.measure import Measure

ROOT = Path(__file__).resolve().parents[2]
LINES = 600

STANDARDS = [
    {"cod": cod, "absorbance": [round(cod * 3.8e-4 + wobble, 4) for wobble in (0.0, 0.001, -0.001)]}
    for cod in (0, 100, 250, 500, 750, 900)
]
RECIPE = {
    "sample_ml": 2.5,
    "digestion_solution_ml": 1.5,
    "acid_reagent_ml": 3.5,
    "dichromate_g_per_l": 10.216,
    "mercury_sulfate_g_per_l": 33.3,
    "silver_sulfate_g_per_l": 10.12,
    "wavelength_nm": 600,
}


def run_of_25_tubes() -> dict[str, Any]:
    """Return a full block: three blanks, one verification, seven samples in triplicate."""
    tubes = [
        {
            "sample": f"S{number}",
            "absorbance": [round(0.05 + 0.03 * number + wobble, 3) for wobble in (0.0, 0.001, -0.001)],
            "dilution_factor": 10,
            "dilution_relative_u": 0.004,
        }
        for number in range(1, 8)
    ]
    return {
        "recipe": RECIPE,
        "calibration": {"standards": STANDARDS, "model": "linear", "standards_relative_u": 0.005},
        "working_range": [20, 900],
        "blanks": [0.011, 0.010, 0.012],
        "tubes": tubes,
        "verifications": [{"expected": 500, "absorbance": [0.2]}],
        "duplicates": [["S1", "S2"]],
        "spikes": [],
        "policy": {
            "repeatability": {"a": 4, "k": 0.025, "dof": 40},
            "bias_relative_u": 0.02,
            "bias_dof": 11,
            "verification_percent": 10,
            "duplicate_rpd_percent": 20,
            "spike_percent": [90, 110],
        },
    }


def seconds(verb: str, line: dict[str, Any], count: int) -> float:
    """Return how long a fresh process takes for equal lines; refuse a wrong answer."""
    command = [sys.executable, "-m", "app", verb, "--lines"]
    began = time.perf_counter()
    done = subprocess.run(
        command,
        cwd=ROOT,
        input=(json.dumps(line) + "\n") * count,
        capture_output=True,
        text=True,
        check=False,
    )
    took = time.perf_counter() - began
    if done.returncode or len(done.stdout.splitlines()) != count:
        raise RuntimeError(
            f"{verb} did not answer what it was timed on:\n{done.stdout[:500]}{done.stderr[-500:]}"
        )
    return took


def lines_a_second(verb: str, line: dict[str, Any]) -> float:
    """Return the pace of a verb once it runs: the time for one line is taken off."""
    return LINES / (seconds(verb, line, LINES + 1) - seconds(verb, line, 1))


def measures() -> Iterator[Measure]:
    """Time a whole run of 25 tubes, as triplicates and as 25 samples, and the fit beside bare NumPy."""
    worst = max(mine / bare for _, _, mine, bare in fit_times())
    yield Measure("fit / bare NumPy with the same outputs, worst case", worst, 1.5, "x", more_is_better=False)
    yield Measure(
        "calculate, a run of 25 tubes, one core",
        lines_a_second("calculate", run_of_25_tubes()),
        300,
        "lines/s",
    )
    yield Measure(
        "calculate, 25 samples of one tube, one core",
        lines_a_second("calculate", one_run(random.Random(25), 25, 1)),
        300,
        "lines/s",
    )
