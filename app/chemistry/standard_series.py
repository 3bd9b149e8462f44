"""How to make standards from a stock with the class A glassware of a shelf.

A level is made by one or two deliveries of a pipette into a flask (50 and 20 mL
into 100 mL for 700 mg/L from 1000), or by two such dilutions in series of one
delivery each. A level that no glassware reaches exactly is replaced by the
nearest that it does, and the sheet shows the concentration that will really be
in the flask.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from app.chemistry.glassware import FLASKS_ML, PIPETTES_ML, relative_u_of_vessel
from app.chemistry.problems import Problems

SMALLEST_PIPETTE_ML = 1.0
COMFORTABLE_PIPETTE_ML = 5.0
LARGEST_FLASK_ML = 250.0
#: A chain is taken as on its level within this relative deviation.
ON_LEVEL = 1e-9


@dataclass(frozen=True)
class Portion:
    """What goes into one flask before it is made up to the mark.

    Parameters
    ----------
    pipettes_ml : tuple of float
        One or two deliveries.
    flask_ml : float
        Size of the flask.
    """

    pipettes_ml: tuple[float, ...]
    flask_ml: float

    @property
    def factor(self) -> float:
        """Dilution factor of this flask."""
        return self.flask_ml / sum(self.pipettes_ml)

    @property
    def relative_u(self) -> float:
        """Relative standard uncertainty of the factor, class A, ASTM, triangular."""
        each = [p * relative_u_of_vessel("pipette", p) for p in self.pipettes_ml]
        delivered = math.hypot(*each) / sum(self.pipettes_ml)
        return math.hypot(delivered, relative_u_of_vessel("flask", self.flask_ml))

    def words(self) -> str:
        """Return the portion as a sheet says it."""
        amounts = " and ".join(f"{p:g}" for p in self.pipettes_ml)
        return f"{amounts} mL to {self.flask_ml:g} mL"


@dataclass(frozen=True)
class StandardSolution:
    """How one standard is made.

    Parameters
    ----------
    wanted, cod : float
        Level asked for, and the one that the glassware gives, mg/L.
    portions : tuple of Portion
        From the stock; none for the stock itself or for water.
    relative_u : float
        Of the dilution.
    words : str
        For the sheet.
    """

    wanted: float
    cod: float
    portions: tuple[Portion, ...]
    relative_u: float
    words: str


def standard_series(stock: float, levels: Sequence[float]) -> tuple[StandardSolution, ...]:
    """Return how to make standards from a stock.

    Parameters
    ----------
    stock : float
        COD of the stock, mg/L.
    levels : sequence of float
        Wanted, none above the stock; zero is water.

    Returns
    -------
    tuple of StandardSolution
        In the order given.

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    wrong = Problems()
    wrong.number("stock", stock, above=0)
    for i, level in enumerate(levels):
        wrong.number(f"levels.{i}", level, least=0, most=stock)
    wrong.stop("These standards cannot be made from this stock.")
    return tuple(_solution(stock, level) for level in levels)


def _solution(stock: float, level: float) -> StandardSolution:
    if level == 0:
        return StandardSolution(0.0, 0.0, (), 0.0, "water, digested like a sample")
    if level == stock:
        return StandardSolution(level, level, (), 0.0, "the stock itself")
    chain = _nearest(stock / level)
    words = ", of this ".join(portion.words() for portion in chain.portions)
    return StandardSolution(level, stock / chain.factor, chain.portions, chain.relative_u, words)


@dataclass(frozen=True)
class _Chain:
    portions: tuple[Portion, ...]
    factor: float
    relative_u: float
    trouble: float


def _chain(portions: tuple[Portion, ...]) -> _Chain:
    """Return a chain with its trouble: work, then small pipettes, then uncertainty."""
    factor = math.prod(portion.factor for portion in portions)
    relative_u = math.hypot(*(portion.relative_u for portion in portions))
    deliveries = sum(len(portion.pipettes_ml) for portion in portions)
    small = sum(p < COMFORTABLE_PIPETTE_ML for portion in portions for p in portion.pipettes_ml)
    trouble = deliveries + len(portions) + 1.5 * small + 100.0 * relative_u
    return _Chain(portions, factor, relative_u, trouble)


@lru_cache(maxsize=1)
def _chains() -> tuple[_Chain, ...]:
    flasks = [size for size in FLASKS_ML if size <= LARGEST_FLASK_ML]
    pipettes = [size for size in PIPETTES_ML if size >= SMALLEST_PIPETTE_ML]
    single = [Portion((p,), f) for f in flasks for p in pipettes if p < f]
    double = [Portion((p, q), f) for f in flasks for p in pipettes for q in pipettes if q <= p and p + q < f]
    chains = [_chain((portion,)) for portion in (*single, *double)]
    chains += [_chain((first, second)) for first in single for second in single if first.factor >= 2.0]
    return tuple(chains)


def _nearest(factor: float) -> _Chain:
    def rank(chain: _Chain) -> tuple[float, float]:
        off = abs(chain.factor / factor - 1.0)
        return (0.0 if off <= ON_LEVEL else off, chain.trouble)

    return min(_chains(), key=rank)
