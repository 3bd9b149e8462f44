"""Charges: text is never run, every mistake has its place, the lines add up to the sum."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.charges import charge, excess
from app.compliance.formula import names, read, work, write
from app.errors import InputError

KNOWN = {"volume": Decimal("2.5"), "cod": Decimal("1450"), "limit": Decimal("600"), "rate": Decimal("0.12")}

NUMBERS = st.decimals(0, 1000, places=2, allow_nan=False, allow_infinity=False).map(lambda d: format(d, "f"))
FORMULAS = st.recursive(
    NUMBERS | st.sampled_from(sorted(KNOWN)),
    lambda inner: st.one_of(
        st.tuples(inner, st.sampled_from("+-*"), inner).map(lambda t: f"({t[0]} {t[1]} {t[2]})"),
        st.tuples(inner, inner).map(lambda t: f"max({t[0]}, {t[1]})"),
        inner.map(lambda t: f"-{t}"),
    ),
    max_leaves=8,
)


def reference(text: str) -> Fraction:
    """Work out the same text with Python's own grammar, on fractions of known names only."""
    import ast

    def value(node: ast.AST) -> Fraction:
        match node:
            case ast.Constant(value=number):
                return Fraction(str(number))
            case ast.Name(id=name):
                return Fraction(KNOWN[name])
            case ast.UnaryOp(op=ast.USub(), operand=inner):
                return -value(inner)
            case ast.BinOp(left=left, op=ast.Add(), right=right):
                return value(left) + value(right)
            case ast.BinOp(left=left, op=ast.Sub(), right=right):
                return value(left) - value(right)
            case ast.BinOp(left=left, op=ast.Mult(), right=right):
                return value(left) * value(right)
            case ast.Call(args=[left, right]):
                return max(value(left), value(right))
        raise AssertionError(ast.dump(node))

    return value(ast.parse(text.lstrip("0") or "0", mode="eval").body)


@given(FORMULAS)
def test_a_formula_means_what_arithmetic_says(text):
    """Precedence, signs and brackets as in Python's own grammar."""
    assert float(work(read(text), KNOWN)) == pytest.approx(float(reference(text)), rel=1e-12, abs=1e-9)


@given(FORMULAS)
def test_written_out_and_read_again_it_is_the_same(text):
    """The worked line on a statement is itself a formula with the same result."""
    node = read(text)
    again = read(write(node))
    assert work(again, KNOWN) == work(node, KNOWN)
    assert names(again) == names(node)


@given(FORMULAS)
def test_the_lines_add_up(text):
    """Whatever the formula, its terms make its sum."""
    try:
        found = charge(text, KNOWN)
    except InputError as error:
        assert "formula" in error.fields
        return
    assert float(sum(line.amount for line in found.lines)) == pytest.approx(float(found.unrounded), abs=1e-6)


@given(st.text(max_size=60))
def test_any_text_is_a_formula_or_gets_words(text):
    """Never a traceback, never run."""
    try:
        charge(text, KNOWN)
    except InputError as error:
        assert error.fields


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "a number or a name is expected"),
        ("1 +", "a number or a name is expected"),
        ("(1", "')' is expected"),
        ("1)", "')' has no place here"),
        ("volume cod", "'cod' has no place here"),
        ("2 ** 3", "a number or a name is expected"),
        ("sqrt(4)", "'sqrt' is not a function; max, min and if are"),
        ("if(1, 2, 3)", "<, <=, > or >= is expected"),
        ("cod.real", "'.' has no place here"),
        ("__import__('os')", '"\'" has no place here'),
        ("lambda: 1", "':' has no place here"),
        ("1 / 0", "divides by zero"),
        ("0 / 0", "divides by zero"),
        ("(" * 60 + "1" + ")" * 60, "too many brackets"),
        ("1+" * 260 + "1", "has more than 500 characters"),
        ("9999999999 * 9999999999", "gives 10^15 or more"),
    ],
)
def test_every_mistake_has_its_words(text, words):
    """Not Python, not a spreadsheet: a small grammar."""
    with pytest.raises(InputError) as caught:
        charge(text, KNOWN)
    assert caught.value.fields["formula"] == [words]


def test_a_quantity_without_a_number_is_named():
    """All of them at once."""
    with pytest.raises(InputError) as caught:
        charge("volume * (bod + ss)", KNOWN)
    assert set(caught.value.fields) == {"quantities.bod", "quantities.ss"}


@pytest.mark.parametrize("bad", [0.1, "5", Decimal("NaN"), Decimal("Infinity"), Decimal("1E+15"), 3])
def test_money_is_decimal(bad):
    """A binary float would bring its own error into a bill."""
    with pytest.raises(InputError) as caught:
        charge("volume", {"volume": bad})
    assert "quantities.volume" in caught.value.fields


def test_the_boundary_of_a_choice_is_the_programmes():
    """ "More than 2.25" and "2.25 or more" differ exactly there."""
    at = {"cod": Decimal("450"), "bod": Decimal("200")}
    assert charge("if(cod / bod > 2.25, 1, 2)", at).amount == 2
    assert charge("if(cod / bod >= 2.25, 1, 2)", at).amount == 1


def test_rounding_once_at_the_end_and_by_the_setting():
    """Half a cent goes up or to the even cent; the unrounded value stays."""
    known = {"a": Decimal("0.125")}
    assert charge("a", known).amount == Decimal("0.13")
    assert charge("a", known, rounding="half even").amount == Decimal("0.12")
    assert charge("a", known).unrounded == Decimal("0.125")
    assert charge("a", known, places=0).amount == 0


def test_a_term_taken_off_has_a_negative_line():
    """A credit shows as one."""
    found = charge("cod * rate - volume * 2", KNOWN)
    assert [line.amount for line in found.lines] == [Decimal("174.00"), Decimal("-5.0")]
    assert found.lines[1].worked == "2.5 * 2"


@given(
    st.lists(st.integers(0, 3000), min_size=1, max_size=12),
    st.integers(0, 3000),
)
def test_the_mean_of_the_excesses_is_never_the_smaller(values, threshold):
    """Jensen: thresholding first can only charge more."""
    numbers = [Decimal(v) for v in values]
    first = excess(numbers, Decimal(threshold), "excess of the mean")
    second = excess(numbers, Decimal(threshold), "mean of the excesses")
    assert 0 <= first <= second + Decimal("1e-20")


def test_what_cannot_be_charged_by():
    """No sample, volumes that do not fit."""
    one = [Decimal(1)]
    for values, volumes in (([], None), (one, []), (one, [Decimal(0)]), (one, [Decimal(-1)])):
        with pytest.raises(InputError):
            excess(values, Decimal(1), "excess of the mean", volumes)
