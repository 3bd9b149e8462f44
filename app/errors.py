"""Every error a person can meet, and the one body it is shown in.

An error says what happened, what is kept and what to do; the same words reach
the screen, the command line and the log. Pure packages raise
:class:`InputError`; the other classes belong to the layers that raise them.
This module imports nothing, so that any layer may use it.
"""

from __future__ import annotations

Fields = dict[str, list[str]]


class WeirbookError(Exception):
    """Base of all errors that are told to a person.

    Parameters
    ----------
    message : str
        What happened, what is kept and what to do, in plain words.
    fields : dict of str to list of str, optional
        For each wrong field (dotted path, e.g. ``tubes.3.absorbance``) the
        sentences about it.
    """

    code = "error"
    status = 500

    def __init__(self, message: str, fields: Fields | None = None) -> None:
        super().__init__(message)
        self.message = message
        self.fields: Fields = fields or {}

    def body(self) -> dict[str, object]:
        """Return the one error body of every endpoint and verb."""
        return {"error": self.message, "fields": self.fields, "code": self.code}


class InputError(WeirbookError, ValueError):
    """What was given cannot be used; nothing was written."""

    code = "invalid_input"
    status = 422


def flatten(messages: object, path: str = "") -> Fields:
    """Turn nested validation messages into dotted paths.

    Parameters
    ----------
    messages : dict, list or str
        Nested messages as marshmallow gives them; integer keys are indices.
    path : str
        Prefix of the paths.

    Returns
    -------
    dict of str to list of str
    """
    if isinstance(messages, dict):
        found: Fields = {}
        for key, value in messages.items():
            step = path if key == "_schema" else f"{path}.{key}" if path else str(key)
            for name, lines in flatten(value, step).items():
                found.setdefault(name, []).extend(lines)
        return found
    lines = [str(m) for m in messages] if isinstance(messages, list) else [str(messages)]
    return {path or "input": lines}
