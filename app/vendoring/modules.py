"""Which modules the client uses, and the changes made to them."""

from __future__ import annotations

import hashlib
import json
import re
from dataclasses import dataclass
from pathlib import Path

from app.errors import WeirbookError

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
VENDOR = ROOT / "static" / "vendor"
MANIFEST = HERE / "manifest.json"
LICENCES = "LICENCES.txt"


class VendoringError(WeirbookError):
    """The client's libraries could not be brought; what was there is untouched."""

    code = "vendoring"


@dataclass(frozen=True)
class Module:
    """One module of a package, the name it is imported by and its name here."""

    specifier: str
    package: str
    path: str
    name: str


MODULES = (
    Module("preact", "preact", "dist/preact.mjs", "preact.js"),
    Module("preact/hooks", "preact", "hooks/dist/hooks.mjs", "hooks.js"),
    Module("htm", "htm", "dist/htm.mjs", "htm.js"),
    Module("htm/preact", "htm", "preact/index.mjs", "htm-preact.js"),
    Module("idb", "idb", "build/index.js", "idb.js"),
)
NAMES = {module.specifier: module.name for module in MODULES}

_IMPORT = re.compile(r"""\b(from|import)(\s*)(["'])([^"']+)\3""")
_SOURCE_MAP = re.compile(r"^//# sourceMappingURL=.*\n?", re.MULTILINE)


def rewrite(source: str) -> str:
    """Return a module's text with relative imports and without its source map."""

    def relative(match: re.Match[str]) -> str:
        word, space, quote, specifier = match.groups()
        if specifier.startswith("./"):
            return match[0]
        if specifier not in NAMES:
            raise VendoringError(f"The module imports {specifier!r}, which is not one of the client's.")
        return f"{word}{space}{quote}./{NAMES[specifier]}{quote}"

    return _SOURCE_MAP.sub("", _IMPORT.sub(relative, source))


def collect(node_modules: Path) -> dict[str, bytes]:
    """Return the files for ``static/vendor/`` by name, made from the packages."""
    files = {
        module.name: rewrite((node_modules / module.package / module.path).read_text("utf-8")).encode()
        for module in MODULES
    }
    packages = sorted({module.package for module in MODULES})
    files[LICENCES] = "\n\n".join(_licence(node_modules / package) for package in packages).encode()
    return files


def _licence(package: Path) -> str:
    about = json.loads((package / "package.json").read_text("utf-8"))
    title = f"{about['name']} {about['version']} ({about['license']})"
    text = (package / "LICENSE").read_text("utf-8").strip()
    return f"{title}\n{'=' * len(title)}\n\n{text}\n"


def digests(files: dict[str, bytes]) -> dict[str, str]:
    """Return the SHA-256 of each file."""
    return {name: hashlib.sha256(data).hexdigest() for name, data in sorted(files.items())}


def expected() -> dict[str, str]:
    """Return the digests of the committed manifest."""
    found: dict[str, str] = json.loads(MANIFEST.read_text("utf-8"))
    return found


def differences(have: dict[str, str], want: dict[str, str]) -> list[str]:
    """Name the files that are missing, unknown or not what was expected."""
    return sorted(name for name in have.keys() | want.keys() if have.get(name) != want.get(name))


def installed(vendor: Path = VENDOR) -> dict[str, str]:
    """Return the digests of what stands in ``static/vendor/`` now."""
    return digests({name: (vendor / name).read_bytes() for name in expected() if (vendor / name).is_file()})
