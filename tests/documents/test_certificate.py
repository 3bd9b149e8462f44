"""The certificate, read back by other programs: its words, its digits, its archive form, its bytes."""

from __future__ import annotations

import hashlib
import re
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from app.documents.certificate import render_certificate
from app.documents.data import (
    CertificateData,
    Check,
    Dilution,
    Party,
    Replaces,
    Step,
    Tube,
    Verdict,
    certificate_json,
    data_digest,
)
from app.errors import InputError
from tests.documents.conftest import Faults, Poppler, wrong_lengths
from tests.documents.example import BASE_URL, BELOW, DIGEST, EXAMPLE, OVER

ROOT = Path(__file__).resolve().parents[2]
MARKUP = (
    '#set page(fill: red) *b* _i_ $x^2$ @ref <lab> `raw` \\ // /* #import "@preview/x:1.0.0": * [a] {b} ~ --'
)
LONG = "Abwasserbehandlungsgesellschaft" * 8
DRAFT = replace(EXAMPLE, number=None, issued_at=None, authorised=None)
KINDS = {
    "ok": EXAMPLE,
    "below": BELOW,
    "over": OVER,
    "draft": DRAFT,
    "example": replace(EXAMPLE, example=True),
    "amended": replace(EXAMPLE, replaces=Replaces("2031-0031", "discharger's name corrected")),
    "bare": replace(
        EXAMPLE, verdicts=(), qualifiers=(), calibration=None, strip=None, components=(), checks=(), tubes=()
    ),
    "markup": replace(EXAMPLE, discharger=Party(MARKUP, MARKUP), point=MARKUP, notes=(MARKUP,)),
    "long": replace(EXAMPLE, discharger=Party(LONG, LONG), point=LONG, notes=(LONG,) * 3),
    "unicode": replace(
        EXAMPLE, discharger=Party("Ångström Łódź Βιομηχανία Пивоварня 中文酒厂 \u202eלחם"), point="☃ 😀"
    ),
}

Read = Callable[[bytes], str]


@pytest.fixture(scope="module")
def made() -> dict[str, bytes]:
    """Return one certificate of each kind."""
    return {name: render_certificate(data, BASE_URL) for name, data in KINDS.items()}


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("profile", ["3a", "ua1"])
def test_it_is_an_archive_file_and_readable_aloud(
    kind: str, profile: str, made: dict[str, bytes], faults: Faults
) -> None:
    """PDF/A-3a (ISO 19005-3) and PDF/UA-1 (ISO 14289-1), by page-validation."""
    assert faults(made[kind], profile) == []


def test_the_validators_can_say_no(made: dict[str, bytes], faults: Faults) -> None:
    other = made["ok"].replace(b"pdfaid:conformance>A<", b"pdfaid:conformance>X<")
    assert other != made["ok"]
    assert faults(other, "3a") != []
    assert wrong_lengths(made["ok"]) == []
    assert wrong_lengths(made["ok"].replace(b"/Length 4", b"/Length 5", 1)) != []


@pytest.mark.parametrize("kind", KINDS)
def test_the_attached_data_are_the_canonical_bytes(
    kind: str, made: dict[str, bytes], poppler: Poppler, tmp_path: Path
) -> None:
    poppler("pdfdetach", made[kind], "-saveall")
    content = (tmp_path / "certificate.json").read_bytes()
    assert content == certificate_json(KINDS[kind])
    assert hashlib.sha256(content).hexdigest() == data_digest(KINDS[kind])
    assert b"/AFRelationship/Data" in made[kind]


def printed_texts(data: CertificateData) -> list[str]:
    """Return every text of the data that must stand on paper as it was passed in."""
    assert data.calibration is not None
    texts = [
        t for s in data.calibration.standards for t in (s.cod_text, *s.absorbance_texts, s.back_calculated)
    ]
    texts += [f"{f.text} {f.unit}".strip() for f in data.calibration.facts]
    texts += [t for c in data.components for t in (c.u, c.share_percent, c.explained)]
    texts += [t for c in data.checks for t in (c.what, c.asked, c.found, c.decision) if t]
    texts += [t for tube in data.tubes for t in (tube.absorbance, tube.in_tube, tube.excluded) if t]
    texts += [f"{r.text} {r.unit}".strip() for r in data.sample.field_readings + data.sample.receipt]
    texts += [data.programme.name, data.laboratory.name, data.discharger.name, data.point, data.permit]
    texts += [data.sample.bottle, data.sample.id, data.sample.collected_by, *data.sample.preservation]
    texts += [data.method.recipe, data.method.source, data.method.analysed_by, data.result.quantity]
    texts += [t for v in data.verdicts for t in (v.why, v.rule, v.rule_source, v.source, v.basis)]
    texts += [t for q in data.qualifiers for t in (q.meaning, q.note)]
    return texts


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_every_digit_and_every_word_is_read_back(text_of: Read, paper: str) -> None:
    shown = text_of(render_certificate(EXAMPLE, BASE_URL, paper))
    assert [text for text in printed_texts(EXAMPLE) if text not in shown] == []


