"""The appendix of a certificate: strip, calibration, budget, checks, tubes.

Every raw absorbance stands in it, the excluded ones with their cause, so that
a reader can do the sum again.
"""

from __future__ import annotations

from typing import Any

from app.documents.charts import budget_svg, calibration_svg, strip_svg
from app.documents.data import Calibration, CertificateData, Check, Tube
from app.documents.letters import held_together, printable
from app.documents.typeset import picture
from app.documents.words import moment, number_with_unit

Part = dict[str, Any]
OK_WORDS = {True: "holds", False: "does not hold", None: "not judged"}


def _part(title: str, words: str = "", **more: Any) -> Part:
    empty: Part = {
        "title": title,
        "words": words,
        "picture": None,
        "picture-width": 100,
        "facts": [],
        "header": [],
        "rows": [],
        "right": [],
        "stretch": True,
        "breakable": False,
    }
    return empty | more


def _strip(data: CertificateData) -> list[Part]:
    if data.strip is None:
        return []
    words = (
        "Where the result lies among what was expected before the digestion, the windows of the method at "
        "each dilution, and the limit. The dilution used is the filled bar."
    )
    svg = strip_svg(data.strip, "print", 600)
    return [_part("Expected range, dilution and limit", words, picture=picture(svg), **{"picture-width": 78})]


def _calibration(data: CertificateData) -> list[Part]:
    c = data.calibration
    if c is None:
        return []
    words = (
        f"{printable(c.name)}; made {moment(c.made_at, data.zone)}"
        + (f" by {printable(c.made_by)}" if c.made_by else "")
        + f", valid until {held_together(c.valid_until)}"
        + (f"; lot {printable(c.lot)}" if c.lot else "")
        + (f"; {printable(c.instrument)}" if c.instrument else "")
        + ". Below the curve: each reading less the curve. The diamond is the mean reading of this sample."
    )
    svg = calibration_svg(c, "print", 600)
    return [
        _part("Calibration with residuals", words, picture=picture(svg), **{"picture-width": 78}),
        _part(
            "Standards",
            facts=[[printable(f.name), number_with_unit(f.text, f.unit)] for f in c.facts],
            header=["COD, mg/L", "Absorbance, AU", "Back-calculated, mg/L", "Recovery, %"],
            rows=_standard_rows(c),
            right=[0, 2, 3],
            stretch=False,
        ),
    ]


def _standard_rows(c: Calibration) -> list[list[str]]:
    return [
        [
            held_together(s.cod_text),
            "; ".join(held_together(text) for text in s.absorbance_texts),
            printable(s.back_calculated),
            printable(s.recovery_percent),
        ]
        for s in c.standards
    ]


def _budget(data: CertificateData) -> list[Part]:
    if not data.components:
        return []
    words = (
        "Standard uncertainties in mg/L of the sample and their share of the variance. They are combined as "
        "the root of the sum of squares; the degrees of freedom by Welch and Satterthwaite. "
        f"{_carried(data)}"
    )
    rows = [
        [
            printable(c.name),
            held_together(c.u),
            held_together(c.share_percent),
            held_together(c.dof or "infinite"),
            printable(c.explained),
        ]
        for c in data.components
    ]
    return [
        _part(
            "Uncertainty budget",
            words,
            picture=picture(budget_svg(data.components, "print", 600)),
            header=["Source", "u, mg/L", "Share, %", "Degrees of freedom", "Where from"],
            rows=rows,
            right=[1, 2, 3],
            **{"picture-width": 72},
        )
    ]


def _carried(data: CertificateData) -> str:
    most, result = max(data.components, key=lambda one: one.share), data.result
    words = f"{printable(most.name).capitalize()} carries {held_together(f'{most.share_percent} %')} of it"
    if result.coverage_factor is None:
        return f"{words}."
    dof = f"{result.dof} effective degrees of freedom" if result.dof else "the normal distribution"
    return f"{words}; coverage factor {held_together(result.coverage_factor)} from {dof}."


def _corrected(data: CertificateData) -> list[Part]:
    if data.corrected is None:
        return []
    words = (
        "Inorganic species that take dichromate by stoichiometry, as they were measured. The corrected value "
        "is for information and carries no uncertainty of its own; limits are held against the reported "
        "one. Chloride is never subtracted."
    )
    rows = [["Reported", "", held_together(data.result.reported)]]
    rows += [
        [printable(one.name), held_together(one.measured), f"\u2212{held_together(one.oxygen_demand)}"]
        for one in data.corrected.corrections
    ]
    rows.append(["Corrected, for information", "", held_together(data.corrected.value)])
    header = ["What", "Measured", "COD, mg/L"]
    return [
        _part("Corrected value", words, header=header, rows=rows, right=[1, 2], stretch=False),
    ]


def _check_row(check: Check) -> list[str]:
    return [
        printable(check.what),
        printable(check.asked),
        printable(check.found),
        OK_WORDS[check.ok],
        printable(check.decision),
    ]


def _checks(data: CertificateData) -> list[Part]:
    if not data.checks:
        return []
    header = ["Check", "Asked", "Found", "Verdict", "Decision"]
    return [_part("Checks of the run", header=header, rows=[_check_row(c) for c in data.checks])]


def _tube_row(tube: Tube) -> list[str]:
    use = "used" if tube.absorbance else "not read"
    if tube.excluded:
        use = f"excluded: {printable(tube.excluded)}"
        use += f" ({printable(tube.excluded_by)})" if tube.excluded_by else ""
    return [
        str(tube.position),
        printable(tube.what),
        held_together(tube.absorbance),
        held_together(tube.in_tube),
        printable(tube.state),
        use,
    ]


def _tubes(data: CertificateData) -> list[Part]:
    if not data.tubes:
        return []
    header = ["Position", "What", "Absorbance, AU", "In the tube, mg/L", "Colour", "Used or excluded"]
    words = "Every reading as it was entered, before any subtraction."
    rows = [_tube_row(t) for t in data.tubes]
    return [_part("Tubes", words, header=header, rows=rows, right=[0, 2, 3], breakable=True)]


def appendix(data: CertificateData) -> list[Part]:
    """Return the parts of the appendix that the data hold, in the order of the work."""
    return [
        part
        for parts in (
            _tubes(data),
            _calibration(data),
            _budget(data),
            _corrected(data),
            _checks(data),
            _strip(data),
        )
        for part in parts
    ]
