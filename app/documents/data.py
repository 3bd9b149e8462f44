"""What a certificate says, as plain values: the contract between records and paper.

Everything here can be written as JSON and is attached to the PDF as it stands.
A number that is *printed* comes in as the text that :mod:`app.chemistry`
reported (fields of type ``str``); nothing is rounded again on the way to
paper. A number that is only *drawn* comes in as a float. Moments are RFC 3339
texts with an offset, as the journal keeps them; the printer shows them in
``zone``. What is not known is None or an empty text and is printed as "not
recorded", never left out in silence.
"""

from __future__ import annotations

import hashlib
import json
import typing
from dataclasses import asdict, dataclass
from typing import Literal

from app.documents.corrected import Corrected
from app.documents.plain import build
from app.errors import Fields, InputError

SCHEMA = "weirbook-certificate-1"


@dataclass(frozen=True)
class Party:
    """Who is named on paper: the programme, the laboratory or the discharger."""

    name: str
    address: str = ""
    contact: str = ""


@dataclass(frozen=True)
class Measured:
    """A reading as it was typed, with its unit in words ("mS/cm", "°C")."""

    name: str
    text: str
    unit: str = ""


@dataclass(frozen=True)
class Sample:
    """The sample: what it is, when and by whom it was taken, how it came in.

    ``collected_at`` is the end of the period of a composite; ``period_start``
    its beginning. ``collected_by_laboratory`` false prints that the results
    apply to the sample as received.
    """

    id: str
    bottle: str
    kind: Literal["grab", "composite"]
    collected_at: str
    period_start: str | None = None
    collected_by: str = ""
    collected_by_laboratory: bool = True
    received_at: str | None = None
    received_by: str = ""
    hold_until: str | None = None
    description: str = "wastewater"
    preservation: tuple[str, ...] = ()
    field_readings: tuple[Measured, ...] = ()
    receipt: tuple[Measured, ...] = ()
    condition: str = ""
    note: str = ""


@dataclass(frozen=True)
class Method:
    """What was done: recipe, its source, digestion and reading."""

    recipe: str
    source: str
    wavelength_nm: str
    minutes: int
    temperature_c: str
    working_low: str
    working_high: str
    run: str = ""
    analysed_from: str | None = None
    analysed_to: str | None = None
    analysed_by: str = ""
    deviations: str = ""


@dataclass(frozen=True)
class Step:
    """One dilution step: what was pipetted and what it was made up to."""

    pipette_ml: str
    flask_ml: str


@dataclass(frozen=True)
class Dilution:
    """The dilution before digestion; no steps means that there was none."""

    factor: str
    steps: tuple[Step, ...] = ()


@dataclass(frozen=True)
class Result:
    """The result in the words of ``calculate``: ``reported`` is its text.

    ``reported`` is e.g. "2210", "< 100" or "> 900"; ``expanded_u`` is in the
    same unit and None where none is given; ``dof`` None means infinite.
    ``detection_limit`` says in words which one was in force, and its day.
    """

    status: Literal["ok", "below", "over"]
    reported: str
    expanded_u: str | None = None
    coverage_factor: str | None = None
    dof: str | None = None
    confidence_percent: str = "95"
    reporting_level: str = ""
    tubes_used: int = 0
    detection_limit: str = ""
    quantity: str = "Chemical oxygen demand, total"
    unit: str = "mg/L"


@dataclass(frozen=True)
class Verdict:
    """The result beside one limit, as :mod:`app.compliance.decision` says it."""

    verdict: Literal["within", "above", "undecided", "no limit"]
    why: str
    rule: str
    rule_source: str = ""
    basis: str = ""
    limit: str | None = None
    unit: str = "mg/L"
    effective_from: str | None = None
    source: str = ""
    probability_above_percent: str | None = None


@dataclass(frozen=True)
class Qualifier:
    """A letter on the result, what it means (the key) and why it stands here."""

    letter: str
    meaning: str
    note: str = ""


@dataclass(frozen=True)
class Signature:
    """Who says this, in what capacity, what signing meant, and when."""

    name: str
    role: str
    meaning: str
    at: str


@dataclass(frozen=True)
class Journal:
    """The journal entry from which the document was made."""

    position: int
    digest: str


@dataclass(frozen=True)
class Replaces:
    """The certificate that this one replaces, and what changed."""

    number: str
    change: str


@dataclass(frozen=True)
class Standard:
    """One calibration standard: drawn values, and the texts of its table row.

    ``cod_text`` and ``absorbance_texts`` are what the analyst entered.
    """

    cod: float
    absorbance: tuple[float, ...]
    cod_text: str
    absorbance_texts: tuple[str, ...]
    back_calculated: str = ""
    recovery_percent: str = ""


