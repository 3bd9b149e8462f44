"""``python -m app VERB``: the sums on the command line, and the care of a store.

A sum reads JSON (a file name or ``-``) and writes JSON. Wrong input: exit 2,
nothing on standard output, one error body on standard error. With ``--lines``
it answers one object a line, in order; a bad line is answered with its error
body in its place and the exit status is 2 at the end.
"""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Sequence
from typing import Any, NoReturn, TextIO

from app import care, verbs
from app.errors import InputError, WeirbookError


def _refuse_constant(name: str) -> NoReturn:
    raise ValueError(f"{name} is not a number")


def _decode(text: str) -> Any:
    try:
        return json.loads(text, parse_constant=_refuse_constant)
    except (ValueError, RecursionError) as error:
        raise InputError(f"This is not JSON: {error}.", {"input": [str(error)]}) from None


def _encode(value: Any) -> str:
    return json.dumps(value, allow_nan=False, separators=(",", ":"))


def answer(verb: verbs.Verb, text: str) -> tuple[dict[str, Any], bool]:
    """Answer one JSON text; the flag tells whether it could be used."""
    try:
        return verb(_decode(text)), True
    except WeirbookError as error:
        return error.body(), False


def run_lines(verb: verbs.Verb, source: TextIO) -> int:
    """Answer each line of ``source`` with a line on standard output."""
    good = True
    for line in source:
        if line.strip():
            reply, ok = answer(verb, line)
            good = good and ok
            sys.stdout.write(_encode(reply) + "\n")
    return 0 if good else 2


def run_sum(arguments: argparse.Namespace) -> int:
    """Run one of the sums on a file or on standard input."""
    verb = verbs.find(arguments.verb)
    if arguments.file == "-":
        return _run_on(verb, sys.stdin, arguments.lines)
    try:
        with open(arguments.file, encoding="utf-8") as source:
            return _run_on(verb, source, arguments.lines)
    except (OSError, UnicodeDecodeError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        body = InputError(f"{arguments.file} cannot be read: {reason}.", {"file": [reason]}).body()
        sys.stderr.write(_encode(body) + "\n")
        return 2


def _run_on(verb: verbs.Verb, source: TextIO, lines: bool) -> int:
    if lines:
        return run_lines(verb, source)
    reply, ok = answer(verb, source.read())
    (sys.stdout if ok else sys.stderr).write(_encode(reply) + "\n")
    return 0 if ok else 2


def parser() -> argparse.ArgumentParser:
    """Return the parser of all verbs."""
    top = argparse.ArgumentParser(prog="python -m app", description=__doc__)
    commands = top.add_subparsers(dest="verb", required=True, metavar="VERB")
    for name in verbs.MODULES:
        one = commands.add_parser(name, help=f"the sum '{name}' on JSON")
        one.add_argument("file", nargs="?", default="-", help="a JSON file, or - for standard input")
        one.add_argument("--lines", action="store_true", help="one JSON object a line")
        one.set_defaults(run=run_sum)
    care.add_verbs(commands)
    return top


def main(argv: Sequence[str] | None = None) -> int:
    """Run a verb and return the exit status."""
    arguments = parser().parse_args(argv)
    status: int = arguments.run(arguments)
    return status
