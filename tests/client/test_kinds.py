"""The tablet states each kind in the version that the server knows as its newest."""

from __future__ import annotations

import json
import shutil
import subprocess
from pathlib import Path

import pytest

from app.journal import kinds

MODULE = Path(__file__).parents[2] / "static" / "parts" / "kinds.js"


def test_the_tablet_states_the_newest_version_of_every_kind() -> None:
    node = shutil.which("node")
    if node is None:
        pytest.skip("node is absent: the client's versions are not compared")
    names = [name for name, kind in kinds.table().items() if kind.roles != {kinds.SERVER}]
    script = (
        f'import {{ versionOf }} from "{MODULE.as_uri()}";'
        f"console.log(JSON.stringify({json.dumps(names)}.map(versionOf)))"
    )
    run = subprocess.run(
        [node, "--no-warnings", "--input-type=module", "-e", script],
        capture_output=True,
        text=True,
        check=True,
    )
    stated = dict(zip(names, json.loads(run.stdout), strict=True))
    assert stated == {name: kinds.table()[name].version for name in names}
