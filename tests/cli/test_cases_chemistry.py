"""The outside cases of the chemistry verbs, run as a laboratory would: through the command line.

They lie in ``../shared`` beside the checkout and are no part of the project;
without that folder the tests are skipped, saying so.
"""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
VERBS = {"oxygen-demand", "recipe", "fit", "calculate", "detection-limit"}


def run_cases(shared: Path, *names: str, folder: Path | None = None) -> str:
    """Return what the runner of the cases prints; fail with it when a case misses."""
    command = [
        sys.executable,
        str(shared / "cases" / "run"),
        "--python",
        sys.executable,
        "--project",
        str(ROOT),
    ]
    if folder is not None:
        command += ["--dir", str(folder)]
    done = subprocess.run([*command, *names], capture_output=True, text=True, check=False, timeout=300)
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


@pytest.mark.published
@pytest.mark.parametrize("name", ["chemistry", "fit", "calculate", "detection"])
def test_outside_cases(shared: Path, name: str) -> None:
    cases = len((shared / "cases" / f"{name}.jsonl").read_text("utf-8").splitlines())
    assert f"{cases} passed, 0 failed" in run_cases(shared, name)


def test_outside_wrong_input(shared: Path, tmp_path: Path) -> None:
    lines = (shared / "cases" / "wrong_input.jsonl").read_text("utf-8").splitlines()
    mine = [line for line in lines if json.loads(line)["verb"] in VERBS]
    (tmp_path / "wrong.jsonl").write_text("\n".join(mine) + "\n", "utf-8")
    assert f"{len(mine)} passed, 0 failed" in run_cases(shared, folder=tmp_path)
