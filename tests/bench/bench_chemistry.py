"""How fast the sums are: ``python -m tests.bench.bench_chemistry``.

Ratios are measured side by side in one run, interleaved, so that another
load on the machine strikes both sides alike. ``calculate`` goes through the
command line with its start-up; ``fit`` stands beside a bare NumPy least squares
that gives the same outputs.
"""

from __future__ import annotations

import json
import math
import random
import subprocess
import sys
import time
from collections.abc import Callable, Iterator, Sequence
from pathlib import Path
from typing import Any

import numpy as np
from scipy import special

from app.chemistry.calibration import Standard, fit

ROOT = Path(__file__).resolve().parents[2]
RUNS = 1500
LEVELS = (0.0, 50.0, 100.0, 250.0, 500.0, 750.0, 900.0)
READS = ([0.2002], [0.1999, 0.1989, 0.1992])


def standards(rng: random.Random, replicates: int, levels: Sequence[float] = LEVELS) -> list[dict[str, Any]]:
    """Return invented standards."""
    return [
        {"cod": x, "absorbance": [round(3.8e-4 * x + rng.gauss(0, 8e-4), 4) for _ in range(replicates)]}
        for x in levels
    ]


def one_run(rng: random.Random, samples: int, tubes: int) -> dict[str, Any]:
    """Return an invented run of some samples with some tubes each."""
    rows = []
    for i in range(samples):
        cod = rng.uniform(30, 850)
        sigma = math.hypot(4.0, 0.025 * cod)
        absorbance = [round(0.011 + 3.8e-4 * rng.gauss(cod, sigma), 4) for _ in range(tubes)]
        rows.append(
            {
                "sample": f"S{i}",
                "absorbance": absorbance,
                "dilution_factor": rng.choice([1, 2, 5, 10]),
                "dilution_relative_u": 0.004,
                "colour": "orange",
                "remaining_oxidant": 0.4,
            }
        )
    return {
        "recipe": {
            "sample_ml": 2.5,
            "digestion_solution_ml": 1.5,
            "acid_reagent_ml": 3.5,
            "dichromate_g_per_l": 10.216,
            "mercury_sulfate_g_per_l": 33.3,
            "silver_sulfate_g_per_l": 10.12,
            "wavelength_nm": 600,
        },
        "calibration": {"standards": standards(rng, 2), "model": "linear", "standards_relative_u": 0.005},
        "working_range": [20, 900],
        "blanks": [0.011, 0.010, 0.012],
        "tubes": rows,
        "verifications": [{"expected": 500, "absorbance": [0.201]}],
        "duplicates": [["S0", "S1"]],
        "spikes": [{"unspiked": "S2", "spiked": "S3", "sample_ml": 50, "spike_ml": 1, "spike_mg_l": 10000}],
        "policy": {
            "repeatability": {"a": 4, "k": 0.025, "dof": 40},
            "bias_relative_u": 0.02,
            "bias_dof": 11,
            "verification_percent": 10,
            "duplicate_rpd_percent": 20,
            "spike_percent": [90, 110],
        },
    }


def bare_numpy(x: Any, y: Any, reads: Sequence[Sequence[float]], degree: int) -> dict[str, Any]:
    """Return what ``fit`` returns, by textbook NumPy: one design matrix, one inverse, no checks."""
    design = np.vander(x, degree + 1, increasing=True)
    inverse = np.linalg.inv(design.T @ design)
    beta = np.linalg.lstsq(design, y, rcond=None)[0]
    n, dof = len(x), len(x) - degree - 1
    rest = y - design @ beta
    sse = float(rest @ rest)
    s = math.sqrt(sse / dof)
    levels, where = np.unique(x, return_inverse=True)
    means = np.bincount(where, y) / np.bincount(where)
    pure = float(((y - means[where]) ** 2).sum())
    k = len(levels)
    lack = (sse - pure) / (k - degree - 1) / (pure / (n - k)) if n > k else None
    both = []
    for d in (1, 2):
        wide = np.vander(x, d + 1, increasing=True)
        left = y - wide @ np.linalg.lstsq(wide, y, rcond=None)[0]
        both.append(float(left @ left))
    mandel = (both[0] - both[1]) / (both[1] / (n - 3))
    t = special.stdtrit(dof, 0.975)
    back = _invert(beta, y)
    keep = x > 0
    read = []
    for values in reads:
        at = float(_invert(beta, np.array([np.mean(values)]))[0])
        row = np.vander([at], degree + 1, increasing=True)[0]
        slope = beta[1] + (2 * beta[2] * at if degree == 2 else 0.0)
        u = math.sqrt(s * s / len(values) + s * s * row @ inverse @ row) / abs(slope)
        read.append((at, u, dof, at - t * u, at + t * u))
    level_back = _invert(beta, means)
    return {
        "coefficients": beta.tolist(),
        "standard_errors": (s * np.sqrt(np.diag(inverse))).tolist(),
        "residual_sd": s,
        "r_squared": 1 - sse / float(((y - y.mean()) ** 2).sum()),
        "lack_of_fit": None if lack is None else (lack, special.fdtrc(k - degree - 1, n - k, lack)),
        "mandel": (mandel, special.fdtrc(1, n - 3, mandel)),
        "rse": 100 * math.sqrt((((back - x)[keep] / x[keep]) ** 2).sum() / (keep.sum() - degree - 1)),
        "standards": list(zip(levels.tolist(), means.tolist(), level_back.tolist(), strict=True)),
        "read": read,
    }


