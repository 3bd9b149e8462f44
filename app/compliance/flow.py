r"""Flow at a discharge point: weirs, flumes, bucket and watch, totalizer.

A load or a charge stands on this number, so a head outside the device's rating
gives *out of range* and no number, and so does a flume whose tail water is too
high. The rating used is returned with every flow, because printed tables round
it differently (the 1 ft flume differs by 3 % between two of them).

Ratings, head :math:`H` in ft, flow :math:`Q` in cubic feet a second:

====================  ==========================================  ============
device                rating                                      source
====================  ==========================================  ============
90 degree V-notch     ``2.49 H**2.48``                            [1]_
rectangular           ``3.33 (L - 0.2 H) H**1.5`` contracted      Francis, [1]_
rectangular           ``3.33 L H**1.5`` suppressed                Francis, [1]_
Parshall 3, 6, 9 in   ``0.992 H**1.547``, ``2.06 H**1.58``,       [1]_ [2]_
                      ``3.07 H**1.53``
Parshall 1 to 8 ft    ``4 W H**(1.522 W**0.026)``                 [1]_ [2]_
====================  ==========================================  ============

Ranges of the 1.5 ft and the 5 to 8 ft flumes and the foot rating of the 3 in
flume are from memory of those tables.

References
----------
.. [1] United States Bureau of Reclamation, Water Measurement Manual, ch. 7 and 8.
.. [2] ISO 9826 and ASTM D1941, Parshall flumes; ISO 1438, thin-plate weirs.
"""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any, Literal

from app.compliance.exact import need_number, plain
from app.compliance.units import FLOWS_L_S, LENGTHS_M, VOLUMES_L
from app.errors import InputError

FlowStatus = Literal["ok", "out of range", "submerged"]


@dataclass(frozen=True)
class Flow:
    """A flow and how it came about.

    Parameters
    ----------
    status : {"ok", "out of range", "submerged"}
        Only "ok" carries a number.
    l_s : float or None
        Litres a second.
    rating : str
        The formula that was used.
    words : str
        What to know about the number, or why there is none.
    """

    status: FlowStatus
    l_s: float | None
    rating: str
    words: str = ""

    def in_unit(self, unit: str) -> float | None:
        """Return the flow in "L/s", "m3/s", "m3/h", "m3/d", "gpm", "MGD" or "cfs"."""
        return None if self.l_s is None else self.l_s / FLOWS_L_S[unit]


@dataclass(frozen=True)
class Device:
    """A device whose flow follows from one head.

    Parameters
    ----------
    name : str
        What it is.
    rating : str
        Its formula in feet and cubic feet a second.
    coefficient, exponent : float
        ``Q = coefficient x width x H**exponent``.
    low_ft, high_ft : float
        The head range in which the formula holds.
    crest_ft : float or None
        Length of a rectangular crest; None where the width is in the coefficient.
    contraction : float
        What each foot of head takes off the crest.
    submergence : float or None
        Largest ratio of the two heads of a flume for free flow.
    """

    name: str
    rating: str
    coefficient: float
    exponent: float
    low_ft: float
    high_ft: float
    crest_ft: float | None = None
    contraction: float = 0.0
    submergence: float | None = None

    def cfs(self, head_ft: float) -> float:
        """Return the rating's flow at a head, without regard to its range."""
        width = 1.0 if self.crest_ft is None else self.crest_ft - self.contraction * head_ft
        return float(self.coefficient * width * head_ft**self.exponent)


def v_notch_90() -> Device:
    """Return the fully contracted 90 degree V-notch weir with free fall.

    Returns
    -------
    Device
    """
    return Device("90 degree V-notch weir", "Q = 2.49 H^2.48", 2.49, 2.48, 0.2, 1.25)


