r"""A result beside its limit: the verdict, the rule behind it and the risk.

*Exceeding* means strictly above the limit; equal to it is compliance. The
number compared is the one the certificate prints, so that paper and decision
agree.

Three rules, each a setting of the programme:

``simple``
    The reported number decides (simple acceptance). Usual in United States
    pretreatment practice, where the limit already carries the risk [1]_.
``guarded``
    Compliance is stated only up to :math:`T - w`, which guards the sewer;
    between there and the limit the verdict is undecided.
``guarded_rejection``
    A violation is stated only above :math:`T + w`, which guards the discharger;
    between the limit and there the verdict is undecided.

The guard band is ``w = factor x U`` (or ``factor x u``), by default the whole
expanded uncertainty, which holds the risk of a wrong statement under 2.5 % [1]_.
Whatever the rule, the band and the probability that the true value lies above
the limit are given as information.

A result known only as a bound decides when the bound lies on the telling side
of the limit and is *undecided* otherwise: such a sample is analysed again and
is never counted as compliant.

References
----------
.. [1] ILAC-G8:09/2019, Guidelines on decision rules and statements of
   conformity, section 4.2; JCGM 106:2012, sections 8.2 and 8.3.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace
from datetime import date
from fractions import Fraction
from typing import Literal

from scipy.special import ndtr, stdtr

from app.compliance.exact import exact, need_number, plain
from app.compliance.limits import BASIS_WORDS, Limit, limits_on
from app.errors import InputError

Status = Literal["ok", "below", "over", "disagree"]
Word = Literal["within", "above", "undecided", "no limit"]
State = Literal["pass", "conditional pass", "conditional fail", "fail"]
NO_LIMIT = "No limit was in force on the day of the sample."


@dataclass(frozen=True)
class Outcome:
    """One result as it is held against a limit.

    Parameters
    ----------
    status : {"ok", "below", "over", "disagree"}
        As ``calculate`` gives it.
    value : float or None
        The reported number; for ``below`` and ``over`` the bound. May be None
        only when the tubes disagree.
    u : float, optional
        Standard uncertainty, same unit.
    expanded_u : float, optional
        Expanded uncertainty at about 95 %.
    dof : float, optional
        Effective degrees of freedom; absent: a normal distribution.
    unit : str
        Unit of the value.
    """

    status: Status
    value: float | None
    u: float | None = None
    expanded_u: float | None = None
    dof: float | None = None
    unit: str = "mg/L"

    def __post_init__(self) -> None:
        """Refuse an outcome without the number its status promises."""
        if self.value is None:
            if self.status != "disagree":
                raise InputError("A result needs its number or its bound.", {"value": ["is missing"]})
        else:
            need_number("value", self.value)
        for name in ("u", "expanded_u"):
            number = getattr(self, name)
            if number is not None:
                need_number(name, number, least=0)


@dataclass(frozen=True)
class DecisionRule:
    """How a number and its uncertainty become a verdict.

    Parameters
    ----------
    name : {"simple", "guarded", "guarded_rejection"}
        See the module.
    words : str
        The rule in words, as a certificate prints it.
    source : str
        Where the rule and its number come from.
    guard_factor : float
        Width of the guard band as a multiple of ``guard_of``.
    guard_of : {"expanded_u", "u"}
        What the factor multiplies.
    """

    name: Literal["simple", "guarded", "guarded_rejection"]
    words: str
    source: str
    guard_factor: float = 1.0
    guard_of: Literal["expanded_u", "u"] = "expanded_u"

    def width(self, outcome: Outcome) -> float | None:
        """Return the guard band of an outcome, or None without an uncertainty."""
        base = outcome.expanded_u if self.guard_of == "expanded_u" else outcome.u
        return None if base is None else self.guard_factor * base


SIMPLE = DecisionRule(
    "simple",
    "Simple acceptance: the reported value is compared with the limit; a value equal to the limit "
    "complies; the uncertainty is stated but neither added nor subtracted.",
    "ILAC-G8:09/2019, 4.2.1; common practice in United States pretreatment",
)
GUARDED = DecisionRule(
    "guarded",
    "Guarded acceptance: compliance is stated only up to the limit less the guard band.",
    "ILAC-G8:09/2019, 4.2.2, guard band w = U",
)
GUARDED_REJECTION = DecisionRule(
    "guarded_rejection",
    "Guarded rejection: a value is stated to be above the limit only beyond the limit plus the guard band.",
    "JCGM 106:2012, 8.3.3, guard band w = U",
)
RULES: dict[str, DecisionRule] = {rule.name: rule for rule in (SIMPLE, GUARDED, GUARDED_REJECTION)}


def rule_named(
    name: str, guard_factor: float | None = None, guard_of: Literal["expanded_u", "u"] | None = None
) -> DecisionRule:
    """Return the rule a programme has chosen, with its own guard band if it set one.

    Parameters
    ----------
    name : str
        A key of :data:`RULES`.
    guard_factor : float, optional
        The programme's own width, zero or more.
    guard_of : {"expanded_u", "u"}, optional
        What the factor multiplies.

    Returns
    -------
    DecisionRule

    Raises
    ------
    InputError
        If the rule is unknown or the factor is negative.
    """
    if name not in RULES:
        raise InputError(
            "This decision rule is not known.", {"decision_rule": [f"one of {', '.join(RULES)}"]}
        )
    rule = RULES[name]
    if guard_factor is not None:
        need_number("guard_factor", guard_factor, least=0)
        rule = replace(rule, guard_factor=guard_factor, source="set by the programme")
    return rule if guard_of is None else replace(rule, guard_of=guard_of)


@dataclass(frozen=True)
class Verdict:
    """What is said about one result and one limit, and why.

    Parameters
    ----------
    verdict : {"within", "above", "undecided", "no limit"}
        The word that is shown.
    why : str
        The reason in one sentence.
    rule : str
        The decision rule in words.
    rule_name, rule_source : str
        Its name among :data:`RULES` and its source.
    basis, limit, unit, effective_from, source : optional
        The limit that was used; absent when there is none.
    guard_band : float or None
        Width of the guard band; information under simple acceptance.
    accept_up_to, reject_above : float or None
        The two edges the rule used.
    probability_above : float or None
        Probability that the true value lies above the limit.
    four_state : str or None
        "pass", "conditional pass", "conditional fail" or "fail" with the guard
        band on both sides; information.
    """

    verdict: Word
    why: str
    rule: str
    rule_name: str
    rule_source: str
    basis: str | None = None
    limit: float | None = None
    unit: str | None = None
    effective_from: date | None = None
    source: str | None = None
    guard_band: float | None = None
    accept_up_to: float | None = None
    reject_above: float | None = None
    probability_above: float | None = None
    four_state: State | None = None


def probability_above(value: float, u: float, limit: float, dof: float | None = None) -> float:
    """Return the probability that the true value lies above a limit.

    Parameters
    ----------
    value, limit : float
        Measured value and limit, same unit.
    u : float
        Standard uncertainty, zero or more.
    dof : float, optional
        Effective degrees of freedom (a scaled and shifted t); absent: normal.

    Returns
    -------
    float
        Between 0 and 1; with ``u`` zero it is 0 or 1.

    References
    ----------
    JCGM 106:2012, section 7.
    """
    if u == 0:
        return 1.0 if value > limit else 0.0
    z = (value - limit) / u
    return float(ndtr(z) if dof is None or math.isinf(dof) else stdtr(dof, z))


def four_state(value: float, limit: float, guard_band: float) -> State:
    """Return the statement with a guard band on both sides of the limit.

    Parameters
    ----------
    value, limit, guard_band : float
        Same unit.

    Returns
    -------
    {"pass", "conditional pass", "conditional fail", "fail"}

    References
    ----------
    ILAC-G8:09/2019, 4.2.3 (non-binary statement with a guard band).
    """
    x, t, w = exact(value), exact(limit), exact(guard_band)
    if x <= t - w:
        return "pass"
    if x <= t:
        return "conditional pass"
    return "conditional fail" if x <= t + w else "fail"


def _edges(limit: Limit, rule: DecisionRule, width: float | None) -> tuple[Fraction, Fraction]:
    t, w = limit.exact_value, exact(width or 0.0)
    accept = t - w if rule.name == "guarded" else t
    reject = t + w if rule.name == "guarded_rejection" else t
    return accept, reject


def _word(outcome: Outcome, accept: Fraction, reject: Fraction) -> Word:
    if outcome.value is None or outcome.status == "disagree":
        return "undecided"
    x = exact(outcome.value)
    if x <= accept and outcome.status != "over":
        return "within"
    if x > reject and outcome.status != "below":
        return "above"
    return "undecided"


def _why(outcome: Outcome, limit: Limit, word: Word) -> str:
    named = f"the {BASIS_WORDS[limit.basis]} of {plain(limit.value)} {limit.unit}"
    if outcome.value is None or outcome.status == "disagree":
        return f"The tubes disagree, so nothing is said about {named}: analyse again."
    sign = {"below": "below ", "over": "over "}.get(outcome.status, "")
    shown = f"{sign}{plain(outcome.value)} {outcome.unit}"
    shown = shown[0].upper() + shown[1:]
    if word == "undecided":
        if outcome.status == "ok":
            return f"{shown} lies inside the guard band at {named}: not decided by this rule."
        return f"{shown} does not decide against {named}: analyse again."
    if word == "above":
        return f"{shown} is above {named}."
    equal = outcome.status == "ok" and exact(outcome.value) == limit.exact_value
    return f"{shown} is {'equal to' if equal else 'within'} {named}{', which complies' if equal else ''}."


def _risk(outcome: Outcome, limit: Limit) -> float | None:
    if outcome.status != "ok" or outcome.value is None or outcome.u is None:
        return None
    return probability_above(outcome.value, outcome.u, limit.value, outcome.dof)


def _state(outcome: Outcome, limit: Limit, width: float | None) -> State | None:
    if outcome.status != "ok" or outcome.value is None or width is None:
        return None
    return four_state(outcome.value, limit.value, width)


def decide(outcome: Outcome, limit: Limit | None, rule: DecisionRule = SIMPLE) -> Verdict:
    """Hold one result against one limit.

    Parameters
    ----------
    outcome : Outcome
        The result as the certificate prints it.
    limit : Limit or None
        The limit in force on the sample's day; None where there is none.
    rule : DecisionRule
        The programme's rule.

    Returns
    -------
    Verdict

    Raises
    ------
    InputError
        If the units differ, or a guarded rule meets a number without the
        uncertainty its guard band needs.
    """
    blank = Verdict("no limit", NO_LIMIT, rule.words, rule.name, rule.source)
    if limit is None:
        return blank
    if outcome.unit != limit.unit:
        words = f"must be in {limit.unit}, as the limit is, not in {outcome.unit}"
        raise InputError("The result and its limit are in different units.", {"unit": [words]})
    width = rule.width(outcome)
    if width is None and rule.name != "simple" and outcome.status == "ok":
        raise InputError("A guarded rule needs the uncertainty.", {rule.guard_of: ["is missing"]})
    accept, reject = _edges(limit, rule, width)
    word = _word(outcome, accept, reject)
    return replace(
        blank,
        verdict=word,
        why=_why(outcome, limit, word),
        basis=limit.basis,
        limit=limit.value,
        unit=limit.unit,
        effective_from=limit.effective_from,
        source=limit.source,
        guard_band=width,
        accept_up_to=float(accept),
        reject_above=float(reject),
        probability_above=_risk(outcome, limit),
        four_state=_state(outcome, limit, width),
    )


def decide_all(
    outcome: Outcome, limits: Iterable[Limit], day: date, rule: DecisionRule = SIMPLE
) -> list[Verdict]:
    """Hold one result against every limit of its unit in force on its day.

    A single sample beside a monthly average is the average of that month only
    while no other sample joins it; the standing decides the month.

    Parameters
    ----------
    outcome : Outcome
        The result as the certificate prints it.
    limits : iterable of Limit
        All limits of the discharge point, in the order in which they were set.
    day : datetime.date
        Day of the sample in the programme's time zone.
    rule : DecisionRule
        The programme's rule.

    Returns
    -------
    list of Verdict
        One for each limit; a single "no limit" where none is in force.
    """
    used = [limit for limit in limits_on(limits, day) if limit.unit == outcome.unit]
    return [decide(outcome, limit, rule) for limit in used] or [decide(outcome, None, rule)]
