"""The command contracts: JSON in, JSON out, the same sums as on the screens.

Each module of this package offers ``VERBS``, a mapping from a verb's name to a
function that takes the decoded JSON value and returns a JSON-ready dict. A
function validates with marshmallow (unknown keys are errors, all bad fields
are named at once) and raises :class:`app.errors.InputError`. Modules are
imported only when one of their verbs is called, so that a verb starts quickly.
"""

from __future__ import annotations

from collections.abc import Callable
from importlib import import_module
from typing import Any

Verb = Callable[[Any], dict[str, Any]]

MODULES: dict[str, str] = {
    "oxygen-demand": "chemistry",
    "recipe": "chemistry",
    "fit": "chemistry",
    "calculate": "chemistry",
    "detection-limit": "chemistry",
    "preparation": "preparation",
    "plan": "forecast",
    "learn": "forecast",
    "backtest": "forecast",
    "assess": "compliance",
    "load": "compliance",
    "bod-ratio": "compliance",
    "trend": "compliance",
}


def find(name: str) -> Verb:
    """Return the function behind a verb's name (a key of :data:`MODULES`)."""
    module = import_module(f"app.verbs.{MODULES[name]}")
    verb: Verb = module.VERBS[name]
    return verb
