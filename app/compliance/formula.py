"""A programme's own charge formula, read by a small grammar and nothing else.

::

    sum     = product { ("+" | "-") product }
    product = signed { ("*" | "/") signed }
    signed  = "-" signed | atom
    atom    = number | name | name "(" sum { "," sum } ")" | "(" sum ")"
    choice  = "if(" sum ("<" | "<=" | ">" | ">=") sum "," sum "," sum ")"

Functions are ``max``, ``min`` and ``if``. Numbers are decimals, names are the
quantities the programme has defined. A formula is text from a person: it is
never evaluated as code, its length and depth are bounded, and every mistake is
answered with its place.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from decimal import Decimal, DivisionByZero, InvalidOperation, Overflow, localcontext
from typing import Union

from app.errors import InputError

LONGEST, DEEPEST, DIGITS = 500, 40, 40
TOKEN = re.compile(r"\s*(?:(\d+(?:\.\d+)?|\.\d+)|([A-Za-z_][A-Za-z_0-9]*)|(<=|>=|[-+*/(),<>]))")
COMPARE: dict[str, Callable[[Decimal, Decimal], bool]] = {
    "<": lambda a, b: a < b,
    "<=": lambda a, b: a <= b,
    ">": lambda a, b: a > b,
    ">=": lambda a, b: a >= b,
}


@dataclass(frozen=True)
class Value:
    """A number as written."""

    number: Decimal


@dataclass(frozen=True)
class Name:
    """A named quantity."""

    name: str


@dataclass(frozen=True)
class Operation:
    """Two parts joined by ``+ - * /``."""

    sign: str
    left: Node
    right: Node


@dataclass(frozen=True)
class Extreme:
    """The largest or smallest of some parts."""

    which: str
    parts: tuple[Node, ...]


@dataclass(frozen=True)
class Choice:
    """One part or another, by a comparison."""

    sign: str
    left: Node
    right: Node
    then: Node
    otherwise: Node


Node = Union[Value, Name, Operation, Extreme, Choice]  # noqa: UP007


def _wrong(words: str, place: int) -> InputError:
    return InputError(f"The formula cannot be read at character {place + 1}: {words}.", {"formula": [words]})


class _Reader:
    """Reads one formula from left to right."""

    def __init__(self, text: str) -> None:
        self.tokens = list(self._split(text))
        self.at = 0
        self.depth = 0

    @staticmethod
    def _split(text: str) -> Iterator[tuple[str, int]]:
        place = 0
        while text[place:].strip():
            found = TOKEN.match(text, place)
            if found is None:
                raise _wrong(f"{text[place:].strip()[0]!r} has no place here", place)
            yield found.group(found.lastindex or 0), found.start(found.lastindex or 0)
            place = found.end()
        yield "", len(text)

    @property
    def token(self) -> str:
        return self.tokens[self.at][0]

    def take(self, expected: str = "") -> str:
        token, place = self.tokens[self.at]
        if expected and token != expected:
            raise _wrong(f"{expected!r} is expected" + (f", not {token!r}" if token else ""), place)
        self.at += 1
        return token

    def whole(self) -> Node:
        node = self.sum()
        if self.token:
            raise _wrong(f"{self.token!r} has no place here", self.tokens[self.at][1])
        return node

    def sum(self) -> Node:
        self.depth += 1
        if self.depth > DEEPEST:
            raise _wrong("too many brackets", self.tokens[self.at][1])
        node = self.product()
        while self.token in ("+", "-"):
            node = Operation(self.take(), node, self.product())
        self.depth -= 1
        return node

    def product(self) -> Node:
        node = self.signed()
        while self.token in ("*", "/"):
            node = Operation(self.take(), node, self.signed())
        return node

    def signed(self) -> Node:
        minus = 0
        while self.token == "-":
            self.take()
            minus += 1
        node = self.atom()
        return Operation("-", Value(Decimal(0)), node) if minus % 2 else node

    def atom(self) -> Node:
        token, place = self.tokens[self.at]
        if token == "(":
            self.take()
            node = self.sum()
            self.take(")")
            return node
        if token[:1].isdigit() or token[:1] == ".":
            return Value(Decimal(self.take()))
        if token[:1].isalpha() or token[:1] == "_":
            name = self.take()
            return self.call(name, place) if self.token == "(" else Name(name)
        raise _wrong("a number or a name is expected", place)

    def call(self, name: str, place: int) -> Node:
        self.take("(")
        if name == "if":
            return self.choice()
        if name not in ("max", "min"):
            raise _wrong(f"{name!r} is not a function; max, min and if are", place)
        parts = [self.sum()]
        while self.token == ",":
            self.take()
            parts.append(self.sum())
        self.take(")")
        return Extreme(name, tuple(parts))

    def choice(self) -> Node:
        left = self.sum()
        if self.token not in COMPARE:
            raise _wrong("<, <=, > or >= is expected", self.tokens[self.at][1])
        sign = self.take()
        right = self.sum()
        self.take(",")
        then = self.sum()
        self.take(",")
        otherwise = self.sum()
        self.take(")")
        return Choice(sign, left, right, then, otherwise)


def read(text: str) -> Node:
    """Read a formula.

    Parameters
    ----------
    text : str
        At most 500 characters.

    Returns
    -------
    Node

    Raises
    ------
    InputError
        Saying where it cannot be read and why.
    """
    if len(text) > LONGEST:
        raise InputError("The formula is too long.", {"formula": [f"has more than {LONGEST} characters"]})
    return _Reader(text).whole()


def names(node: Node) -> set[str]:
    """Return the names a formula uses.

    Parameters
    ----------
    node : Node
        From :func:`read`.

    Returns
    -------
    set of str
    """
    if isinstance(node, Name):
        return {node.name}
    return set().union(*(names(part) for part in parts_of(node)))


def parts_of(node: Node) -> tuple[Node, ...]:
    """Return the parts a node joins.

    Parameters
    ----------
    node : Node
        Any.

    Returns
    -------
    tuple of Node
    """
    if isinstance(node, Operation):
        return node.left, node.right
    if isinstance(node, Extreme):
        return node.parts
    if isinstance(node, Choice):
        return node.left, node.right, node.then, node.otherwise
    return ()


def _work(node: Node, known: Mapping[str, Decimal]) -> Decimal:
    if isinstance(node, Value):
        return node.number
    if isinstance(node, Name):
        return known[node.name]
    if isinstance(node, Extreme):
        return (max if node.which == "max" else min)(_work(part, known) for part in node.parts)
    if isinstance(node, Choice):
        holds = COMPARE[node.sign](_work(node.left, known), _work(node.right, known))
        return _work(node.then if holds else node.otherwise, known)
    left, right = _work(node.left, known), _work(node.right, known)
    if node.sign == "+":
        return left + right
    if node.sign == "-":
        return left - right
    return left * right if node.sign == "*" else left / right


def work(node: Node, quantities: Mapping[str, Decimal]) -> Decimal:
    """Work out a formula, unrounded.

    Parameters
    ----------
    node : Node
        From :func:`read`.
    quantities : mapping of str to Decimal
        A number for each name.

    Returns
    -------
    Decimal
        To 40 significant digits.

    Raises
    ------
    InputError
        If a name has no number, or the sum divides by nothing or overflows.
    """
    absent = sorted(names(node) - set(quantities))
    if absent:
        raise InputError(
            "The formula uses quantities that have no number.",
            {f"quantities.{name}": ["is missing"] for name in absent},
        )
    with localcontext() as context:
        context.prec = DIGITS
        try:
            return +_work(node, quantities)
        except (DivisionByZero, InvalidOperation):
            raise InputError("The formula divides by zero.", {"formula": ["divides by zero"]}) from None
        except Overflow:
            raise InputError("The formula grows beyond all bounds.", {"formula": ["overflows"]}) from None


def write(node: Node, known: Mapping[str, Decimal] | None = None) -> str:
    """Write a formula out again, with names or with their numbers.

    Parameters
    ----------
    node : Node
        From :func:`read`.
    known : mapping of str to Decimal, optional
        Numbers to write in place of the names.

    Returns
    -------
    str
        Brackets where they are needed.
    """
    if isinstance(node, Value):
        return format(node.number, "f")
    if isinstance(node, Name):
        return node.name if known is None else format(known[node.name], "f")
    if isinstance(node, Extreme):
        return f"{node.which}({', '.join(write(part, known) for part in node.parts)})"
    if isinstance(node, Choice):
        test = f"{write(node.left, known)} {node.sign} {write(node.right, known)}"
        return f"if({test}, {write(node.then, known)}, {write(node.otherwise, known)})"
    return _joined(node, known)


def _joined(node: Operation, known: Mapping[str, Decimal] | None) -> str:
    tight = node.sign in "*/"
    left, right = write(node.left, known), write(node.right, known)
    if tight and _loose(node.left):
        left = f"({left})"
    if (_loose(node.right) and node.sign != "+") or (_is(node.right, "*/") and node.sign == "/"):
        right = f"({right})"
    return f"{left} {node.sign} {right}"


def _is(node: Node, signs: str) -> bool:
    return isinstance(node, Operation) and node.sign in signs


def _loose(node: Node) -> bool:
    return _is(node, "+-")
