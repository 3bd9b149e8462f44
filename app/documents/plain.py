"""Frozen dataclasses from plain JSON: strict, and naming every wrong place at once."""

from __future__ import annotations

import types
import typing
from dataclasses import MISSING, fields, is_dataclass
from typing import Any, Literal

from app.errors import Fields


def build(kind: Any, value: Any, path: str, wrong: Fields) -> Any:
    """Return a value as the annotated type.

    Parameters
    ----------
    kind : type
        A dataclass, ``tuple[...]``, ``X | None``, a ``Literal``, or a plain type; a
        float may come as a whole number, and a field with a default may be absent: data
        written before it was known have none.
    value : object
        Plain JSON.
    path : str
        Dotted path of the value, for the words about it.
    wrong : dict
        Collects what does not fit, by path.

    Returns
    -------
    object
        None where it did not fit.
    """
    origin, inner = typing.get_origin(kind), typing.get_args(kind)
    if is_dataclass(kind) and isinstance(value, dict):
        return _build_dataclass(kind, value, path, wrong)
    if origin is types.UnionType:
        if value is None and type(None) in inner:
            return None
        return build(next(k for k in inner if k is not type(None)), value, path, wrong)
    if origin is tuple and isinstance(value, list):
        kinds = inner[:1] * len(value) if inner[-1] is Ellipsis else inner
        if len(kinds) == len(value):
            parts = zip(kinds, value, strict=True)
            return tuple(build(k, v, f"{path}.{i}", wrong) for i, (k, v) in enumerate(parts))
    if (
        (origin is Literal and value in inner)
        or (kind is float and type(value) in (int, float))
        or (isinstance(kind, type) and type(value) is kind)
    ):
        return value
    wrong.setdefault(path or "data", []).append("does not fit the schema")
    return None


def _build_dataclass(kind: Any, value: dict[str, Any], path: str, wrong: Fields) -> Any:
    hints = typing.get_type_hints(kind)
    names = {f.name for f in fields(kind)}
    later = {f.name: f.default for f in fields(kind) if f.default is not MISSING}
    value = {n: list(d) if isinstance(d, tuple) else d for n, d in later.items()} | value
    for name in sorted(names ^ set(value)):
        where = f"{path}.{name}" if path else name
        wrong.setdefault(where, []).append("is missing" if name in names else "is not known")
    if names != set(value):
        return None
    return kind(**{n: build(hints[n], value[n], f"{path}.{n}" if path else n, wrong) for n in names})
