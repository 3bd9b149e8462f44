"""The certificate: one sample, one result, its limits, and how it came about.

What stands on it follows ISO/IEC 17025:2017, 7.8.2.1 (general items), 7.8.3
(uncertainty), 7.8.5 (sampling), 7.8.6 (decision rule) and 7.8.8 (amendment), in
our own words. It claims no accreditation and no legal status. The data are
attached to the PDF as the JSON of :func:`app.documents.data.certificate_json`;
the QR code names their digest.
"""

from __future__ import annotations

import re
from typing import Any

from app.documents.appendix import appendix
from app.documents.data import CertificateData, Result, Verdict, certificate_json, data_digest
from app.documents.letters import held_together, printable
from app.documents.qr import qr_svg
from app.documents.typeset import paper_named, typeset
from app.documents.words import (
    NOT_RECORDED,
    coverage_words,
    dilution_words,
    duration_words,
    instant,
    listed,
    moment,
    number_with_unit,
    period,
    reading,
    said,
)
from app.errors import Fields, InputError

NUMBER = re.compile(r"[A-Za-z0-9][A-Za-z0-9-]{0,31}")
# A sign belongs to a bound and to nothing else.
REPORTED = {
    "ok": re.compile(r"\d+([.,]\d+)?"),
    "below": re.compile(r"< ?\d+([.,]\d+)?"),
    "over": re.compile(r"> ?\d+([.,]\d+)?"),
}
HEX = re.compile(r"[0-9a-f]{64}")
VERDICT_WORDS = {
    "within": "Within the limit",
    "above": "Above the limit",
    "undecided": "Undecided",
    "no limit": "No limit in force",
}
STATUS_WORDS = {
    "below": "Below the reporting level. The sign belongs to the number; a bound carries no uncertainty.",
    "over": "Over the range of the method at this dilution. The sign belongs to the number; a bound carries "
    "no uncertainty.",
}
NOTES = (
    "The result concerns only the sample described here, not other times, and not the discharge as a whole.",
    "This document is not to be reproduced except in full, all its pages together, without the written "
    "approval of the laboratory.",
    "An amendment is a later certificate that names this one; whether this one still stands is told at the "
    "address below.",
)

NO_DECISION = [{"rows": [["Limit", "no statement of conformity is made in this document"]]}]

Rows = list[list[str]]


def _problems(data: CertificateData) -> Fields:
    wrong: Fields = {}
    result = data.result
    if not HEX.fullmatch(data.journal.digest):
        wrong["journal.digest"] = ["must be 64 hexadecimal digits"]
    if data.sample.kind == "composite" and not data.sample.period_start:
        wrong["sample.period_start"] = ["a composite needs the beginning of its period"]
    if not REPORTED[result.status].fullmatch(result.reported):
        wrong["result.reported"] = [
            f"{result.reported!r} is not how a result that is {result.status!r} reads"
        ]
    if result.status != "ok" and result.expanded_u is not None:
        wrong["result.expanded_u"] = ["a bound carries no uncertainty"]
    for index, check in enumerate(data.checks):
        if data.number is not None and check.ok is False and not check.decision.strip():
            wrong[f"checks.{index}.decision"] = ["a check that does not hold needs a decision"]
    return wrong | _problems_of_issue(data)


def _problems_of_issue(data: CertificateData) -> Fields:
    wrong: Fields = {}
    if data.number is not None and not NUMBER.fullmatch(data.number):
        wrong["number"] = ["takes letters, digits and hyphens, 32 at most"]
    for name in ("issued_at", "authorised"):
        given = getattr(data, name) is not None
        if data.number is not None and not given:
            wrong[name] = ["a certificate with a number needs it"]
        if data.number is None and given:
            wrong[name] = ["a draft has none"]
    return wrong


def _party(party: Any) -> str:
    return ", ".join(printable(part) for part in (party.name, party.address, party.contact) if part)


def _sample_rows(data: CertificateData) -> Rows:
    sample, zone = data.sample, data.zone
    return [
        ["Bottle code", held_together(sample.bottle)],
        ["What", said(sample.description)],
        ["Taken", period(sample, zone)],
        ["Taken by", said(sample.collected_by)],
        ["Preservation", listed(tuple(printable(p) for p in sample.preservation))],
        ["Field readings", listed(tuple(map(reading, sample.field_readings)))],
        *([["Remarks", printable(sample.note)]] if sample.note else []),
    ]


def _receipt_rows(data: CertificateData) -> Rows:
    sample, zone = data.sample, data.zone
    return [
        ["Received", moment(sample.received_at, zone)],
        ["Received by", said(sample.received_by)],
        ["On receipt", listed(tuple(map(reading, sample.receipt)))],
        ["Condition", said(sample.condition)],
        ["Hold until", moment(sample.hold_until, zone)],
    ]


