"""The preparation sheet and the reagent label: read back, cautions first, purity corrected, both papers."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import pytest

from app import verbs
from app.documents.preparation import PreparationData, render_preparation
from app.documents.reagent_label import ReagentLabelData, render_reagent_label
from app.errors import InputError

MADE_AT = "2031-06-01T14:05:00-06:00"
RECIPE = {
    "sample_ml": 2.5,
    "digestion_solution_ml": 1.5,
    "acid_reagent_ml": 3.5,
    "dichromate_g_per_l": 10.216,
    "mercury_sulfate_g_per_l": 33.3,
    "silver_sulfate_g_per_l": 10.12,
    "wavelength_nm": 600.0,
}
GIVEN = {
    "recipe": RECIPE,
    "digestion_solution_ml": 500.0,
    "acid_reagent_ml": 1000.0,
    "digestion_acid_ml_per_l": 167.0,
    "purity": {"dichromate": 0.995},
    "stock": {"cod": 1000.0, "volume_ml": 1000.0},
    "levels": [0.0, 100.0, 700.0],
}
DATA = PreparationData(
    recipe="High range, 16 mm tube",
    source="a published method",
    programme="Esker Valley Sewer Authority",
    laboratory="Esker Valley Laboratory",
    zone="America/Denver",
    made_at=MADE_AT,
    sheet=verbs.find("preparation")(GIVEN),
    stock="1000 mg/L in 1000 mL",
)
LABEL = ReagentLabelData(
    lot="D-31-014",
    recipe="High range, 16 mm tube",
    made_on="2031-05-01",
    expires_on="2032-05-01",
    origin="made",
    standardised="2031-05-02 factor 0.998",
    hazards=("Fatal if inhaled (H330)",),
    laboratory="Esker Valley Laboratory",
    zone="America/Denver",
    made_at=MADE_AT,
)


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_the_sheet_says_what_to_weigh_with_its_cautions(text_of: Callable[[bytes], str], paper: str) -> None:
    """10.216 g/L for half a litre at 99.5 % is 5.1337 g; 1000 mg/L of COD is 0.85098 g/L of phthalate."""
    shown = " ".join(text_of(render_preparation(DATA, paper)).split())
    for told in (
        "Before you begin",
        "5.1337 g",
        "83.5 mL",
        "16.65 g",
        "10.12 g",
        "purity 0.995",
        "0.85098 g",
        "100 mg/L",
        "25 mL to 250 mL",
        "acid into water",
        "safety data sheet",
    ):
        assert told in shown, told
    assert shown.index("Before you begin") < shown.index("Reagents, in this order")


def test_the_same_sheet_gives_the_same_bytes_and_an_example_says_so(text_of: Callable[[bytes], str]) -> None:
    assert render_preparation(DATA) == render_preparation(DATA)
    shown = text_of(render_preparation(replace(DATA, example=True)))
    assert "EXAMPLEDATA" in "".join(shown.split())


@pytest.mark.parametrize("paper", ["a4", "letter"])
def test_a_reagent_label_names_lot_hazards_and_days(text_of: Callable[[bytes], str], paper: str) -> None:
    shown = text_of(render_reagent_label(LABEL, paper))
    for told in ("Digestion solution", "Acid reagent", "D-31-014", "2032-05-01", "factor 0.998", "H330"):
        assert told in shown, told


def test_a_label_without_a_lot_and_an_unknown_paper_are_refused() -> None:
    with pytest.raises(InputError):
        render_reagent_label(replace(LABEL, lot=" "))
    with pytest.raises(InputError):
        render_preparation(DATA, "b5")


def test_standards_without_a_stock_are_refused_and_every_bad_field_is_named() -> None:
    with pytest.raises(InputError) as caught:
        verbs.find("preparation")(GIVEN | {"stock": None})
    assert "stock" in caught.value.fields
    with pytest.raises(InputError) as caught:
        verbs.find("preparation")(GIVEN | {"digestion_solution_ml": -1, "purity": {"dichromate": 1.2}})
    assert set(caught.value.fields) == {"digestion_solution_ml", "purity.dichromate"}