@pytest.mark.parametrize(
    "words",
    [
        "Certificate of analysis",
        "Number 2031-0047",
        "Issued 2031-06-01 14:05 -06:00",
        "2210 ± 130 mg/L",
        "Expanded uncertainty 130 mg/L, k = 2.20 (Student's t, 11 effective degrees of freedom, 95 %).",
        "Above the daily maximum",
        "daily maximum 1500 mg/L, in force since 2031-03-01",
        "Permit EV-014, part 2, table 1",
        "probability that the true value lies above the limit: 100.0 %",
        "composite, 2031-05-28 08:00 -06:00 to 2031-05-29 08:00 -06:00",
        "Received 2031-05-29 15:40 -06:00",
        "2031-05-30 09:10 -06:00 to 2031-05-30 13:25 -06:00",
        "2 h at 150 °C, read at 600 nm",
        "20 mL made up to 100 mL, factor 5",
        "100 mg/L after dilution",
        "temperature 6.4 °C; pH 1.7; seal intact",
        "The result concerns only the sample described here",
        "not to be reproduced except in full",
        "Maren Ostby, coordinator",
        "authorised, 2031-06-01 14:05 -06:00",
        "journal entry 1842",
        DIGEST,
        f"{BASE_URL}/verify/2031-0047",
        data_digest(EXAMPLE),
        "excluded: cap leaked (Ines Calloway)",
        "does not hold",
        "End of certificate 2031-0047",
    ],
)
def test_what_a_report_must_say_is_there(words: str, text_of: Read, made: dict[str, bytes]) -> None:
    """Items of ISO/IEC 17025:2017, 7.8.2.1, 7.8.3, 7.8.6, and the house's own."""
    assert words in text_of(made["ok"])


def test_every_page_names_the_certificate_and_its_place(made: dict[str, bytes], poppler: Poppler) -> None:
    pages = poppler("pdftotext", made["ok"], "-raw", "-").split("\f")[:-1]
    assert len(pages) >= 2
    for number, words in enumerate(pages, 1):
        assert "Certificate 2031-0047" in words or "Number 2031-0047" in words
        assert f"page {number} of {len(pages)}" in words
    assert ["End of certificate" in words for words in pages] == [False] * (len(pages) - 1) + [True]


@pytest.mark.parametrize(
    ("kind", "reported", "words"),
    [("below", "< 100 mg/L", "Below the reporting level"), ("over", "> 4500 mg/L", "Over the range")],
)
def test_a_bound_keeps_its_sign_and_has_no_uncertainty(
    kind: str, reported: str, words: str, text_of: Read, made: dict[str, bytes]
) -> None:
    shown = text_of(made[kind])
    assert reported in shown and words in shown
    assert "± 130 mg/L" not in shown and "Expanded uncertainty" not in shown
    assert "2210 mg/L T" not in shown


def test_the_sign_is_never_alone_at_the_end_of_a_line(made: dict[str, bytes], poppler: Poppler) -> None:
    for kind in ("ok", "below", "over"):
        lines = poppler("pdftotext", made[kind], "-layout", "-").splitlines()
        assert not [line for line in lines if line.rstrip().endswith(("<", ">", "±", "=", "mg/"))]


@pytest.mark.parametrize(
    ("verdict", "heading"),
    [
        ("within", "Within the daily maximum"),
        ("above", "Above the daily maximum"),
        ("undecided", "Undecided: daily maximum"),
        ("no limit", "No limit in force"),
    ],
)
def test_a_verdict_is_told_in_words(verdict: Any, heading: str, text_of: Read) -> None:
    data = replace(EXAMPLE, verdicts=(replace(EXAMPLE.verdicts[0], verdict=verdict),))
    assert heading in text_of(render_certificate(data, BASE_URL))


def test_two_limits_give_two_verdicts_each_with_its_limit(text_of: Read) -> None:
    monthly = replace(
        EXAMPLE.verdicts[0], basis="monthly average", limit="2300", verdict="within", why="x y z."
    )
    shown = text_of(render_certificate(replace(EXAMPLE, verdicts=(*EXAMPLE.verdicts, monthly)), BASE_URL))
    assert "Above the daily maximum" in shown and "Within the monthly average" in shown
    assert "daily maximum 1500 mg/L" in shown and "monthly average 2300 mg/L" in shown


