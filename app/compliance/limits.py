"""Limits of a discharge point, each in force from a day and from a source.

A limit is never edited: a new permit adds limits with a later ``effective_from``
and the old ones stay, so that an old sample is judged by the limit of its own
day (a renewal must not quietly re-judge the past).

A point may have a daily maximum, a monthly average, an instantaneous maximum
and a daily mass limit at the same time; each is a *basis* of its own and all
that apply are tested. Kinds of limits and their order of authority: 40 CFR
403.5 (prohibitions and local limits), Parts 405 to 471 (categorical), and the
permit; the source is kept with each limit as the permit states it.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date
from fractions import Fraction
from typing import Literal

from app.compliance.exact import exact, need_number
from app.errors import Fields, InputError

Basis = Literal["daily_maximum", "monthly_average", "instantaneous", "mass"]

BASIS_WORDS: dict[str, str] = {
    "daily_maximum": "daily maximum",
    "monthly_average": "monthly average",
    "instantaneous": "instantaneous maximum",
    "mass": "daily mass limit",
}


@dataclass(frozen=True)
class Limit:
    """One limit of one discharge point.

    Parameters
    ----------
    basis : {"daily_maximum", "monthly_average", "instantaneous", "mass"}
        What is held against it.
    value : float
        The limit, above zero; equal to it is compliance.
    effective_from : datetime.date
        First day in force.
    source : str
        Where it stands, e.g. "permit 14, part 2".
    unit : str
        Unit of the value; a mass limit is usually in kg/d.
    effective_until : datetime.date, optional
        Last day in force; open when absent.

    Raises
    ------
    InputError
        If the basis is unknown, the value is not above zero, the source is
        empty or the last day lies before the first.
    """

    basis: Basis
    value: float
    effective_from: date
    source: str
    unit: str = "mg/L"
    effective_until: date | None = None

    def __post_init__(self) -> None:
        """Refuse a limit that could not be defended."""
        wrong: Fields = {}
        if self.basis not in BASIS_WORDS:
            wrong["basis"] = [f"must be one of {', '.join(BASIS_WORDS)}"]
        try:
            need_number("value", self.value, above=0)
        except InputError as error:
            wrong.update(error.fields)
        if not self.source.strip():
            wrong["source"] = ["say where the limit stands (permit and page)"]
        if self.effective_until is not None and self.effective_until < self.effective_from:
            wrong["effective_until"] = ["must not lie before effective_from"]
        if wrong:
            raise InputError("This limit cannot be used.", wrong)

    @property
    def exact_value(self) -> Fraction:
        """The limit as an exact fraction."""
        return exact(self.value)

    def in_force(self, day: date) -> bool:
        """Tell whether the limit is in force on a day."""
        until = self.effective_until
        return self.effective_from <= day and (until is None or day <= until)


def limit_on(limits: Iterable[Limit], day: date, basis: Basis) -> Limit | None:
    """Return the limit of a basis in force on a day.

    Parameters
    ----------
    limits : iterable of Limit
        All limits of one discharge point, in the order in which they were set.
    day : datetime.date
        The day of the sample in the programme's time zone.
    basis : str
        See :class:`Limit`.

    Returns
    -------
    Limit or None
        The one that came into force last; of two from the same day the one set
        later. None when no limit of that basis is in force.
    """
    found: Limit | None = None
    for limit in limits:
        if limit.basis != basis or not limit.in_force(day):
            continue
        if found is None or limit.effective_from >= found.effective_from:
            found = limit
    return found


def limits_on(limits: Iterable[Limit], day: date) -> list[Limit]:
    """Return every limit in force on a day, at most one of each basis.

    Parameters
    ----------
    limits : iterable of Limit
        All limits of one discharge point, in the order in which they were set.
    day : datetime.date
        The day of the sample in the programme's time zone.

    Returns
    -------
    list of Limit
        In the order of :data:`BASIS_WORDS`.
    """
    kept = list(limits)
    found = (limit_on(kept, day, basis) for basis in BASIS_WORDS)  # type: ignore[arg-type]
    return [limit for limit in found if limit is not None]


def equivalent_concentration_mg_l(mass_kg_per_day: float, flow_m3_per_day: float) -> float:
    """Return the concentration at which a flow carries a mass limit.

    Parameters
    ----------
    mass_kg_per_day : float
        The mass limit.
    flow_m3_per_day : float
        Flow of the same day, above zero.

    Returns
    -------
    float
        mg/L.
    """
    need_number("flow_m3_per_day", flow_m3_per_day, above=0)
    need_number("mass_kg_per_day", mass_kg_per_day, least=0)
    return 1000.0 * mass_kg_per_day / flow_m3_per_day


def combined_wastestream_limit(
    streams: Iterable[tuple[float, float]], dilution_flow: float, total_flow: float
) -> float:
    """Return the alternative limit where regulated and other streams combine.

    ``C_T = (sum C_i F_i / sum F_i) (F_T - F_D) / F_T``. Dilution as a substitute
    for treatment is barred (40 CFR 403.6(d)).

    Parameters
    ----------
    streams : iterable of (float, float)
        For each regulated stream its categorical limit (mg/L) and its average
        daily flow.
    dilution_flow : float
        Flow of the dilution streams, same unit.
    total_flow : float
        Flow at the combined point, same unit.

    Returns
    -------
    float
        mg/L.

    Raises
    ------
    InputError
        If a flow is negative, nothing is regulated, or the parts exceed the total.

    References
    ----------
    40 CFR 403.6(e)(1)(i), combined wastestream formula.
    """
    pairs = list(streams)
    regulated = sum(flow for _, flow in pairs)
    need_number("streams", regulated, above=0)
    need_number("dilution_flow", dilution_flow, least=0)
    need_number("total_flow", total_flow, above=0)
    if any(limit < 0 or flow < 0 for limit, flow in pairs):
        raise InputError("Limits and flows are not negative.", {"streams": ["must not be negative"]})
    if exact(dilution_flow) + sum(exact(flow) for _, flow in pairs) > exact(total_flow):
        raise InputError(
            "The streams carry more than the combined point.",
            {"total_flow": ["must be at least the sum of the streams"]},
        )
    share = (total_flow - dilution_flow) / total_flow
    return sum(limit * flow for limit, flow in pairs) / regulated * share
