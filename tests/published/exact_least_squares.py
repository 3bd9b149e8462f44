"""Weighted least squares in exact rational arithmetic: an oracle without rounding.

Normal equations solved by Gauss elimination over fractions; slow, short and
exact, and it shares no line with the program.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import sqrt
from typing import NamedTuple


class ExactFit(NamedTuple):
    coefficients: list[float]
    standard_errors: list[float]
    residual_sd: float
    r_squared: float


def exact_fit(
    points: Sequence[tuple[float, float]], degree: int, weights: Sequence[float] | None = None
) -> ExactFit:
    """Fit a polynomial to points whose decimal text is taken as exact."""
    x = [Fraction(str(p[0])) for p in points]
    y = [Fraction(str(p[1])) for p in points]
    w = [Fraction(str(v)) for v in weights] if weights else [Fraction(1)] * len(x)
    size = degree + 1
    moments = [
        [sum(v * a ** (i + j) for v, a in zip(w, x, strict=True)) for j in range(size)] for i in range(size)
    ]
    right = [sum(v * b * a**i for v, a, b in zip(w, x, y, strict=True)) for i in range(size)]
    inverse = _inverse(moments)
    beta = [sum(inverse[i][j] * right[j] for j in range(size)) for i in range(size)]
    rest = [b - sum(c * a**i for i, c in enumerate(beta)) for a, b in zip(x, y, strict=True)]
    sse = sum(v * r * r for v, r in zip(w, rest, strict=True))
    mean = sum(v * b for v, b in zip(w, y, strict=True)) / sum(w)
    total = sum(v * (b - mean) ** 2 for v, b in zip(w, y, strict=True))
    variance = sse / (len(x) - size)
    return ExactFit(
        [float(b) for b in beta],
        [sqrt(variance * inverse[i][i]) for i in range(size)],
        sqrt(variance),
        float(1 - sse / total),
    )


def _inverse(matrix: list[list[Fraction]]) -> list[list[Fraction]]:
    size = len(matrix)
    rows = [[*row, *(Fraction(int(i == j)) for j in range(size))] for i, row in enumerate(matrix)]
    for i in range(size):
        pivot = next(k for k in range(i, size) if rows[k][i] != 0)
        rows[i], rows[pivot] = rows[pivot], rows[i]
        rows[i] = [value / rows[i][i] for value in rows[i]]
        for k in range(size):
            if k != i:
                rows[k] = [a - rows[k][i] * b for a, b in zip(rows[k], rows[i], strict=True)]
    return [row[size:] for row in rows]