def test_without_a_limit_it_says_so(text_of: Read) -> None:
    none = Verdict("no limit", "No limit was in force on the day of the sample.", "Simple acceptance")
    shown = text_of(render_certificate(replace(EXAMPLE, verdicts=(none,)), BASE_URL))
    assert "Limit none was in force on the day of the sample" in shown


def test_without_a_verdict_no_conformity_is_claimed(text_of: Read, made: dict[str, bytes]) -> None:
    shown = text_of(made["bare"])
    assert "no statement of conformity is made" in shown
    assert "Within" not in shown and "Above" not in shown


def test_a_draft_has_a_watermark_no_number_and_no_code(
    text_of: Read, made: dict[str, bytes], poppler: Poppler
) -> None:
    shown = text_of(made["draft"])
    assert "DRAFT" in shown and "Draft: no number, not a certificate" in shown and "Not issued" in shown
    assert "/verify/" not in shown and "2031-0047" not in shown and "End of draft" in shown
    pages = poppler("pdftotext", made["draft"], "-raw", "-").split("\f")[:-1]
    assert all("DRAFT" in words for words in pages)
    assert "DRAFT" not in text_of(made["ok"])


def test_invented_data_are_marked_on_every_page(made: dict[str, bytes], poppler: Poppler) -> None:
    pages = poppler("pdftotext", made["example"], "-raw", "-").split("\f")[:-1]
    assert "nothing on this page was measured" in pages[0]
    assert all("EXAMPLEDATA" in "".join(words.split()) for words in pages)


def test_an_amendment_names_what_it_replaces_and_what_changed(text_of: Read, made: dict[str, bytes]) -> None:
    shown = text_of(made["amended"])
    assert "Amendment: replaces certificate 2031-0031." in shown
    assert "What changed: discharger's name corrected" in shown


def test_a_sample_brought_by_others_is_reported_as_received(text_of: Read) -> None:
    data = replace(EXAMPLE, sample=replace(EXAMPLE.sample, collected_by_laboratory=False))
    words = "the result applies to the sample as received"
    assert words in text_of(render_certificate(data, BASE_URL))
    assert words not in text_of(render_certificate(EXAMPLE, BASE_URL))


def test_what_is_not_recorded_is_said_and_not_left_out(text_of: Read) -> None:
    sample = replace(EXAMPLE.sample, received_at=None, collected_by="", preservation=(), condition="")
    shown = text_of(render_certificate(replace(EXAMPLE, sample=sample, permit=""), BASE_URL))
    for name in ("Received", "Taken by", "Preservation", "Condition", "Permit"):
        assert f"{name} not recorded" in shown


def test_a_tube_that_was_not_read_is_not_called_used(text_of: Read) -> None:
    tubes = (Tube(3, "K7QF3P", ""), Tube(4, "K7QF3P", "0.179", "441", "orange"))
    shown = text_of(render_certificate(replace(EXAMPLE, tubes=tubes), BASE_URL))
    assert "3 K7QF3P not read 4 K7QF3P 0.179 441 orange used" in shown


def test_two_dilution_steps_are_told_in_order(text_of: Read) -> None:
    data = replace(EXAMPLE, dilution=Dilution("50", (Step("10", "100"), Step("20", "100"))))
    words = "10 mL made up to 100 mL, of that 20 mL made up to 100 mL, factor 50"
    assert words in text_of(render_certificate(data, BASE_URL))


def test_markup_in_a_persons_words_is_only_words(text_of: Read, made: dict[str, bytes]) -> None:
    assert text_of(made["markup"]).count(" ".join(MARKUP.split())) >= 3


def test_a_long_name_stays_whole_and_on_the_page(made: dict[str, bytes], poppler: Poppler) -> None:
    words = poppler("pdftotext", made["long"], "-bbox", "-")
    found = [float(x) for x in re.findall(r'xMax="([\d.]+)"', words)]
    assert max(found) < 595.3 - 19 / 25.4 * 72 + 1
    tops = [float(y) for y in re.findall(r'yMin="([\d.]+)"', words)]
    assert min(tops) > 20
    letters = re.sub(r"<[^>]*>|\s|\u200b", "", words)
    assert letters.count(LONG) >= 3


