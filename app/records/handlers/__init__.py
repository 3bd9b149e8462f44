"""Handlers: what each kind of entry does to the records.

A handler gets a :class:`~app.records.change.Change` and puts records; it reads
no clock and computes nothing that could come out differently at a rebuild. An
entry that cannot come into force raises :class:`~app.records.change.Refused`.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from importlib import import_module
from pkgutil import iter_modules

from app.records.change import Change

Handler = Callable[[Change], None]

_handlers: dict[str, Handler] = {}


def handles(kind: str) -> Callable[[Handler], Handler]:
    """Declare the handler of a kind."""

    def declare(handler: Handler) -> Handler:
        _handlers[kind] = handler
        return handler

    return declare


def table() -> dict[str, Handler]:
    """Return all handlers by kind."""
    _load()
    return _handlers


@cache
def _load() -> None:
    for module in iter_modules(__path__):
        import_module(f"{__name__}.{module.name}")
