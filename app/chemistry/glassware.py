"""Class A glassware: tolerances, and the uncertainty of a chain of dilution steps.

A step pipettes one volume and makes it up to another; a chain multiplies. The
standard uncertainty of a vessel is its tolerance over the square root of 6
(triangular: values near the mark are likelier; Eurachem/CITAC Guide CG 4 for
glass) or of 3 (rectangular, cautious). Temperature acts on pipette and flask
alike and leaves their ratio.

A piston pipette is no glass: ISO 8655-2 limits its error in microlitres that
stay the same at every setting, so a tenth of its volume is ten times worse.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from app.chemistry.problems import Problems, in_words
from app.errors import InputError

GlassStandard = Literal["ASTM", "ISO"]
Shape = Literal["triangular", "rectangular"]
Vessel = Literal["pipette", "flask"]

SHAPE_DIVISOR: Mapping[Shape, float] = {"triangular": math.sqrt(6.0), "rectangular": math.sqrt(3.0)}
#: Cubic expansion of water less that of glass, per kelvin.
EXPANSION_PER_K = 2.1e-4


@dataclass(frozen=True)
class Tolerance:
    """Limits of one class A size.

    Parameters
    ----------
    astm_ml, iso_ml : float or None
        Plus or minus, in mL; None where the standard has no such size.
    mark : str
        ``confirmed`` where a public copy was read for both, else what is from
        memory.
    """

    astm_ml: float | None
    iso_ml: float | None
    mark: str = "confirmed"


_ISO_MEMORY = "ASTM confirmed, ISO from memory"

#: Volumetric (transfer) pipettes: ASTM E969, ISO 648.
PIPETTES_ML: Mapping[float, Tolerance] = {
    0.5: Tolerance(0.006, 0.005, _ISO_MEMORY),
    1.0: Tolerance(0.006, 0.008, _ISO_MEMORY),
    2.0: Tolerance(0.006, 0.010, _ISO_MEMORY),
    3.0: Tolerance(0.01, None),
    4.0: Tolerance(0.01, None),
    5.0: Tolerance(0.01, 0.015, _ISO_MEMORY),
    10.0: Tolerance(0.02, 0.020),
    15.0: Tolerance(0.03, 0.025, _ISO_MEMORY),
    20.0: Tolerance(0.03, 0.030, _ISO_MEMORY),
    25.0: Tolerance(0.03, 0.030, _ISO_MEMORY),
    50.0: Tolerance(0.05, 0.050, _ISO_MEMORY),
    100.0: Tolerance(0.08, 0.080, _ISO_MEMORY),
}

#: Volumetric flasks: ASTM E288, ISO 1042.
FLASKS_ML: Mapping[float, Tolerance] = {
    5.0: Tolerance(0.02, 0.025, "ASTM from memory, ISO confirmed"),
    10.0: Tolerance(0.02, 0.025, "ASTM from memory, ISO confirmed"),
    25.0: Tolerance(0.03, 0.04),
    50.0: Tolerance(0.05, 0.06),
    100.0: Tolerance(0.08, 0.10),
    200.0: Tolerance(0.10, 0.15, "ASTM from memory, ISO confirmed"),
    250.0: Tolerance(0.12, 0.15),
    500.0: Tolerance(0.20, 0.25, "ASTM from memory (an older set prints 0.15), ISO confirmed"),
    1000.0: Tolerance(0.30, 0.40),
    2000.0: Tolerance(0.50, 0.60),
}


@dataclass(frozen=True)
class Step:
    """One dilution step.

    Parameters
    ----------
    pipette_ml, flask_ml : float
        What is pipetted, and what it is made up to.
    """

    pipette_ml: float
    flask_ml: float


def tolerance_ml(vessel: Vessel, nominal_ml: float, standard: GlassStandard = "ASTM") -> float:
    """Return the class A tolerance of a vessel.

    Parameters
    ----------
    vessel : {"pipette", "flask"}
        Kind.
    nominal_ml : float
        Size.
    standard : {"ASTM", "ISO"}
        Whose table.

    Returns
    -------
    float
        Plus or minus, in mL.

    Raises
    ------
    InputError
        Naming ``pipette_ml`` or ``flask_ml`` when the table has no such size.
    """
    table = PIPETTES_ML if vessel == "pipette" else FLASKS_ML
    found = table.get(float(nominal_ml))
    limit = None if found is None else (found.astm_ml if standard == "ASTM" else found.iso_ml)
    if limit is None:
        words = f"{standard} has no class A {vessel} of {in_words(nominal_ml)} mL"
        raise InputError(f"{words}.", {f"{vessel}_ml": [words]})
    return limit


def relative_u_of_vessel(
    vessel: Vessel, nominal_ml: float, standard: GlassStandard = "ASTM", shape: Shape = "triangular"
) -> float:
    """Return the relative standard uncertainty of a class A vessel.

    Parameters
    ----------
    vessel : {"pipette", "flask"}
        Kind.
    nominal_ml : float
        Size.
    standard : {"ASTM", "ISO"}
        Whose tolerance.
    shape : {"triangular", "rectangular"}
        Distribution within the tolerance.

    Returns
    -------
    float
    """
    return tolerance_ml(vessel, nominal_ml, standard) / SHAPE_DIVISOR[shape] / nominal_ml


def chain_factor(steps: Sequence[Step]) -> float:
    """Return the dilution factor of a chain: the product of flask over pipette.

    Parameters
    ----------
    steps : sequence of Step
        In order; none for an undiluted sample.

    Returns
    -------
    float
        At least 1.

    Raises
    ------
    InputError
        When a step does not dilute; naming ``steps.i``.
    """
    wrong = Problems()
    factor = 1.0
    for i, step in enumerate(steps):
        if not 0 < step.pipette_ml <= step.flask_ml:
            wrong.add(f"steps.{i}", "the pipette must be above zero and no larger than the flask")
        else:
            factor *= step.flask_ml / step.pipette_ml
    wrong.stop("This is no dilution.")
    return factor


def chain_relative_u(
    steps: Sequence[Step], standard: GlassStandard = "ASTM", shape: Shape = "triangular"
) -> float:
    """Return the relative standard uncertainty of a chain of class A steps.

    Vessels count as independent, also when one is used twice.

    Parameters
    ----------
    steps : sequence of Step
        None gives zero.
    standard : {"ASTM", "ISO"}
        Whose tolerances.
    shape : {"triangular", "rectangular"}
        Distribution within a tolerance.

    Returns
    -------
    float

    Examples
    --------
    >>> round(100 * chain_relative_u([Step(10, 100)]), 3)
    0.088
    """
    parts = []
    for step in steps:
        parts.append(relative_u_of_vessel("pipette", step.pipette_ml, standard, shape))
        parts.append(relative_u_of_vessel("flask", step.flask_ml, standard, shape))
    return math.hypot(*parts)


@dataclass(frozen=True)
class PistonPipette:
    """A piston pipette and its limits of error at every setting.

    Parameters
    ----------
    nominal_ul, systematic_ul, random_ul : float
        Largest volume; systematic and random limits in microlitres.
    """

    nominal_ul: float
    systematic_ul: float
    random_ul: float

    def relative_u(self, volume_ul: float) -> float:
        """Return the relative standard uncertainty at a setting in microlitres."""
        return math.hypot(self.systematic_ul / math.sqrt(3.0), self.random_ul) / volume_ul


#: ISO 8655-2; 1000 uL confirmed in a calibration paper, the others from memory.
PISTON_PIPETTES: tuple[PistonPipette, ...] = (
    PistonPipette(100.0, 0.8, 0.3),
    PistonPipette(1000.0, 8.0, 3.0),
    PistonPipette(5000.0, 40.0, 15.0),
    PistonPipette(10000.0, 60.0, 30.0),
)


def flask_u_ml(
    nominal_ml: float,
    tolerance: float,
    repeatability_ml: float = 0.0,
    temperature_k: float = 0.0,
    shape: Shape = "triangular",
) -> float:
    """Return the standard uncertainty of a volume held by one vessel.

    Parameters
    ----------
    nominal_ml, tolerance : float
        Size and its plus or minus.
    repeatability_ml : float
        Standard deviation of filling.
    temperature_k : float
        Largest distance from the calibration temperature, either way.
    shape : {"triangular", "rectangular"}
        Distribution within the tolerance.

    Returns
    -------
    float
        mL.
    """
    expansion = nominal_ml * EXPANSION_PER_K * temperature_k / math.sqrt(3.0)
    return math.hypot(tolerance / SHAPE_DIVISOR[shape], repeatability_ml, expansion)
