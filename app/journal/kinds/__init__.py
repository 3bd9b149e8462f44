"""Every kind of entry: its newest version, who may state it, and what its body holds.

To add a kind, declare a :class:`Body` with :func:`kind` in the module of its
subject and give it a handler in :mod:`app.records.handlers`. A changed body
is a new version: raise the number and add an upcaster with :func:`upcaster`,
so that old entries are read for ever.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from importlib import import_module
from pkgutil import iter_modules
from typing import Any

from marshmallow import RAISE, Schema, ValidationError

from app.errors import InputError, flatten

INSPECTOR, ANALYST, COORDINATOR, ADMINISTRATOR = "inspector", "analyst", "coordinator", "administrator"
ROLES = (INSPECTOR, ANALYST, COORDINATOR, ADMINISTRATOR)
SERVER = "server"


class Body(Schema):
    """Base of the bodies: an unknown key is an error."""

    class Meta:
        """An unknown key is an error."""

        unknown = RAISE


@dataclass(frozen=True)
class Kind:
    """One kind of entry.

    Attributes
    ----------
    roles : frozenset of str
        Who may state it; ``server`` alone means that no device may.
    """

    name: str
    version: int
    roles: frozenset[str]
    body: Schema


Upcaster = Callable[[dict[str, Any]], dict[str, Any]]
_kinds: dict[str, Kind] = {}
_upcasters: dict[tuple[str, int], Upcaster] = {}


def kind(name: str, *roles: str, version: int = 1) -> Callable[[type[Body]], type[Body]]:
    """Declare a kind by its body, its newest version and who may state it."""

    def declare(body: type[Body]) -> type[Body]:
        _kinds[name] = Kind(name, version, frozenset(roles), body())
        return body

    return declare


def upcaster(name: str, version: int) -> Callable[[Upcaster], Upcaster]:
    """Declare how a body of ``version`` becomes one of ``version + 1``."""

    def declare(function: Upcaster) -> Upcaster:
        _upcasters[name, version] = function
        return function

    return declare


def table() -> dict[str, Kind]:
    """Return all kinds by name."""
    _load()
    return _kinds


@cache
def _load() -> None:
    for module in iter_modules(__path__):
        import_module(f"{__name__}.{module.name}")


def newest(name: str, version: int, body: dict[str, Any]) -> dict[str, Any]:
    """Return a body as its kind's newest version has it.

    Raises
    ------
    KeyError
        If the kind is not known here.
    """
    for step in range(version, table()[name].version):
        body = _upcasters[name, step](body)
    return body


def check(name: str, body: dict[str, Any]) -> None:
    """Hold a body of the newest version to its kind's schema.

    Raises
    ------
    InputError
        Naming every bad field at once.
    """
    try:
        table()[name].body.load(body)
    except ValidationError as error:
        raise InputError("Some of this entry cannot be used as it stands.", flatten(error.messages)) from None
