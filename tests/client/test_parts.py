"""The client's parts that need no browser, run by Node where there is one."""

from __future__ import annotations

import shutil
import subprocess
from pathlib import Path

import pytest

SUITES = sorted(Path(__file__).parent.glob("*.test.mjs"))


@pytest.mark.parametrize("suite", SUITES, ids=lambda path: path.name)
def test_the_suite_holds(suite: Path) -> None:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the client's own sums are not run")
    run = subprocess.run(
        [node, "--no-warnings", "--test", "--test-reporter=tap", str(suite)], capture_output=True, text=True
    )
    assert run.returncode == 0, run.stdout[-4000:] + run.stderr[-2000:]
    assert "# pass 0" not in run.stdout, "no test ran"


def test_there_are_suites() -> None:
    assert len(SUITES) >= 2
