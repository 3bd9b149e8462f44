"""Words and moments as every paper writes them; digits are never touched here."""

from __future__ import annotations

from datetime import datetime
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

from app.documents.data import Dilution, Measured, Sample
from app.documents.letters import held_together, printable
from app.errors import InputError

NOT_RECORDED = "not recorded"


def zone_named(name: str) -> ZoneInfo:
    """Return a time zone by its IANA name.

    Raises
    ------
    InputError
        If there is none of that name.
    """
    try:
        return ZoneInfo(name)
    except (ZoneInfoNotFoundError, ValueError, OSError) as error:
        raise InputError(
            "This time zone is not known.", {"zone": ["use a name like America/Denver"]}
        ) from error


def instant(text: str) -> datetime:
    """Return the moment behind an RFC 3339 text.

    Raises
    ------
    InputError
        If it is no moment or has no offset.
    """
    try:
        at = datetime.fromisoformat(text)
    except ValueError as error:
        raise InputError(
            "This is not a moment.", {"at": [f"{text!r}: use 2031-06-01T14:05:00-06:00"]}
        ) from error
    if at.tzinfo is None:
        raise InputError("A moment needs its offset.", {"at": [f"{text!r} has no offset, e.g. -06:00"]})
    return at


def moment(text: str | None, zone: str) -> str:
    """Return a moment as paper shows it, e.g. ``2031-06-01 14:05 -06:00``.

    Parameters
    ----------
    text : str or None
        RFC 3339 with an offset.
    zone : str
        IANA name of the programme's zone.

    Returns
    -------
    str
        In that zone with its offset on that day, held together; "not recorded"
        for None.

    Raises
    ------
    InputError
        If the text is no moment or the zone is not known.
    """
    if not text:
        return NOT_RECORDED
    local = instant(text).astimezone(zone_named(zone))
    offset = local.strftime("%z")
    return held_together(f"{local:%Y-%m-%d %H:%M} {offset[:3]}:{offset[3:5]}")


def period(sample: Sample, zone: str) -> str:
    """Return when a sample was taken: a moment, or a period with both ends."""
    end = moment(sample.collected_at, zone)
    if sample.kind == "grab":
        return f"grab, {end}"
    return f"composite, {moment(sample.period_start, zone)} to {end}"


def number_with_unit(text: str, unit: str) -> str:
    """Return a reported number with its unit, never to be parted by a line break.

    Of a unit of several words ("AU per mg/L") the first stays with the number.
    """
    first, _, rest = unit.partition(" ")
    held = held_together(f"{text} {first}".strip())
    return f"{held} {printable(rest)}" if rest else held


def reading(measured: Measured) -> str:
    """Return one reading with its name, e.g. ``temperature 3.8 °C``."""
    return f"{printable(measured.name)} {number_with_unit(measured.text, measured.unit)}"


def listed(parts: tuple[str, ...]) -> str:
    """Return parts in one line, or "not recorded"."""
    return "; ".join(part for part in parts if part) or NOT_RECORDED


def said(text: str | None) -> str:
    """Return a person's text as it can be printed, or "not recorded"."""
    return printable(text) if text and text.strip() else NOT_RECORDED


def dilution_words(dilution: Dilution) -> str:
    """Return the dilution in words, e.g. ``10 mL made up to 100 mL, factor 10``."""
    if not dilution.steps:
        return f"none (factor {printable(dilution.factor)})"
    steps = [
        f"{number_with_unit(s.pipette_ml, 'mL')} made up to {number_with_unit(s.flask_ml, 'mL')}"
        for s in dilution.steps
    ]
    return f"{', of that '.join(steps)}, factor {printable(dilution.factor)}".replace(
        "factor ", "factor\u00a0"
    )


def duration_words(minutes: int) -> str:
    """Return a heating time: whole hours as hours, else minutes."""
    hours, rest = divmod(minutes, 60)
    return held_together(f"{hours} h" if rest == 0 and hours else f"{minutes} min")


def coverage_words(factor: str, dof: str | None, percent: str) -> str:
    """Return the coverage factor and where it comes from."""
    if dof is None:
        source = f"normal distribution, {percent} %"
    else:
        source = f"Student's t, {dof} effective degrees of freedom, {percent} %"
    return f"{held_together(f'k = {factor}')} ({source.replace(' %', chr(0xA0) + '%')})"
