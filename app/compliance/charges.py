"""Extra-strength charges: a formula the programme wrote, worked out in decimals.

The usual form is volume times 8.34 times the sum, over the parameters, of a
rate times what exceeds a threshold, never less than nothing. Everything in it
is the programme's: quantities, thresholds, rates, which term replaces which and
on which side of a ratio. Money is decimal, is rounded once at the end, and the
unrounded value is kept.

Two orders of averaging and thresholding give two charges; which one applies is
a setting that the statement names: the excess of the mean, or the mean of the
excesses.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, ROUND_HALF_UP, Decimal, localcontext
from typing import Literal

from app.compliance.formula import DIGITS, Choice, Node, Operation, read, work, write
from app.errors import InputError

Rounding = Literal["half up", "half even"]
Order = Literal["excess of the mean", "mean of the excesses"]
LARGEST = Decimal(10) ** 15
ROUNDINGS: dict[str, str] = {"half up": ROUND_HALF_UP, "half even": ROUND_HALF_EVEN}


@dataclass(frozen=True)
class Line:
    """One term of a statement.

    Parameters
    ----------
    words : str
        The term with names.
    worked : str
        The term with numbers.
    amount : Decimal
        Unrounded; negative for a term that is taken off.
    """

    words: str
    worked: str
    amount: Decimal


@dataclass(frozen=True)
class Charge:
    """A charge with its working.

    Parameters
    ----------
    amount : Decimal
        Rounded once.
    unrounded : Decimal
        As worked out.
    lines : tuple of Line
        The terms; they add up to ``unrounded``.
    rounding : str
        How it was rounded.
    """

    amount: Decimal
    unrounded: Decimal
    lines: tuple[Line, ...]
    rounding: Rounding


def _terms(node: Node) -> list[tuple[str, Node]]:
    """Split a sum into its signed terms; a factor in front of a bracket joins each."""
    if isinstance(node, Operation) and node.sign in "+-":
        left, right = _terms(node.left), _terms(node.right)
        if node.sign == "-":
            right = [("-" if sign == "+" else "+", term) for sign, term in right]
        return left + right
    if isinstance(node, Operation) and node.sign == "*":
        for outer, inner in ((node.left, node.right), (node.right, node.left)):
            if isinstance(inner, Operation) and inner.sign in "+-":
                return [(sign, Operation("*", outer, term)) for sign, term in _terms(inner)]
    return [("+", node)]


def _chosen(node: Node, known: Mapping[str, Decimal]) -> Node:
    """Replace each choice by the side that applies, so that a line shows what was charged."""
    if isinstance(node, Choice):
        one = Decimal(1)
        holds = work(Choice(node.sign, node.left, node.right, _ONE, _ZERO), known) == one
        return _chosen(node.then if holds else node.otherwise, known)
    if isinstance(node, Operation):
        return Operation(node.sign, _chosen(node.left, known), _chosen(node.right, known))
    return node


_ONE, _ZERO = read("1"), read("0")


def charge(
    formula: str, quantities: Mapping[str, Decimal], *, places: int = 2, rounding: Rounding = "half up"
) -> Charge:
    """Work out a charge and show each term.

    Parameters
    ----------
    formula : str
        In the grammar of :mod:`app.compliance.formula`.
    quantities : mapping of str to Decimal
        A decimal for each name; binary floating point is refused.
    places : int
        Decimal places of the currency.
    rounding : {"half up", "half even"}
        How the end is rounded.

    Returns
    -------
    Charge

    Raises
    ------
    InputError
        If the formula cannot be read or worked out, or a quantity is no finite
        decimal.
    """
    wrong = {
        f"quantities.{name}": ["must be a decimal under 10^15 in size"]
        for name, number in quantities.items()
        if not isinstance(number, Decimal) or not number.is_finite() or abs(number) >= LARGEST
    }
    if wrong:
        raise InputError("These quantities cannot be charged for.", wrong)
    node = _chosen(read(formula), quantities)
    whole = work(node, quantities)
    lines = []
    for sign, term in _terms(node):
        amount = work(term, quantities)
        lines.append(Line(write(term), write(term, quantities), -amount if sign == "-" else amount))
    if abs(whole) >= LARGEST:
        raise InputError("The charge grows beyond all bounds.", {"formula": ["gives 10^15 or more"]})
    with localcontext() as context:
        context.prec = DIGITS
        rounded = whole.quantize(Decimal(1).scaleb(-places), rounding=ROUNDINGS[rounding])
    return Charge(rounded, whole, tuple(lines), rounding)


def excess(
    values: Sequence[Decimal], threshold: Decimal, order: Order, volumes: Sequence[Decimal] | None = None
) -> Decimal:
    """Return what exceeds a threshold over several samples, in a stated order.

    Parameters
    ----------
    values : sequence of Decimal
        Concentrations, shape (n,), n at least 1.
    threshold : Decimal
        Same unit.
    order : {"excess of the mean", "mean of the excesses"}
        Whether the mean is taken before or after the threshold.
    volumes : sequence of Decimal, optional
        What each sample stands for, shape (n,); equal when absent.

    Returns
    -------
    Decimal
        Zero or more.

    Raises
    ------
    InputError
        If there is no sample, or the volumes do not fit or add up to nothing.
    """
    weights = list(volumes) if volumes is not None else [Decimal(1)] * len(values)
    if not values:
        raise InputError("There is no sample to charge by.", {"values": ["needs at least one"]})
    if len(weights) != len(values) or any(w < 0 for w in weights) or not sum(weights):
        raise InputError(
            "The volumes do not fit the samples.", {"volumes": ["need one each, above zero in sum"]}
        )
    zero = Decimal(0)
    if order == "mean of the excesses":
        values = [max(zero, v - threshold) for v in values]
        threshold = zero
    mean = sum((v * w for v, w in zip(values, weights, strict=True)), zero) / sum(weights)
    return max(zero, mean - threshold)
