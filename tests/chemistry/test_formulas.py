"""Formulas: what is read, and what is refused in words."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.chemistry.atoms import ATOMIC_MASS, molar_mass, parse_formula
from app.chemistry.oxygen_demand import O2_PER_ATOM, oxygen_demand
from app.errors import InputError


@pytest.mark.parametrize(
    ("formula", "atoms"),
    [
        ("C8H5KO4", {"C": 8, "H": 5, "K": 1, "O": 4}),
        ("(CH3)2CO", {"C": 3, "H": 6, "O": 1}),
        ("CH3[CH2]14COOH", {"C": 16, "H": 32, "O": 2}),
        ("C6H12(OH)((C)2)3", {"C": 12, "H": 13, "O": 1}),
        ("Cl", {"Cl": 1}),
    ],
)
def test_reads_symbols_counts_and_brackets(formula: str, atoms: dict[str, int]) -> None:
    assert parse_formula(formula) == atoms


@pytest.mark.parametrize(
    ("formula", "word"),
    [
        ("", "empty"),
        ("Xx2", "Xx"),
        ("c6h12o6", "'c'"),
        ("C6H12O6.H2O", "crystallisation"),
        ("C6H8O7·H2O", "crystallisation"),
        ("NH4+", "charge"),
        ("C0H4", "'0'"),
        ("C06", "'06'"),
        ("2H2O", "follows no symbol"),
        ("(CH3", "not closed"),
        ("CH3)2", "closes nothing"),
        ("()2C", "closes nothing"),
        ("(CH3]2", "closes nothing"),
        ("C H4", "' '"),
        ("C" * 121, "longer"),
        ("C99999H99999", "atoms"),
        ("Au", "Au"),
    ],
)
def test_refuses_in_words_and_names_the_field(formula: str, word: str) -> None:
    with pytest.raises(InputError) as refused:
        oxygen_demand(formula)
    assert list(refused.value.fields) == ["formula"]
    assert word in refused.value.message


@pytest.mark.parametrize(("formula", "word"), [("FeSO4", "Fe"), ("H2O2", "oxidant"), ("KNO3", "oxidant")])
def test_refuses_what_has_no_oxygen_demand(formula: str, word: str) -> None:
    with pytest.raises(InputError, match=word):
        oxygen_demand(formula)


@pytest.mark.parametrize("formula", ["CO2", "H2O", "HCl", "NH3", "H2SO4", "NaCl", "K2SO4"])
def test_what_is_already_oxidised_takes_nothing(formula: str) -> None:
    assert oxygen_demand(formula).oxygen_demand == 0.0


@given(st.text(max_size=40))
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        atoms = parse_formula(text)
    except InputError as refused:
        assert refused.fields
    else:
        assert molar_mass(atoms) > 0


@given(st.dictionaries(st.sampled_from(sorted(ATOMIC_MASS)), st.integers(1, 60), min_size=1))
def test_a_formula_written_from_atoms_gives_them_back(atoms: dict[str, int]) -> None:
    assert parse_formula("".join(f"{element}{count}" for element, count in atoms.items())) == atoms


@given(st.integers(1, 30), st.integers(1, 9))
def test_demand_per_mass_does_not_depend_on_how_often_the_formula_is_repeated(
    carbon: int, times: int
) -> None:
    unit = f"C{carbon}H{2 * carbon}O"
    repeated = oxygen_demand(f"({unit}){times}").oxygen_demand
    assert repeated == pytest.approx(oxygen_demand(unit).oxygen_demand, rel=1e-12)


def test_every_rule_has_a_mass() -> None:
    assert O2_PER_ATOM.keys() <= ATOMIC_MASS.keys()
