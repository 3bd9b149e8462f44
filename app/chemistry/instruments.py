"""Checks of the laboratory's instruments: block, photometer, pipettes by weight.

A pipette is weighed dry: each delivery of water is turned into a volume by the
factor Z for the water's temperature (density of water and buoyancy in air), and
the mean and the scatter of the deliveries are held to limits. Limits are
settings: 2 degrees Celsius for the block at 150 degrees (Standard Methods
5220, from memory), 2 nm for the wavelength (common practice), 1 % systematic
and 0.5 % random for a pipette (common practice; ISO 8655-2 has its own for
each size).

References
----------
ISO 8655-6 (gravimetric procedure, factor Z). Density of water: Tanaka et al.,
Metrologia 38 (2001) 301, equation 1. Air 1.2 kg/m3, weights 8000 kg/m3.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from app.chemistry.problems import Problems

BLOCK_C = 2.0
WAVELENGTH_NM = 2.0
SYSTEMATIC_PERCENT = 1.0
RANDOM_PERCENT = 0.5
AIR_G_PER_ML = 0.0012
WEIGHTS_G_PER_ML = 8.0
FEWEST_DELIVERIES = 4


@dataclass(frozen=True)
class Checked:
    """What a check of an instrument says.

    Parameters
    ----------
    ok : bool
        Whether it holds.
    words : str
        What was found and what it was held to.
    """

    ok: bool
    words: str


def water_density(celsius: float) -> float:
    """Return the density of air-free water in g/mL, 0 to 40 degrees Celsius.

    Parameters
    ----------
    celsius : float
        Its temperature.

    Returns
    -------
    float
        Tanaka et al. 2001, equation 1.
    """
    t = celsius
    return 0.999974950 * (1.0 - (t - 3.983035) ** 2 * (t + 301.797) / (522528.9 * (t + 69.34881)))


def z_factor(celsius: float) -> float:
    """Return the millilitres that a gram of water stands for when it is weighed in air.

    Parameters
    ----------
    celsius : float
        Temperature of the water.

    Returns
    -------
    float
        mL/g.
    """
    buoyancy = 1.0 - AIR_G_PER_ML / WEIGHTS_G_PER_ML
    return buoyancy / (water_density(celsius) - AIR_G_PER_ML)


def check_near(found: float, wanted: float, limit: float, unit: str) -> Checked:
    """Judge one reading of a reference: a block's probe, a wavelength standard.

    Parameters
    ----------
    found, wanted, limit : float
        In the same unit.
    unit : str
        As it is written.

    Returns
    -------
    Checked
    """
    off = found - wanted
    words = (
        f"{found:g} {unit} instead of {wanted:g} {unit}, {abs(off):.3g} {unit} off, at most {limit:g} {unit}"
    )
    return Checked(abs(off) <= limit + 1e-9, words)


def check_pipette(
    nominal_ml: float,
    weighed_g: Sequence[float],
    celsius: float,
    systematic_percent: float = SYSTEMATIC_PERCENT,
    random_percent: float = RANDOM_PERCENT,
) -> Checked:
    """Judge a pipette by the weights of its deliveries.

    Parameters
    ----------
    nominal_ml : float
        What it is set to.
    weighed_g : sequence of float
        Each delivery, at least four, shape (n,).
    celsius : float
        Temperature of the water, 5 to 40.
    systematic_percent, random_percent : float
        Largest deviation of the mean and largest coefficient of variation.

    Returns
    -------
    Checked

    Raises
    ------
    InputError
        Naming every wrong field.
    """
    wrong = Problems()
    wrong.number("nominal_ml", nominal_ml, above=0)
    wrong.number("celsius", celsius, least=5, most=40)
    for i, mass in enumerate(weighed_g):
        wrong.number(f"weighed_g.{i}", mass, above=0)
    if len(weighed_g) < FEWEST_DELIVERIES:
        wrong.add("weighed_g", f"at least {FEWEST_DELIVERIES} deliveries are needed")
    wrong.stop("The pipette cannot be judged.")
    volumes = [mass * z_factor(celsius) for mass in weighed_g]
    mean = math.fsum(volumes) / len(volumes)
    spread = math.sqrt(math.fsum((v - mean) ** 2 for v in volumes) / (len(volumes) - 1))
    off, scatter = 100.0 * (mean / nominal_ml - 1.0), 100.0 * spread / mean
    words = (
        f"{mean:.4g} mL on average, {off:+.2f} % (at most {systematic_percent:g} %), scatter "
        f"{scatter:.2f} % (at most {random_percent:g} %), {len(volumes)} deliveries at {celsius:g} °C"
    )
    return Checked(abs(off) <= systematic_percent + 1e-9 and scatter <= random_percent + 1e-9, words)
