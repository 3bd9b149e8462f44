"""Labels, custody form, run sheet, waste label: read back, valid, and the same bytes each time."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from app.compliance.codes import codes
from app.documents.custody import CustodyBottle, CustodyData, Transfer, render_custody
from app.documents.data import Dilution, Step
from app.documents.labels import SHEETS, Label, render_labels
from app.documents.run_sheet import RunSheetData, RunTube, render_run_sheet
from app.documents.waste_label import WasteLabelData, render_waste_label
from app.errors import InputError
from app.safety.container import CONTENTS, HAZARDS
from tests.documents.conftest import Faults, Poppler

AT = "2031-06-01T20:05:00Z"
CODES = list(codes(4_000_000, 24))
LABELS = tuple(Label(code) for code in CODES)
CUSTODY = CustodyData(
    id="R-2031-05-29",
    programme="Esker Valley Sewer Authority",
    laboratory="Esker Valley Laboratory",
    zone="America/Denver",
    made_at=AT,
    bottles=(
        CustodyBottle(
            CODES[0], "Hollin Vale Creamery", "Outlet B", "composite", "2031-05-29T08:00:00-06:00",
            "2031-05-28T08:00:00-06:00", ("sulfuric acid to pH 1.6", "cooled"), "500 mL glass",
            "Rowan Teague",
        ),
        CustodyBottle(CODES[1], "Tarn Street Plating", "Pit 1", "grab", "2031-05-29T09:10:00-06:00"),
    ),
    transfers=(
        Transfer("Rowan Teague", "Ines Calloway", "2031-05-29T15:40:00-06:00", "6.4 °C", "intact, 0417"),
    ),
)  # fmt: skip
RUN = RunSheetData(
    name="Run of 30 May, morning",
    programme="Esker Valley Sewer Authority",
    laboratory="Esker Valley Laboratory",
    zone="America/Denver",
    made_at=AT,
    planned_by="Ines Calloway",
    recipe="Closed reflux, high range",
    source="EPA Method 410.4, revision 2.0 (1993)",
    lot="D-31-014",
    photometer="Photometer 2",
    wavelength_nm="600",
    block="Block 1",
    calibration="High range, 12 May",
    container="Container 12",
    minutes=120,
    temperature_c="150",
    tubes=(
        RunTube(2, "blank"),
        RunTube(3, "verification", expected="500"),
        RunTube(6, CODES[0], Dilution("50", (Step("10", "100"), Step("20", "100")))),
        RunTube(7, CODES[0], Dilution("1"), absorbance="0.201"),
    ),
    order=("sample", "digestion solution, swirl", "acid reagent, slowly"),
    gates=("Hood on, sash down", "Caps tight before mixing"),
    cautions=("The safety data sheet of the lot comes first.",),
)
WASTE = WasteLabelData(
    container="12",
    contents=CONTENTS,
    hazards=HAZARDS,
    generator="Esker Valley Laboratory",
    address="Works Road 3, Esker Valley",
    phone="the number posted at the site",
    zone="America/Denver",
    made_at=AT,
    started_on="2031-04-02",
    codes=("D002", "D007", "D009", "D011"),
    amounts=(("mercury", "4.2 g"), ("acid", "0.94 L")),
    filled="3.1 L of 5 L",
)
PAPERS: dict[str, Callable[[str], bytes]] = {
    "labels": lambda paper: render_labels(LABELS, "Esker Valley Sewer Authority", AT, paper),
    "custody": lambda paper: render_custody(CUSTODY, paper),
    "run sheet": lambda paper: render_run_sheet(RUN, paper),
    "waste label": lambda paper: render_waste_label(WASTE, paper),
}
SIZES = {"a4": [595.28, 841.89], "letter": [612.0, 792.0]}


@pytest.mark.parametrize("paper", SIZES)
@pytest.mark.parametrize("kind", PAPERS)
def test_it_is_an_archive_file_of_the_size_asked_for(
    kind: str, paper: str, faults: Faults, poppler: Poppler
) -> None:
    pdf = PAPERS[kind](paper)
    assert pdf == PAPERS[kind](paper)
    assert faults(pdf, "3a") == faults(pdf, "ua1") == []
    size = next(line for line in poppler("pdfinfo", pdf).splitlines() if line.startswith("Page size"))
    found = sorted(float(part) for part in size.split()[2:5:2])
    assert found == pytest.approx(SIZES[paper], abs=0.05)


@pytest.mark.parametrize("paper", SIZES)
def test_each_label_carries_its_code_and_lies_on_its_place(paper: str, poppler: Poppler) -> None:
    boxes = poppler("pdftotext", PAPERS["labels"](paper), "-bbox", "-").split("<page ")[1:]
    sheet = SHEETS[paper]
    per_page = sheet.columns * sheet.rows
    assert len(boxes) == -(-len(CODES) // per_page)
    for index, code in enumerate(CODES):
        where, place = divmod(index, per_page)
        row, column = divmod(place, sheet.columns)
        line = next(words for words in boxes[where].splitlines() if f">{code}<" in words)
        x, y = (float(line.split(f'{name}="')[1].split('"')[0]) * 25.4 / 72 for name in ("xMin", "yMin"))
        left = sheet.left + column * (sheet.width + sheet.gap_x)
        top = sheet.top + row * (sheet.height + sheet.gap_y)
        assert left < x < left + sheet.width and top - 3 < y < top + sheet.height / 2


def test_labels_stay_inside_the_paper() -> None:
    sizes = {"a4": (210.0, 297.0), "letter": (215.9, 279.4)}
    for paper, sheet in SHEETS.items():
        width, height = sizes[paper]
        assert sheet.left + sheet.columns * sheet.width + (sheet.columns - 1) * sheet.gap_x <= width
        assert sheet.top + sheet.rows * sheet.height + (sheet.rows - 1) * sheet.gap_y <= height


def test_a_label_shows_what_is_known_already(text_of: Callable[[bytes], str]) -> None:
    label = Label(CODES[0], ("Hollin Vale Creamery, outlet B",))
    shown = text_of(render_labels((label,), "Esker Valley Sewer Authority", AT))
    assert "Hollin Vale Creamery, outlet B" in shown and "taken by" in shown


def test_a_signature_on_glass_stands_beside_its_name(text_of: Callable[[bytes], str]) -> None:
    plain = CUSTODY.transfers[0]
    strokes = "M10 40L22 18L30 42L44 20M50 40L70 38"
    signed = replace(CUSTODY, transfers=(replace(plain, given_strokes=strokes),))
    unsigned = replace(CUSTODY, transfers=(plain,))
    assert plain.given_by in text_of(render_custody(signed))
    assert len(render_custody(signed)) > len(render_custody(unsigned)) + 100


def test_the_custody_form_has_both_halves_of_every_hand_over(text_of: Callable[[bytes], str]) -> None:
    shown = text_of(PAPERS["custody"]("a4"))
    for words in (
        CODES[0],
        "2031-05-28 08:00 -06:00 to 2031-05-29 08:00 -06:00",
        "sulfuric acid to pH 1.6; cooled",
        "Given by (name, signature)",
        "Taken by (name, signature)",
        "Rowan Teague 2031-05-29 15:40 -06:00 Ines Calloway 6.4 °C intact, 0417",
        "page 1 of 1",
        "End of custody form R-2031-05-29",
    ):
        assert words in shown
    assert "Pit 1 grab 2031-05-29 09:10 -06:00 not recorded not recorded" in shown


def test_the_run_sheet_tells_each_tube_its_dilution(text_of: Callable[[bytes], str]) -> None:
    shown = text_of(PAPERS["run sheet"]("a4"))
    for words in (
        "Run sheet: Run of 30 May, morning",
        "Block 1, 2 h at 150 °C",
        "10 mL made up to 100 mL, of that 20 mL made up to 100 mL, factor 50",
        f"7 {CODES[0]} none (factor 1) 0.201",
        "3 verification 500",
        "1. sample 2. digestion solution, swirl 3. acid reagent, slowly",
        "Hood on, sash down",
        "The safety data sheet of the lot comes first.",
    ):
        assert words in shown


def test_the_waste_label_says_what_is_in_it_and_why_it_is_dangerous(text_of: Callable[[bytes], str]) -> None:
    shown = text_of(PAPERS["waste label"]("letter"))
    for words in ("HAZARDOUS WASTE", CONTENTS, *HAZARDS, "D002, D007, D009, D011", "mercury 4.2 g", "12"):
        assert words in shown
    assert "for the generator to determine" in text_of(render_waste_label(replace(WASTE, codes=())))


def test_invented_data_are_marked(text_of: Callable[[bytes], str]) -> None:
    for made in (
        render_custody(replace(CUSTODY, example=True)),
        render_run_sheet(replace(RUN, example=True)),
        render_waste_label(replace(WASTE, example=True)),
    ):
        assert "EXAMPLEDATA" in text_of(made).replace(" ", "")


@pytest.mark.parametrize(
    ("make", "field"),
    [
        (lambda: render_labels((), "x", AT), "labels"),
        (lambda: render_labels((Label("A"), Label("A")), "x", AT), "labels"),
        (lambda: render_labels((Label("A", ("1", "2", "3", "4")),), "x", AT), "labels"),
        (lambda: render_custody(replace(CUSTODY, bottles=())), "bottles"),
        (lambda: render_run_sheet(replace(RUN, tubes=())), "tubes"),
        (lambda: render_run_sheet(replace(RUN, tubes=(RunTube(1, "a"), RunTube(1, "b")))), "tubes"),
        (lambda: render_waste_label(replace(WASTE, hazards=())), "hazards"),
        (lambda: render_waste_label(replace(WASTE, container=" ")), "container"),
        (lambda: render_custody(CUSTODY, "b5"), "paper"),
    ],
)
def test_what_cannot_be_printed_is_named(make: Callable[[], bytes], field: str) -> None:
    with pytest.raises(InputError) as refused:
        make()
    assert list(refused.value.fields) == [field]


def test_markup_and_strange_letters_stay_words(text_of: Callable[[bytes], str]) -> None:
    words = "#eval(x) *b* $y$ 中"
    bottle = replace(CUSTODY.bottles[0], discharger=words)
    assert "#eval(x) *b* $y$ ⟨U+4E2D⟩" in text_of(render_custody(replace(CUSTODY, bottles=(bottle,))))
