"""Ask the vulnerability service about every pinned package.

A known vulnerability fails. A service that cannot be reached, or that does
not know a package, is told in capitals and does not fail: a laboratory's
machine may have no such network, and silence must not look like a pass.
"""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path
from typing import Any

PINS = Path(__file__).resolve().parent / "constraints.txt"


def ask() -> list[dict[str, Any]] | None:
    """Return what the service says of each package, or None if it was not reached."""
    options = ["--no-deps", "--disable-pip", "--progress-spinner", "off", "--format", "json"]
    command = [sys.executable, "-m", "pip_audit", "-r", str(PINS), *options]
    done = subprocess.run(command, stdin=subprocess.DEVNULL, capture_output=True, text=True, check=False)
    try:
        found: list[dict[str, Any]] = json.loads(done.stdout)["dependencies"]
    except (ValueError, KeyError):
        return None
    return found


def main() -> int:
    """Tell what was found; 1 when something is known to be vulnerable."""
    answers = ask()
    if answers is None:
        print("AUDIT NOT DONE: THE VULNERABILITY SERVICE COULD NOT BE REACHED. No package was checked.")
        return 0
    total, unknown = len(answers), sum("skip_reason" in each for each in answers)
    bad = [each for each in answers if each.get("vulns")]
    if unknown:
        print(f"AUDIT INCOMPLETE: {unknown} OF {total} PACKAGES ARE UNKNOWN TO THE VULNERABILITY SERVICE.")
    for each in bad:
        print(f"VULNERABLE: {each['name']} {each['version']}: {', '.join(v['id'] for v in each['vulns'])}")
    print(f"audit: {total - unknown} of {total} pinned packages were checked, {len(bad)} vulnerable")
    return 1 if bad else 0


if __name__ == "__main__":
    raise SystemExit(main())