def rectangular(
    crest: float, unit: str = "ft", *, contracted: bool = True, crest_height: float | None = None
) -> Device:
    """Return a sharp-crested rectangular weir after Francis.

    Parameters
    ----------
    crest : float
        Length of the crest.
    unit : str
        "ft", "in", "m", "cm" or "mm".
    contracted : bool
        Contracted at both ends; otherwise suppressed (as wide as its channel,
        with air under the nappe).
    crest_height : float, optional
        Height of the crest above the floor, same unit; a suppressed weir is
        rated up to 0.4 of it.

    Returns
    -------
    Device
        Rated from 0.2 ft (common practice: below it the nappe clings) up to a
        third of the crest.
    """
    length = _feet("crest", crest, unit)
    high = length / 3.0
    if contracted:
        return Device(
            "rectangular weir, contracted at both ends",
            f"Q = 3.33 (L - 0.2 H) H^1.5, L = {length:.4g} ft",
            3.33,
            1.5,
            LOWEST_HEAD_FT,
            high,
            length,
            0.2,
        )
    if crest_height is not None:
        high = min(high, 0.4 * _feet("crest_height", crest_height, unit))
    return Device(
        "rectangular weir, suppressed",
        f"Q = 3.33 L H^1.5, L = {length:.4g} ft",
        3.33,
        1.5,
        LOWEST_HEAD_FT,
        high,
        length,
    )


LOWEST_HEAD_FT = 0.2
SMALL_FLUMES: dict[str, tuple[float, float, float, float, float]] = {
    "3 in": (0.992, 1.547, 0.10, 1.5, 0.50),
    "6 in": (2.06, 1.58, 0.10, 1.5, 0.60),
    "9 in": (3.07, 1.53, 0.10, 2.0, 0.60),
}
LARGE_FLUMES: dict[str, tuple[float, float]] = {
    "1 ft": (1.0, 0.10),
    "1.5 ft": (1.5, 0.10),
    "2 ft": (2.0, 0.15),
    "3 ft": (3.0, 0.15),
    "4 ft": (4.0, 0.20),
    "5 ft": (5.0, 0.20),
    "6 ft": (6.0, 0.25),
    "7 ft": (7.0, 0.25),
    "8 ft": (8.0, 0.25),
}


def parshall(size: str) -> Device:
    """Return a Parshall flume by its throat.

    Parameters
    ----------
    size : str
        "3 in", "6 in", "9 in", "1 ft", "1.5 ft", then each foot up to "8 ft".

    Returns
    -------
    Device

    Raises
    ------
    InputError
        If the size is not one of them.
    """
    if size in SMALL_FLUMES:
        a, n, low, high, submergence = SMALL_FLUMES[size]
        rating = f"Q = {a} Ha^{n}"
        return Device(f"Parshall flume {size}", rating, a, n, low, high, submergence=submergence)
    if size not in LARGE_FLUMES:
        known = ", ".join([*SMALL_FLUMES, *LARGE_FLUMES])
        raise InputError("No rating is known for this flume.", {"size": [f"must be one of {known}"]})
    throat, low = LARGE_FLUMES[size]
    power = 1.522 * throat**0.026
    rating = f"Q = 4 W Ha^(1.522 W^0.026), W = {plain(throat)} ft"
    return Device(f"Parshall flume {size}", rating, 4.0 * throat, power, low, 2.5, submergence=0.70)


def ratings() -> dict[str, Any]:
    """Return every rating as plain data, for a client that turns heads into flows by itself.

    Returns
    -------
    dict
        ``v_notch_90``; ``rectangular`` without its crest; ``parshall`` by size.
    """
    sizes = [*SMALL_FLUMES, *LARGE_FLUMES]
    return {
        "v_notch_90": asdict(v_notch_90()),
        "rectangular": asdict(rectangular(1.0)),
        "parshall": {size: asdict(parshall(size)) for size in sizes},
    }


def _feet(name: str, value: float, unit: str) -> float:
    if unit not in LENGTHS_M:
        raise InputError("This unit of length is not known.", {"unit": [f"one of {', '.join(LENGTHS_M)}"]})
    need_number(name, value, above=0)
    return value if unit == "ft" else value * LENGTHS_M[unit] / LENGTHS_M["ft"]