def _who_rows(data: CertificateData) -> Rows:
    place = data.work_place or data.laboratory.address
    return [
        ["For", _party(data.programme)],
        ["Discharger", _party(data.discharger)],
        ["Discharge point", said(data.point)],
        ["Permit", said(data.permit)],
        ["Laboratory", _party(data.laboratory)],
        ["Work done at", said(place)],
    ]


def _method_rows(data: CertificateData) -> Rows:
    method, result = data.method, data.result
    span = f"{held_together(method.working_low)} to {number_with_unit(method.working_high, 'mg/L')}"
    digestion = f"{duration_words(method.minutes)} at {number_with_unit(method.temperature_c, '°C')}"
    return [
        ["Method", said(method.recipe)],
        ["Source", said(method.source)],
        ["Digestion", f"{digestion}, read at {number_with_unit(method.wavelength_nm, 'nm')}"],
        ["Range in the tube", span],
        ["Dilution", dilution_words(data.dilution)],
        ["Reporting level", _reporting_level(result)],
        *([["Detection limit", printable(result.detection_limit)]] if result.detection_limit else []),
        ["Analysed", _analysed(data)],
        ["Analysed by", said(method.analysed_by)],
        ["Run", said(method.run)],
        ["Deviations", printable(method.deviations) or "none stated"],
    ]


def _reporting_level(result: Result) -> str:
    if not result.reporting_level:
        return NOT_RECORDED
    return f"{number_with_unit(result.reporting_level, result.unit)} after dilution"


def _analysed(data: CertificateData) -> str:
    start, end = data.method.analysed_from, data.method.analysed_to
    if not start or not end:
        return moment(start or end, data.zone)
    return f"{moment(start, data.zone)} to {moment(end, data.zone)}"


def _decision_rows(verdict: Verdict) -> Rows:
    if verdict.verdict == "no limit" or verdict.limit is None:
        return [["Limit", "none was in force on the day of the sample"]]
    since = verdict.effective_from or NOT_RECORDED
    limit = number_with_unit(verdict.limit, verdict.unit)
    chance = verdict.probability_above_percent
    return [
        ["Limit", f"{printable(verdict.basis)} {limit}, in force since {held_together(since)}"],
        ["Where it stands", said(verdict.source)],
        ["Decision rule", said(verdict.rule)],
        ["Source of the rule", said(verdict.rule_source)],
        *(
            [
                [
                    "For information",
                    f"probability that the true value lies above the limit: {held_together(chance + ' %')}",
                ]
            ]
            if chance is not None
            else []
        ),
    ]


def _verdict_view(verdict: Verdict) -> dict[str, str]:
    words = VERDICT_WORDS[verdict.verdict]
    if verdict.basis and verdict.verdict in ("within", "above"):
        words = words.replace("limit", printable(verdict.basis))
    elif verdict.basis and verdict.verdict == "undecided":
        words = f"{words}: {printable(verdict.basis)}"
    return {"verdict": verdict.verdict, "words": words, "why": printable(verdict.why)}


def _result_view(data: CertificateData) -> dict[str, Any]:
    result = data.result
    expanded = result.expanded_u if result.status == "ok" else None
    coverage = STATUS_WORDS.get(result.status, "No uncertainty is stated.")
    if expanded is not None:
        factor = result.coverage_factor or NOT_RECORDED
        words = coverage_words(factor, result.dof, result.confidence_percent)
        coverage = f"Expanded uncertainty {number_with_unit(expanded, result.unit)}, {words}."
    return {
        "quantity": printable(result.quantity),
        "reported": held_together(result.reported),
        "expanded": None if expanded is None else f"\u00a0±\u00a0{held_together(expanded)}",
        "unit": held_together(result.unit),
        "letters": [held_together(q.letter) for q in data.qualifiers],
        "coverage": coverage,
        "beside": _corrected_words(data),
    }


def _corrected_words(data: CertificateData) -> list[str]:
    """Return the corrected value as it stands beside the reported one, which stays the result."""
    if data.corrected is None:
        return []
    taken = " and ".join(
        f"{printable(one.name)} {held_together(one.measured)}" for one in data.corrected.corrections
    )
    value = number_with_unit(data.corrected.value, data.result.unit)
    return [
        f"For information, with measured {taken} taken out: {value}. "
        "The reported result is the uncorrected one."
    ]


def _authorised_rows(data: CertificateData) -> Rows:
    if data.authorised is None:
        return [["By", "nobody yet: this is a draft"]]
    who = data.authorised
    return [
        ["By", f"{printable(who.name)}, {printable(who.role)}"],
        ["Meaning", f"{printable(who.meaning)}, {moment(who.at, data.zone)}"],
    ]


