"""``python -m app.vendoring``: fill ``static/vendor/`` if it is not as it should be.

``--renew`` states new digests after the versions in ``package.json`` and the
lock file have been changed on purpose.
"""

from __future__ import annotations

import argparse
import json
import os
import shutil
import sys
from collections.abc import Sequence
from pathlib import Path

from app.vendoring import modules, node

BUILD = modules.ROOT / "build" / "client"
AXE = BUILD / "node_modules" / "axe-core" / "axe.min.js"


def fetch() -> dict[str, bytes]:
    """Install the packages in a build folder and return the client's files."""
    BUILD.mkdir(parents=True, exist_ok=True)
    for name in ("package.json", "package-lock.json", ".npmrc"):
        shutil.copyfile(modules.HERE / name, BUILD / name)
    return modules.collect(node.clean_install(BUILD))


def write(files: dict[str, bytes], vendor: Path) -> None:
    """Put the files in place, each whole or not at all."""
    vendor.mkdir(parents=True, exist_ok=True)
    for name, data in files.items():
        part = vendor / f".{name}.part"
        part.write_bytes(data)
        os.replace(part, vendor / name)


def renew(files: dict[str, bytes]) -> None:
    """State the digests of these files as the expected ones."""
    modules.MANIFEST.write_text(json.dumps(modules.digests(files), indent=2) + "\n", "utf-8")


def bring(renewing: bool = False) -> str:
    """Fill ``static/vendor/`` and return one sentence about what was done."""
    if not renewing and AXE.is_file() and modules.installed() == modules.expected():
        return "The client's libraries are in place."
    files = fetch()
    if renewing:
        renew(files)
    wrong = modules.differences(modules.digests(files), modules.expected())
    if wrong:
        raise modules.VendoringError(
            f"These files are not what manifest.json expects, nothing was changed: {', '.join(wrong)}."
        )
    write(files, modules.VENDOR)
    return f"Brought the client's libraries: {len(modules.MODULES)} files in static/vendor."


def main(argv: Sequence[str] | None = None) -> int:
    """Run the tool and return the exit status."""
    parser = argparse.ArgumentParser(prog="python -m app.vendoring", description=__doc__)
    parser.add_argument("--renew", action="store_true", help="state new digests in manifest.json")
    try:
        print(bring(parser.parse_args(argv).renew))
    except modules.VendoringError as error:
        print(error.message, file=sys.stderr)
        return 1
    return 0


if __name__ == "__main__":
    raise SystemExit(main())