def measure(device: Device, head: float, unit: str = "ft", *, tail: float | None = None) -> Flow:
    """Turn a head into a flow, or say why not.

    Parameters
    ----------
    device : Device
        From :func:`v_notch_90`, :func:`rectangular` or :func:`parshall`.
    head : float
        Head at the gauge, for a flume Ha at its set point upstream.
    unit : str
        "ft", "in", "m", "cm" or "mm".
    tail : float, optional
        Hb of a flume, same unit; without it free flow is assumed and said.

    Returns
    -------
    Flow

    Raises
    ------
    InputError
        If the unit is unknown or a head is not above zero.
    """
    height = _feet("head", head, unit)
    if not device.low_ft <= round(height, 9) <= device.high_ft:
        span = f"{plain(round(device.low_ft, 4))} to {plain(round(device.high_ft, 4))} ft"
        words = f"A head of {height:.3g} ft is outside the rating of {span}: no flow can be given."
        return Flow("out of range", None, device.rating, words)
    words = ""
    if device.submergence is not None:
        if tail is None:
            words = "Free flow is assumed: the tail water was not read."
        else:
            need_number("tail", tail, least=0)
            ratio = tail / head
            if ratio > device.submergence:
                words = (
                    f"The tail water stands at {100 * ratio:.0f} % of the head, above "
                    f"{100 * device.submergence:.0f} %: the flume is submerged and no flow can be given."
                )
                return Flow("submerged", None, device.rating, words)
    return Flow("ok", device.cfs(height) * FLOWS_L_S["cfs"], device.rating, words)


def head_error_percent(
    device: Device, head: float, error: float, unit: str = "ft"
) -> tuple[float, float] | None:
    """Show what an error of the head does to the flow.

    Parameters
    ----------
    device : Device
        The device.
    head, error : float
        Head and its error, same unit.
    unit : str
        Unit of both.

    Returns
    -------
    tuple of float or None
        Percent below and above, e.g. ``(-9.6, 10.2)``; None outside the rating.
    """
    height, slip = _feet("head", head, unit), _feet("error", error, unit)
    if not device.low_ft <= height - slip or not height + slip <= device.high_ft:
        return None
    middle = device.cfs(height)
    return (
        100.0 * (device.cfs(height - slip) / middle - 1.0),
        100.0 * (device.cfs(height + slip) / middle - 1.0),
    )


def bucket_and_watch(volume: float, unit: str, seconds: float) -> Flow:
    """Return the flow from a filled vessel and the time it took.

    Parameters
    ----------
    volume : float
        Volume caught.
    unit : str
        "L", "m3", "gal" (US) or "ft3".
    seconds : float
        Time to fill it.

    Returns
    -------
    Flow
    """
    if unit not in VOLUMES_L:
        raise InputError("This unit of volume is not known.", {"unit": [f"one of {', '.join(VOLUMES_L)}"]})
    need_number("volume", volume, above=0)
    need_number("seconds", seconds, above=0)
    return Flow("ok", volume * VOLUMES_L[unit] / seconds, "Q = volume / time")


def totalizer_volume(
    start: int, end: int, *, digits: int, multiplier: float = 1.0, rolled: bool = True
) -> float:
    """Return the volume between two readings of a totalizer.

    Parameters
    ----------
    start, end : int
        The register as read.
    digits : int
        Number of digits of the register.
    multiplier : float
        What one count stands for, e.g. 10 gal.
    rolled : bool
        Whether a smaller end means that the register went through zero once
        (a meter that was changed is two periods, not a rollover).

    Returns
    -------
    float
        Volume in the unit of the multiplier.

    Raises
    ------
    InputError
        If a reading does not fit the register, or the end is smaller and no
        rollover was meant.
    """
    size: int = 10**digits
    for name, reading in (("start", start), ("end", end)):
        if not 0 <= reading < size:
            raise InputError("The reading does not fit the register.", {name: [f"needs 0 to {size - 1}"]})
    need_number("multiplier", multiplier, above=0)
    if end < start and not rolled:
        raise InputError("The totalizer ran backwards.", {"end": ["is smaller than start"]})
    counts = (end - start) % size
    return counts * multiplier
