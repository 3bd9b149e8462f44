"""What to do with a sample that has no result yet.

Over range: dilute more. Below: dilute less, or accept the bound when it was
not diluted. Disagreeing tubes: digest again. Which dilution comes next is a
forecast, made where the sample's history is known; the rule here knows only
this tube and stands in until a better one is passed.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from app.chemistry.problems import in_words

Status = Literal["ok", "over", "below", "disagree"]
Action = Literal["dilute more", "dilute less", "digest again", "accept the bound"]

#: Factors of one glassware step or two, in the order of a shelf.
LADDER: tuple[float, ...] = (
    1,
    2,
    5,
    10,
    20,
    50,
    100,
    200,
    500,
    1000,
    2000,
    5000,
    10000,
    20000,
    50000,
    100000,
)
#: Share of the usable top that a repeat aims at.
AIM = 0.5
#: An exhausted tube only says "more": at least this many times (practice: 5 to 10).
EXHAUSTED_STEP = 10.0


@dataclass(frozen=True)
class Seen:
    """What a tube has shown, for choosing the next dilution.

    Parameters
    ----------
    sample : str
        Its name in the run.
    status : {"over", "below", "disagree"}
        Why there is no result.
    dilution_factor : float
        Of this tube.
    in_tube : float or None
        COD in the tube in mg/L; None where the curve gives none.
    exhausted : bool
        Whether the dichromate was used up, so that ``in_tube`` means nothing.
    low, top : float
        Lower end of the working range, and the COD above which a reading is
        over range, mg/L in the tube.
    """

    sample: str
    status: Status
    dilution_factor: float
    in_tube: float | None
    exhausted: bool
    low: float
    top: float


@dataclass(frozen=True)
class NextDilution:
    """The dilution to try next.

    Parameters
    ----------
    dilution_factor : float
        At least 1.
    why : str
        One sentence.
    """

    dilution_factor: float
    why: str


NextDilutionRule = Callable[[Seen], NextDilution | None]


@dataclass(frozen=True)
class Advice:
    """What to do with an over, below or disagreeing sample.

    Parameters
    ----------
    action : str
        ``dilute more``, ``dilute less``, ``digest again`` or ``accept the
        bound``.
    dilution_factor : float or None
        For the repeat; None where nothing is repeated.
    why : str
        One or two sentences.
    """

    action: Action
    dilution_factor: float | None
    why: str


def _at_least(factor: float) -> float:
    return next((step for step in LADDER if step >= factor * (1 - 1e-9)), factor)


def next_dilution_by_rule(seen: Seen) -> NextDilution | None:
    """Choose the next dilution from this tube alone.

    Parameters
    ----------
    seen : Seen
        What it showed.

    Returns
    -------
    NextDilution or None
        Exhausted: at least ten times more. Over but still readable: half the
        usable top. Below: the smallest factor that cannot go over, since the
        sample is known to be under the lower end. None for tubes that
        disagree, whose dilution was not the trouble.
    """
    factor = seen.dilution_factor
    if seen.status == "over":
        if seen.exhausted or seen.in_tube is None:
            return NextDilution(
                _at_least(EXHAUSTED_STEP * factor),
                "The oxidant was used up, so this tube only shows that at least ten times more is needed.",
            )
        share = in_words(100 * AIM)
        wanted = _at_least(factor * seen.in_tube / (AIM * seen.top))
        return NextDilution(wanted, f"By this reading the repeat lands at or under {share} % of the range.")
    if seen.status == "below":
        wanted = min(factor, _at_least(max(1.0, factor * seen.low / seen.top)))
        return NextDilution(wanted, "The sample lies under this bound, so the repeat cannot go over range.")
    return None


def advise(seen: Seen, rule: NextDilutionRule = next_dilution_by_rule) -> Advice:
    """Say what to do with a sample that has no result.

    Parameters
    ----------
    seen : Seen
        What its tubes showed.
    rule : callable
        Chooses the next dilution; may answer None.

    Returns
    -------
    Advice
    """
    factor = seen.dilution_factor
    if seen.status == "disagree":
        return Advice(
            "digest again",
            factor,
            "The tubes disagree: look for a cause; without one, digest two more at the same dilution.",
        )
    found = rule(seen)
    if seen.status == "over":
        if found is None:
            return Advice("dilute more", None, "The sample is over range: dilute more and digest again.")
        return Advice("dilute more", found.dilution_factor, found.why)
    if found is None or found.dilution_factor >= factor:
        return Advice(
            "accept the bound",
            None,
            "A smaller dilution would not lower the bound: report it, or use a recipe with a lower range.",
        )
    return Advice("dilute less", found.dilution_factor, found.why)