def test_a_name_without_glyphs_shows_codes_and_the_data_keep_it(
    text_of: Read, made: dict[str, bytes], tmp_path: Path, poppler: Poppler
) -> None:
    shown = text_of(made["unicode"])
    assert "Ångström Łódź Βιομηχανία Пивоварня" in shown
    for code in ("⟨U+4E2D⟩", "⟨U+202E⟩", "⟨U+1F600⟩"):
        assert code in shown.replace(" ", "")
    poppler("pdfdetach", made["unicode"], "-saveall")
    assert "中文酒厂" in (tmp_path / "certificate.json").read_text("utf-8")


@settings(max_examples=40)
@example("\u093a")  # a vowel sign without its letter: drawn, but not to be read back
@example("\u0301")
@given(st.text(st.characters(exclude_categories=["Cs"]), max_size=60))
def test_no_name_can_stop_a_certificate(name: str) -> None:
    assert EXAMPLE.strip is not None
    strip = replace(EXAMPLE.strip, result_label=name)
    tubes = (Tube(1, name, "0.1", excluded=name),)
    data = replace(EXAMPLE, discharger=Party(name), point=name, strip=strip, tubes=tubes)
    assert render_certificate(data, BASE_URL).startswith(b"%PDF-1.7")


def test_the_same_input_gives_the_same_bytes_in_another_process(made: dict[str, bytes]) -> None:
    assert render_certificate(EXAMPLE, BASE_URL) == made["ok"]
    code = (
        "import hashlib; from tests.documents.example import *; "
        "from app.documents.certificate import render_certificate; "
        "print(hashlib.sha256(render_certificate(EXAMPLE, BASE_URL)).hexdigest())"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True,
        env={"PYTHONHASHSEED": "7", "TZ": "Asia/Kolkata", "LC_ALL": "C"},
    )  # fmt: skip
    assert done.stdout.strip() == hashlib.sha256(made["ok"]).hexdigest()


def test_other_data_or_another_address_give_other_bytes(made: dict[str, bytes]) -> None:
    assert render_certificate(replace(EXAMPLE, point="elsewhere"), BASE_URL) != made["ok"]
    assert render_certificate(EXAMPLE, "https://other.example") != made["ok"]


def test_only_the_bundled_letters_are_used_and_all_are_embedded(
    made: dict[str, bytes], poppler: Poppler
) -> None:
    rows = poppler("pdffonts", made["ok"]).splitlines()[2:]
    assert rows
    for row in rows:
        assert "LibertinusSerif" in row or "DejaVuSansMono" in row
        assert row.split()[-5:-2] == ["yes", "yes", "yes"]


BAD: list[tuple[CertificateData, set[str]]] = [
    (replace(EXAMPLE, number="20 31/1"), {"number"}),
    (replace(EXAMPLE, number="2031-0047/../x"), {"number"}),
    (replace(EXAMPLE, issued_at=None, authorised=None), {"issued_at", "authorised"}),
    (replace(EXAMPLE, number=None), {"issued_at", "authorised"}),
    (replace(EXAMPLE, journal=replace(EXAMPLE.journal, digest="abc")), {"journal.digest"}),
    (replace(EXAMPLE, checks=(Check("Spike", "90 to 110 %", "87 %", False),)), {"checks.0.decision"}),
    (replace(EXAMPLE, sample=replace(EXAMPLE.sample, period_start=None)), {"sample.period_start"}),
    (replace(EXAMPLE, result=replace(EXAMPLE.result, reported="< 100")), {"result.reported"}),
    (replace(BELOW, result=replace(BELOW.result, reported="100")), {"result.reported"}),
    (replace(BELOW, result=replace(BELOW.result, reported="> 100")), {"result.reported"}),
    (replace(OVER, result=replace(OVER.result, expanded_u="130")), {"result.expanded_u"}),
    (replace(EXAMPLE, zone="Nowhere/Land"), {"zone"}),
    (replace(EXAMPLE, issued_at="2031-06-01T14:05:00"), {"at"}),
]


@pytest.mark.parametrize(("data", "fields"), BAD)
def test_what_is_missing_or_contradicts_itself_is_refused_and_named(
    data: CertificateData, fields: set[str]
) -> None:
    with pytest.raises(InputError) as refused:
        render_certificate(data, BASE_URL)
    assert set(refused.value.fields) == fields


def test_a_draft_may_still_wait_for_a_decision() -> None:
    open_check = (Check("Spike", "90 to 110 %", "87 %", False),)
    assert render_certificate(replace(DRAFT, checks=open_check), BASE_URL).startswith(b"%PDF")


def test_an_unknown_paper_is_refused() -> None:
    with pytest.raises(InputError, match="paper"):
        render_certificate(EXAMPLE, BASE_URL, "foolscap")