@dataclass(frozen=True)
class Calibration:
    """The curve behind the result.

    ``coefficients`` are b0, b1 (and b2), absorbance on COD in mg/L; ``read``
    holds the (COD, absorbance) of this sample's mean, in the tube. ``facts``
    are rows beside the table of standards, e.g. slope or residual scatter.
    """

    name: str
    made_at: str
    valid_until: str
    standards: tuple[Standard, ...]
    coefficients: tuple[float, ...]
    lot: str = ""
    instrument: str = ""
    made_by: str = ""
    read: tuple[float, float] | None = None
    facts: tuple[Measured, ...] = ()


@dataclass(frozen=True)
class StripBar:
    """The window of one dilution, in mg/L of the sample."""

    factor: str
    low: float
    high: float
    chosen: bool = False
    share_percent: str = ""


@dataclass(frozen=True)
class Mark:
    """A value with a name on a concentration scale, e.g. the limit."""

    value: float
    label: str


@dataclass(frozen=True)
class Strip:
    """The strip: expected range above, method windows below, limit and result as marks.

    ``density`` holds (COD in mg/L, density per unit of log COD) from low to
    high; empty where nothing was forecast. ``result`` is (value, low, high) of
    the result and its interval; for a bound only, value with ``result_sign``.
    """

    bars: tuple[StripBar, ...]
    density: tuple[tuple[float, float], ...] = ()
    limits: tuple[Mark, ...] = ()
    result: tuple[float, float, float] | None = None
    result_sign: Literal["", "<", ">"] = ""
    result_label: str = ""


@dataclass(frozen=True)
class Component:
    """One source of uncertainty: its size in mg/L as text, its share as a number."""

    name: str
    u: str
    share: float
    share_percent: str
    dof: str = ""
    explained: str = ""


@dataclass(frozen=True)
class Check:
    """One check of the run: what was asked, what was found, whether it holds.

    ``ok`` None means not judged. A check that does not hold needs the
    ``decision`` that a person took about it.
    """

    what: str
    asked: str
    found: str
    ok: bool | None
    decision: str = ""


@dataclass(frozen=True)
class Tube:
    """One tube with its raw absorbance, empty when not read.

    ``excluded`` is the cause why it was left out, by a person or by rule; empty
    for a tube that was used.
    """

    position: int
    what: str
    absorbance: str
    in_tube: str = ""
    state: str = ""
    excluded: str = ""
    excluded_by: str = ""


@dataclass(frozen=True)
class CertificateData:
    """Everything that one certificate says.

    ``number`` None makes a draft: a watermark, no number, no QR code; a draft has
    neither ``issued_at`` nor ``authorised``.
    ``example`` prints across every page that the data are invented.
    """

    number: str | None
    programme: Party
    laboratory: Party
    discharger: Party
    point: str
    zone: str
    sample: Sample
    method: Method
    dilution: Dilution
    result: Result
    verdicts: tuple[Verdict, ...]
    authorised: Signature | None
    journal: Journal
    software: str
    issued_at: str | None = None
    permit: str = ""
    work_place: str = ""
    qualifiers: tuple[Qualifier, ...] = ()
    notes: tuple[str, ...] = ()
    replaces: Replaces | None = None
    calibration: Calibration | None = None
    strip: Strip | None = None
    components: tuple[Component, ...] = ()
    checks: tuple[Check, ...] = ()
    tubes: tuple[Tube, ...] = ()
    corrected: Corrected | None = None
    example: bool = False
    schema: str = SCHEMA


def certificate_json(data: CertificateData) -> bytes:
    """Return the canonical bytes of a certificate's data.

    Parameters
    ----------
    data : CertificateData
        What the certificate says.

    Returns
    -------
    bytes
        UTF-8 JSON, keys in order, no spaces, characters as they are. The same
        data give the same bytes.

    Raises
    ------
    InputError
        If a number is not finite or a text is not valid Unicode.
    """
    try:
        text = json.dumps(
            asdict(data), ensure_ascii=False, sort_keys=True, separators=(",", ":"), allow_nan=False
        )
        return text.encode("utf-8")
    except (ValueError, TypeError) as error:
        raise InputError("The certificate's data cannot be written down.", {"data": [str(error)]}) from error


def data_digest(data: CertificateData) -> str:
    """Return the SHA-256 of :func:`certificate_json`, as 64 hex digits."""
    return hashlib.sha256(certificate_json(data)).hexdigest()


def certificate_from_json(content: bytes) -> CertificateData:
    """Return the data behind attached bytes, so that the document can be made again.

    Parameters
    ----------
    content : bytes
        As :func:`certificate_json` wrote them.

    Returns
    -------
    CertificateData

    Raises
    ------
    InputError
        If they are not this schema's data; every wrong place is named.
    """
    try:
        plain = json.loads(content)
    except (ValueError, RecursionError) as error:
        raise InputError("The attached data are not JSON.", {"data": [str(error)]}) from error
    wrong: Fields = {}
    if not isinstance(plain, dict) or plain.get("schema") != SCHEMA:
        raise InputError("These are not the data of a certificate.", {"schema": [f"must be {SCHEMA}"]})
    found = build(CertificateData, plain, "", wrong)
    if wrong:
        raise InputError("The attached data do not fit the schema.", wrong)
    return typing.cast(CertificateData, found)
