"""Which browser is driven, and how it is started."""

from __future__ import annotations

import os
import shutil
from functools import cache
from typing import Any

NAMES = ("chromium", "chromium-browser", "google-chrome-stable", "google-chrome")

# The browser's own errands to the outside are switched off; what is tested stays as it is.
FLAGS = [
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-gpu",
    "--disable-quic",
    "--disable-sync",
    "--no-first-run",
]

PHONE: dict[str, Any] = {
    "viewport": {"width": 390, "height": 844},
    "device_scale_factor": 2,
    "has_touch": True,
    "is_mobile": True,
}
DESK: dict[str, Any] = {"viewport": {"width": 1280, "height": 800}}


@cache
def find() -> str | None:
    """Return the path of a Chromium, or None. ``WEIRBOOK_CHROMIUM`` names one outright."""
    named = os.environ.get("WEIRBOOK_CHROMIUM")
    return shutil.which(named) if named else next(filter(None, map(shutil.which, NAMES)), None)


def required() -> bool:
    """Tell whether a missing browser is a failure."""
    return os.environ.get("WEIRBOOK_BROWSER") == "required"
