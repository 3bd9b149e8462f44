"""The checks of a run: verification, duplicates, spikes, blank; and bracketing.

A verification is a standard of known COD digested like a sample. Duplicates are
judged by their relative percent difference, near the reporting level by their
difference. A spike recovery takes the added volume into account,

    R = 100 [C_spiked (Vs + Vsp) - C Vs] / (C_std Vsp),

and is not judged when less than a quarter of the native value was added (house
rule; EPA 200.7, 9.4.3 has 30 %). Verifications stand at the start, after every
ten analyses and at the end (EPA 410.4 rev. 2.0, 9.3.4): a failed one holds
everything since the last good one.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from app.chemistry.problems import Problems

NEAR_REPORTING_LEVELS = 5.0
#: A mean this small beside the difference is rounding.
ROUNDING = 1e-12
SMALLEST_SPIKE_SHARE = 0.25
ANALYSES_PER_BRACKET = 10


@dataclass(frozen=True)
class VerificationCheck:
    """A verification and whether it holds.

    Parameters
    ----------
    expected : float
        mg/L.
    found, recovery_percent : float or None
        None where the curve gives no COD.
    ok : bool
        Within the policy.
    """

    expected: float
    found: float | None
    recovery_percent: float | None
    ok: bool


@dataclass(frozen=True)
class DuplicateCheck:
    """Two measurements of one sample and whether they agree.

    Parameters
    ----------
    samples : tuple of str
        Their names.
    rpd_percent : float or None
        None where their mean is not above zero.
    ok : bool or None
        None where one of them has no COD.
    """

    samples: tuple[str, str]
    rpd_percent: float | None
    ok: bool | None


@dataclass(frozen=True)
class SpikeCheck:
    """A spike recovery and whether it holds.

    Parameters
    ----------
    unspiked, spiked : str
        The samples.
    recovery_percent : float or None
        None where one of them has no COD.
    ok : bool or None
        None when not judged.
    """

    unspiked: str
    spiked: str
    recovery_percent: float | None
    ok: bool | None


@dataclass(frozen=True)
class BlankCheck:
    """The digested blanks of a run.

    Parameters
    ----------
    mean : float
        What is subtracted, in AU.
    sd : float or None
        None for a single blank.
    """

    mean: float
    sd: float | None


def blank_check(blanks: Sequence[float] | None) -> BlankCheck | None:
    """Summarise the digested blanks; None when the instrument was zeroed on the blank.

    Parameters
    ----------
    blanks : sequence of float or None
        Absorbances.

    Returns
    -------
    BlankCheck or None
    """
    if blanks is None:
        return None
    mean = math.fsum(blanks) / len(blanks)
    if len(blanks) == 1:
        return BlankCheck(mean, None)
    return BlankCheck(mean, math.sqrt(math.fsum((b - mean) ** 2 for b in blanks) / (len(blanks) - 1)))


def verification_check(expected: float, found: float | None, within_percent: float) -> VerificationCheck:
    """Judge a verification by its recovery.

    Parameters
    ----------
    expected : float
        mg/L, above zero.
    found : float or None
        mg/L; None where the curve gives none, which fails.
    within_percent : float
        Largest deviation from 100 %.

    Returns
    -------
    VerificationCheck
    """
    if found is None:
        return VerificationCheck(expected, None, None, False)
    recovery = 100.0 * found / expected
    return VerificationCheck(expected, found, recovery, abs(recovery - 100.0) <= within_percent)


def duplicate_check(
    samples: tuple[str, str], a: float | None, b: float | None, reporting_level: float, rpd_percent: float
) -> DuplicateCheck:
    """Judge duplicates by relative percent difference or, near the reporting level, by difference.

    Parameters
    ----------
    samples : tuple of str
        Names.
    a, b : float or None
        mg/L of the sample.
    reporting_level : float
        Lower end of the working range times the larger dilution factor.
    rpd_percent : float
        Largest relative percent difference, of the mean of both.

    Returns
    -------
    DuplicateCheck
    """
    if a is None or b is None:
        return DuplicateCheck(samples, None, None)
    difference, mean = abs(a - b), (a + b) / 2.0
    rpd = 100.0 * difference / mean if mean > ROUNDING * difference else None
    near = min(a, b) < NEAR_REPORTING_LEVELS * reporting_level and difference <= reporting_level
    return DuplicateCheck(samples, rpd, near or (rpd is not None and rpd <= rpd_percent))


def spike_recovery(
    native: float, spiked: float, sample_ml: float, spike_ml: float, spike_mg_l: float
) -> float:
    """Return the recovery of a spike in percent, with the added volume counted.

    Parameters
    ----------
    native, spiked : float
        mg/L of the sample without and with the addition.
    sample_ml, spike_ml : float
        Volumes brought together.
    spike_mg_l : float
        COD of what was added.

    Returns
    -------
    float
    """
    return 100.0 * (spiked * (sample_ml + spike_ml) - native * sample_ml) / (spike_mg_l * spike_ml)


def spike_check(
    names: tuple[str, str],
    found: tuple[float | None, float | None],
    volumes_ml: tuple[float, float],
    spike_mg_l: float,
    percent: tuple[float, float],
) -> SpikeCheck:
    """Judge a spike recovery.

    Parameters
    ----------
    names : tuple of str
        Unspiked and spiked sample.
    found : tuple of float or None
        Their COD in mg/L.
    volumes_ml : tuple of float
        Sample and spike.
    spike_mg_l : float
        COD of what was added.
    percent : tuple of float
        Lowest and highest recovery.

    Returns
    -------
    SpikeCheck
        ``ok`` is None when what was added, in mg/L of the mixture, is under a
        quarter of the native value.
    """
    native, spiked = found
    if native is None or spiked is None:
        return SpikeCheck(*names, None, None)
    recovery = spike_recovery(native, spiked, *volumes_ml, spike_mg_l)
    added = spike_mg_l * volumes_ml[1] / (volumes_ml[0] + volumes_ml[1])
    if added < SMALLEST_SPIKE_SHARE * native:
        return SpikeCheck(*names, recovery, None)
    return SpikeCheck(*names, recovery, percent[0] <= recovery <= percent[1])


def verifications_needed(analyses: int, every: int = ANALYSES_PER_BRACKET) -> int:
    """Return how many verifications bracket a number of analyses.

    Parameters
    ----------
    analyses : int
        Sample analyses after one calibration.
    every : int
        Largest number between two verifications.

    Returns
    -------
    int
        One at the start, one after every ten and one at the end; the last is
        not doubled when the number is a multiple of ten. None for nothing.

    Raises
    ------
    InputError
        Naming the field.
    """
    wrong = Problems()
    wrong.number("analyses", analyses, least=0)
    wrong.number("every", every, least=1)
    wrong.stop("No schedule follows from this.")
    return 0 if analyses == 0 else 1 + math.ceil(analyses / every)


@dataclass(frozen=True)
class Event:
    """One step of a sequence on the instrument, in time order.

    Parameters
    ----------
    name : str
        Of the analysis or the verification.
    verified : bool or None
        Whether a verification held; None for an analysis.
    """

    name: str
    verified: bool | None = None


@dataclass(frozen=True)
class Bracketing:
    """Which analyses stand between good verifications.

    Parameters
    ----------
    good : tuple of str
        Bracketed on both sides by verifications that held.
    held : tuple of str
        Touching a failed verification: to be done again after correction.
    open : tuple of str
        Waiting for the verification that closes their bracket, or begun
        without one.
    too_long : tuple of str
        Analyses beyond ten in one bracket; they are good or held besides.
    """

    good: tuple[str, ...]
    held: tuple[str, ...]
    open: tuple[str, ...]
    too_long: tuple[str, ...]


def bracket(sequence: Sequence[Event], every: int = ANALYSES_PER_BRACKET) -> Bracketing:
    """Sort analyses by the verifications on both sides of them.

    Parameters
    ----------
    sequence : sequence of Event
        In the order in which the instrument did them.
    every : int
        Largest number of analyses between two verifications.

    Returns
    -------
    Bracketing
        An analysis is good when the verification before it and the one after
        it held; held when either failed; open when either is missing.
    """
    good: list[str] = []
    held: list[str] = []
    unclosed: list[str] = []
    too_long: list[str] = []
    before: bool | None = None
    waiting: list[str] = []
    for event in sequence:
        if event.verified is None:
            waiting.append(event.name)
            if len(waiting) > every:
                too_long.append(event.name)
            continue
        if before is False or not event.verified:
            held += waiting
        elif before is None:
            unclosed += waiting
        else:
            good += waiting
        before, waiting = event.verified, []
    (held if before is False else unclosed).extend(waiting)
    return Bracketing(tuple(good), tuple(held), tuple(unclosed), tuple(too_long))