def _invert(beta: Any, y: Any) -> Any:
    if len(beta) == 2:
        return (y - beta[0]) / beta[1]
    return (-beta[1] + np.sqrt(beta[1] ** 2 - 4 * beta[2] * (beta[0] - y))) / (2 * beta[2])


def side_by_side(
    ours: Callable[[], Any], theirs: Callable[[], Any], rounds: int = 40, each: int = 60
) -> tuple[float, float]:
    """Return the best seconds a call of two functions, measured in turns."""
    best = [math.inf, math.inf]
    for _ in range(rounds):
        for which, function in enumerate((ours, theirs)):
            start = time.perf_counter()
            for _ in range(each):
                function()
            best[which] = min(best[which], (time.perf_counter() - start) / each)
    return best[0], best[1]


def fit_times() -> Iterator[tuple[str, int, float, float]]:
    """Yield model, readings, and the seconds of ``fit`` and of bare NumPy for the same outputs."""
    rng = random.Random(3)
    for replicates, model, degree in (
        (1, "linear", 1),
        (2, "linear", 1),
        (2, "quadratic", 2),
        (6, "quadratic", 2),
    ):
        rows = [Standard(s["cod"], tuple(s["absorbance"])) for s in standards(rng, replicates)]
        x = np.array([s.cod for s in rows for _ in s.absorbance])
        y = np.array([a for s in rows for a in s.absorbance])

        def ours(rows: list[Standard] = rows, model: Any = model) -> list[Any]:
            curve = fit(rows, model)
            return [curve.read(values) for values in READS]

        def theirs(x: Any = x, y: Any = y, degree: int = degree) -> dict[str, Any]:
            return bare_numpy(x, y, READS, degree)

        yield model, len(x), *side_by_side(ours, theirs)


def bench_fit() -> None:
    """Print the ratio of ``fit`` to bare NumPy."""
    for model, n, mine, bare in fit_times():
        times = f"{mine * 1e6:6.0f} us, bare numpy {bare * 1e6:6.0f} us, {mine / bare:.2f} x"
        print(f"fit {model:9} n={n:3}: {times} (at most 1.50)")


def bench_calculate() -> None:
    """Print runs a second of ``calculate --lines``, start-up included."""
    for samples, tubes in ((25, 1), (25, 3), (8, 3)):
        rng = random.Random(samples)
        text = "".join(json.dumps(one_run(rng, samples, tubes)) + "\n" for _ in range(RUNS))
        start = time.perf_counter()
        done = subprocess.run(
            [sys.executable, "-m", "app", "calculate", "--lines"],
            input=text,
            capture_output=True,
            text=True,
            check=True,
            cwd=ROOT,
        )
        spent = time.perf_counter() - start
        answers = done.stdout.splitlines()
        assert len(answers) == RUNS
        assert all(line.startswith('{"samples"') for line in answers)
        rate = f"{RUNS / spent:.0f} runs/s (at least 300 for 25 tubes)"
        print(f"calculate {samples} samples x {tubes} tubes: {rate}")


if __name__ == "__main__":
    bench_fit()
    bench_calculate()