def _notes(data: CertificateData) -> list[str]:
    notes = list(NOTES)
    if data.sample.field_readings:
        notes.append(
            "Field readings were taken at the discharge point; they are not results of the laboratory."
        )
    if not data.sample.collected_by_laboratory:
        notes.append("The laboratory did not take the sample: the result applies to the sample as received.")
    return notes + [printable(note) for note in data.notes]


def _proof(data: CertificateData, address: str | None) -> list[list[str]]:
    digest = "Data digest (SHA-256 of the data attached to this file):"
    rows = []
    if address is not None:
        rows = [["Check this document at", address]]
        digest = "The page must show the same number and this data digest (SHA-256 of the attached data):"
    rows += [[digest, data_digest(data)], ["Record of the sample:", held_together(data.sample.id)]]
    journal = f"Made from journal entry {data.journal.position}, whose digest is"
    return [*rows, [journal, data.journal.digest]]


def _frame(data: CertificateData, paper: str) -> dict[str, Any]:
    """Return what stands on every page."""
    title = "Certificate of analysis" if data.number else "Draft of a certificate of analysis"
    named = f"Certificate {data.number}" if data.number else "Draft, no number"
    return {
        "title": f"{title} {data.number or ''}".strip(),
        "title-words": title,
        "author": printable(data.laboratory.name),
        "description": f"Chemical oxygen demand of sample {printable(data.sample.bottle)}",
        "paper": paper,
        "watermark": "DRAFT" if data.number is None else "EXAMPLE DATA" if data.example else None,
        "head-left": f"{title}, {printable(data.discharger.name)}",
        "head-right": named,
        "foot": f"{named}, made by {printable(data.software)}",
        "end": f"End of certificate {data.number}" if data.number else "End of draft",
    }


def _under_title(data: CertificateData) -> list[str]:
    lines = ["Not issued." if data.issued_at is None else f"Issued {moment(data.issued_at, data.zone)}"]
    if data.example:
        lines.append("Invented example data: nothing on this page was measured.")
    return lines


def _amendment(data: CertificateData) -> list[str]:
    if data.replaces is None:
        return []
    return [
        f"Amendment: replaces certificate {held_together(data.replaces.number)}.",
        f"What changed: {said(data.replaces.change)}",
    ]


def _view(data: CertificateData, base_url: str, paper: str) -> dict[str, Any]:
    address, qr = None, None
    if data.number is not None:
        address = f"{base_url.rstrip('/')}/verify/{data.number}"
        said_of_it = f"QR code that leads to {address}"
        qr = {"svg": qr_svg(f"{address}#{data_digest(data)}", said_of_it), "alt": said_of_it}
    left = [("Whose and where", _who_rows(data)), ("Receipt", _receipt_rows(data))]
    right = [("Sample", _sample_rows(data)), ("Method", _method_rows(data))]
    return {
        **_frame(data, paper),
        "programme": printable(data.programme.name),
        "number": data.number,
        "under-title": _under_title(data),
        "amendment": _amendment(data),
        "qr": qr,
        **_result_view(data),
        "verdicts": [_verdict_view(v) for v in data.verdicts],
        "columns": [[{"title": t, "rows": rows} for t, rows in side] for side in (left, right)],
        "decisions": [{"rows": rows} for rows in map(_decision_rows, data.verdicts)] or NO_DECISION,
        "qualifiers": [
            [printable(q.letter), printable(q.meaning), printable(q.note)] for q in data.qualifiers
        ],
        "authorised": _authorised_rows(data),
        "notes": _notes(data),
        "proof": _proof(data, address),
        "appendix": appendix(data),
    }


def render_certificate(data: CertificateData, base_url: str, paper: str = "a4") -> bytes:
    """Return the certificate as a PDF with its data attached.

    Parameters
    ----------
    data : CertificateData
        What it says; ``number`` None makes a draft.
    base_url : str
        Address of the server, e.g. ``https://weirbook.example``: the QR code
        leads to ``<base_url>/verify/<number>#<data digest>``.
    paper : {"a4", "letter"}
        Paper size.

    Returns
    -------
    bytes
        PDF/A-3a with PDF/UA-1; the same input gives the same bytes.

    Raises
    ------
    InputError
        If something that a certificate needs is missing; every field is named.
    """
    wrong = _problems(data)
    if wrong:
        raise InputError("This certificate cannot be made.", wrong)
    made_at = instant(data.issued_at or data.sample.collected_at)
    view = _view(data, base_url, paper_named(paper))
    return typeset("certificate.typ", view, made_at, certificate_json(data))
