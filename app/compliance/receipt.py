"""Receipt of a bottle at the laboratory: accepted, qualified, on hold or rejected.

A bottle's state is never overwritten in silence: every finding keeps its words,
its qualifier letter and what it asks for, and the worst one decides. A person
decides; this module proposes. Whatever is decided, the bottle and its result
stay on file, and a qualified one needs the coordinator's word before it counts
for compliance. The checks are common practice around 40 CFR 136.3, Table II;
the letters are local and their key is printed with every report.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from typing import Literal

from app.compliance.exact import plain
from app.compliance.holding import COD, Preservation, elapsed_hours, hold_until
from app.errors import Fields, InputError

Decision = Literal["accepted", "qualified", "on hold", "rejected"]
Seal = Literal["intact", "broken", "none"]
Container = Literal["sound", "leaking", "wrong"]

DECISIONS: tuple[Decision, ...] = ("accepted", "qualified", "on hold", "rejected")
QUALIFIERS: dict[str, str] = {
    "H": "held longer than allowed before analysis",
    "T": "arrived outside the allowed temperature, or without a temperature",
    "P": "preservation not as required",
    "C": "container not as required",
    "K": "custody or seal not complete",
}


@dataclass(frozen=True)
class Receipt:
    """What the laboratory found when a bottle arrived.

    Parameters
    ----------
    received_at, collected_end : datetime.datetime
        Aware; for a composite the end of its collection.
    temperature_c : float or None
        Of the cooler's temperature blank; None only with a reason.
    ph : float or None
        Strip on a poured aliquot; None only with a reason or without acid.
    seal : {"intact", "broken", "none"}
        "none": the bottle was handed over in person and never left custody.
    container : {"sound", "leaking", "wrong"}
        "wrong": another inert material or size.
    label_agrees : bool
        Label, custody form and plan say the same.
    acid_added : bool
        The record says that acid was added in the field.
    frozen : bool
        Ice in the bottle.
    on_ice : bool
        On ice and on its way to being cold; counts on the day of collection only.
    identity_proven : bool
        Which sample this is can be proven although a label field differs.
    enough_volume : bool
        The planned analyses can be made.
    in_scope : bool
        The laboratory does what is asked for.
    missing_reason : str
        Why a temperature or pH is missing.
    """

    received_at: datetime
    collected_end: datetime
    temperature_c: float | None
    ph: float | None
    seal: Seal = "intact"
    container: Container = "sound"
    label_agrees: bool = True
    acid_added: bool = True
    frozen: bool = False
    on_ice: bool = False
    identity_proven: bool = True
    enough_volume: bool = True
    in_scope: bool = True
    missing_reason: str = ""


@dataclass(frozen=True)
class Finding:
    """One thing seen at receipt.

    Parameters
    ----------
    check : str
        Stable name, e.g. ``temperature``.
    decision : {"accepted", "qualified", "on hold", "rejected"}
        What it asks for by itself.
    words : str
        What was found, in one sentence.
    qualifier : str
        A key of :data:`QUALIFIERS`, or empty.
    """

    check: str
    decision: Decision
    words: str
    qualifier: str = ""


@dataclass(frozen=True)
class ReceiptDecision:
    """What is proposed for a bottle, with every finding.

    Parameters
    ----------
    decision : {"accepted", "qualified", "on hold", "rejected"}
        The worst of the findings.
    findings : tuple of Finding
        In the order of the checks; empty when nothing was found.
    hold_until : datetime.datetime
        Analysis must start by then.
    qualifiers : str
        Letters that travel with the result.
    compliance_needs_decision : bool
        The coordinator must say whether the result may be used for compliance.
    """

    decision: Decision
    findings: tuple[Finding, ...]
    hold_until: datetime
    qualifiers: str = ""
    compliance_needs_decision: bool = False
    reasons: tuple[str, ...] = ()


def _temperature(receipt: Receipt, rule: Preservation) -> Finding | None:
    if receipt.frozen:
        return Finding("temperature", "qualified", "The sample is frozen.", "T")
    t = receipt.temperature_c
    if t is None:
        words = f"No temperature was taken: {receipt.missing_reason.strip()}."
        return Finding("temperature", "qualified", words, "T")
    if 0 < t <= rule.cool_to_c:
        return None
    if t <= 0:
        words = f"At {plain(t)} degrees C the sample may have been frozen."
        return Finding("temperature", "qualified", words, "T")
    same_day = receipt.received_at.astimezone(UTC) - receipt.collected_end.astimezone(UTC) < timedelta(
        hours=24
    )
    if receipt.on_ice and same_day:
        words = f"{plain(t)} degrees C, on ice and cooling since its collection today."
        return Finding("temperature", "accepted", words)
    words = (
        f"{plain(t)} degrees C is above {plain(rule.cool_to_c)}; a fresh sample is preferred for compliance."
    )
    return Finding("temperature", "qualified", words, "T")


def _acidity(receipt: Receipt, rule: Preservation) -> Finding | None:
    if receipt.ph is not None and receipt.ph < rule.ph_below:
        return None
    age = elapsed_hours(receipt.collected_end, receipt.received_at) * 60.0
    if age <= rule.acid_within_minutes:
        words = f"Collected {plain(round(age))} minutes ago: acidify now and note the acid and its volume."
        return Finding("acidity", "accepted", words)
    if receipt.ph is None and receipt.acid_added:
        words = f"No pH was taken: {receipt.missing_reason.strip()}."
        return Finding("acidity", "qualified", words, "P")
    found = "not acidified" if receipt.ph is None else f"at pH {plain(receipt.ph)}"
    words = f"The sample is {found}; below pH {plain(rule.ph_below)} is required."
    return Finding("acidity", rule.acidity, words, "P")


def _container(receipt: Receipt, rule: Preservation) -> Finding | None:
    if receipt.container == "leaking":
        return Finding("container", "rejected", "The container leaks or is broken.", "C")
    if not receipt.enough_volume:
        return Finding("container", "rejected", "There is not enough sample for the analysis.", "C")
    if receipt.container == "wrong":
        return Finding("container", "qualified", "The container is not the one planned, but inert.", "C")
    return None


def _holding(receipt: Receipt, rule: Preservation) -> Finding | None:
    limit = hold_until(receipt.collected_end, rule)
    if receipt.received_at.astimezone(UTC) <= limit.astimezone(UTC):
        return None
    words = (
        f"The holding time of {plain(rule.hold_days)} days has passed: "
        "not for compliance; it may be analysed for information."
    )
    return Finding("holding", "rejected", words, "H")


def _identity(receipt: Receipt, rule: Preservation) -> Finding | None:
    if not receipt.identity_proven:
        return Finding("identity", "rejected", "Which sample this is cannot be proven.", "K")
    if not receipt.label_agrees:
        words = "Label, custody form and plan do not agree: call the collector and correct by a signed note."
        return Finding("identity", "on hold", words, "K")
    return None


def _custody(receipt: Receipt, rule: Preservation) -> Finding | None:
    if receipt.seal != "broken":
        return None
    words = "The seal is broken: not for enforcement; for trend and charges only if the coordinator says so."
    return Finding("seal", "rejected", words, "K")


def _scope(receipt: Receipt, rule: Preservation) -> Finding | None:
    if receipt.in_scope:
        return None
    return Finding("scope", "on hold", "The analysis asked for is not in scope: ask what is wanted.")


_CHECKS = (_identity, _custody, _container, _holding, _temperature, _acidity, _scope)


def _refuse_gaps(receipt: Receipt) -> None:
    wrong: Fields = {}
    for name in ("received_at", "collected_end"):
        if getattr(receipt, name).utcoffset() is None:
            wrong[name] = ["needs an offset, e.g. -06:00"]
    told = bool(receipt.missing_reason.strip())
    if receipt.temperature_c is None and not receipt.frozen and not told:
        wrong["temperature_c"] = ["read the temperature, or say why it is missing"]
    if receipt.ph is None and receipt.acid_added and not told:
        wrong["ph"] = ["test the pH, or say why it is missing"]
    if receipt.ph is not None and not -1 <= receipt.ph <= 15:
        wrong["ph"] = ["is not a pH"]
    if receipt.temperature_c is not None and not -30 <= receipt.temperature_c <= 60:
        wrong["temperature_c"] = ["is not a plausible temperature in degrees C"]
    if not wrong and receipt.received_at.astimezone(UTC) < receipt.collected_end.astimezone(UTC):
        wrong["received_at"] = ["lies before the end of collection"]
    if wrong:
        raise InputError("The bottle cannot be received like this.", wrong)


def receive(receipt: Receipt, rule: Preservation = COD) -> ReceiptDecision:
    """Propose what becomes of a bottle at receipt, with reasons in words.

    Parameters
    ----------
    receipt : Receipt
        What was found.
    rule : Preservation
        The programme's rule.

    Returns
    -------
    ReceiptDecision

    Raises
    ------
    InputError
        If a temperature or pH is missing without a reason, a number is not
        plausible, a time has no offset or receipt lies before collection.

    Notes
    -----
    A finding that only asks for a note leaves the bottle accepted. Whatever is
    found, the bottle and its result stay on file.
    """
    _refuse_gaps(receipt)
    seen = (check(receipt, rule) for check in _CHECKS)
    findings = tuple(finding for finding in seen if finding is not None)
    worst = max((DECISIONS.index(f.decision) for f in findings), default=0)
    letters = "".join(sorted({f.qualifier for f in findings if f.decision != "accepted"}))
    return ReceiptDecision(
        DECISIONS[worst],
        findings,
        hold_until(receipt.collected_end, rule),
        letters,
        worst > 0,
        tuple(f.words for f in findings),
    )
