"""Raw COD by sector, for a point that has no past: orders of magnitude, never a judgement.

Low, typical and high in mg/L, read as the 5 %, 50 % and 95 % points of a
lognormal distribution. From handbooks and memory, as marked; used only to
choose a first dilution. Sources: M&E = Metcalf & Eddy 1991, weak/medium/strong;
review = dairy review 2017; EU = EU project and BREF figures; memory = from
memory, to be replaced by the programme's own results as they come.
"""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True)
class Sector:
    """A sector's raw COD in mg/L, and where the numbers come from."""

    low: float
    typical: float
    high: float
    mark: str


SECTORS: dict[str, Sector] = {
    "municipal": Sector(250, 500, 1000, "M&E 1991"),
    "septage": Sector(1500, 15000, 60000, "memory"),
    "dairy": Sector(500, 3000, 10400, "review 2017; typical: memory"),
    "brewery": Sector(1800, 3000, 17000, "trade table; memory"),
    "soft drinks": Sector(500, 2000, 5000, "memory"),
    "winery": Sector(800, 6000, 67000, "EU project; memory"),
    "distillery": Sector(20000, 60000, 130000, "memory"),
    "slaughterhouse": Sector(500, 4200, 15900, "memory"),
    "poultry": Sector(1000, 2500, 6000, "memory"),
    "rendering": Sector(2000, 10000, 50000, "memory"),
    "seafood": Sector(500, 3000, 20000, "memory"),
    "canning": Sector(500, 2500, 10000, "memory"),
    "starch": Sector(2000, 6000, 20000, "memory"),
    "sugar": Sector(1000, 3000, 10000, "memory"),
    "edible oil": Sector(1000, 5000, 20000, "memory"),
    "textile": Sector(300, 1000, 4500, "paper 2023; memory"),
    "tannery": Sector(1500, 4000, 10000, "memory"),
    "pulp and paper": Sector(400, 1200, 10000, "EU BREF 2001; memory"),
    "refinery": Sector(150, 450, 1000, "memory"),
    "organic chemicals": Sector(500, 3000, 30000, "memory"),
    "pharmaceutical": Sector(500, 5000, 50000, "memory"),
    "leachate": Sector(100, 3000, 60000, "memory"),
    "laundry": Sector(400, 1200, 5000, "memory"),
    "vehicle wash": Sector(100, 400, 1500, "memory"),
    "metal finishing": Sector(50, 250, 1500, "memory"),
    "coolant": Sector(5000, 30000, 150000, "memory"),
    "coke oven": Sector(500, 3500, 6000, "one plant 2018; memory"),
    "secondary effluent": Sector(20, 45, 125, "memory"),
    "olive mill": Sector(40000, 90000, 200000, "memory; single mills in papers"),
    "agrochemical": Sector(5000, 9000, 15000, "range: table of 2021; typical: memory"),
    "tank cleaning": Sector(1000, 6000, 30000, "memory"),
    "paint": Sector(1000, 10000, 50000, "memory"),
    "restaurants": Sector(500, 1500, 5000, "memory"),
    "biodiesel": Sector(20000, 60000, 500000, "memory"),
}
UNKNOWN = Sector(100, 1500, 22000, "a wide guess for a sector that is not in the table: memory")


@dataclass(frozen=True)
class Level:
    """A normal distribution of ln COD between points of a sector."""

    mean: float
    sd: float


def level_of(sector: str | None) -> Level:
    """Return where a point of a sector is expected before its first result.

    Parameters
    ----------
    sector : str or None
        A key of :data:`SECTORS`; anything else, or None, is not known.

    Returns
    -------
    Level
        Of ln COD with COD in mg/L.
    """
    one = SECTORS.get((sector or "").strip().lower(), UNKNOWN)
    spread = (math.log(one.high) - math.log(one.low)) / (2 * 1.6448536269514722)
    return Level(math.log(one.typical), spread)
