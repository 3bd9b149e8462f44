"""Verdicts: a bound decides only from the telling side, and every verdict names its rule and its limit."""

from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.decision import (
    GUARDED,
    GUARDED_REJECTION,
    RULES,
    SIMPLE,
    Outcome,
    decide,
    decide_all,
    rule_named,
)
from app.compliance.limits import Limit
from app.errors import InputError

LIMIT = Limit("daily_maximum", 1000, date(2030, 1, 1), "permit 7, page 3")
MONTH = Limit("monthly_average", 700, date(2030, 1, 1), "permit 7, page 3")
MASS = Limit("mass", 120, date(2030, 1, 1), "permit 7, page 4", unit="kg/d")
LIMIT_VALUES = st.integers(1, 5000)


@pytest.mark.parametrize(
    ("status", "bound", "verdict"),
    [
        ("below", 30, "within"),
        ("below", 1000, "within"),
        ("below", 1500, "undecided"),
        ("over", 900, "undecided"),
        ("over", 1000, "undecided"),
        ("over", 5000, "above"),
        ("disagree", 500, "undecided"),
        ("disagree", None, "undecided"),
    ],
)
def test_a_bound_decides_only_from_the_telling_side(status, bound, verdict):
    """A bound on the other side says nothing, and is never called within."""
    found = decide(Outcome(status, bound), LIMIT)
    assert found.verdict == verdict
    assert ("again" in found.why) == (verdict == "undecided")
    assert found.probability_above is None


def test_a_verdict_carries_the_limit_and_the_rule_it_used():
    """Everything a certificate must print stands in the verdict."""
    found = decide(Outcome("ok", 2210, u=60, expanded_u=130, dof=12), LIMIT)
    assert (found.basis, found.limit, found.unit) == ("daily_maximum", 1000, "mg/L")
    assert (found.effective_from, found.source) == (date(2030, 1, 1), "permit 7, page 3")
    assert found.rule == SIMPLE.words and "ILAC" in found.rule_source
    assert found.guard_band == 130
    assert found.why == "2210 mg/L is above the daily maximum of 1000 mg/L."


def test_equal_to_the_limit_complies_and_says_so():
    """Exceeding is strictly above (40 CFR 403.8(f)(2)(viii): exceed)."""
    assert decide(Outcome("ok", 1000), LIMIT).why.endswith("which complies.")


def test_no_limit_is_its_own_word():
    """Never "within" where nothing was in force."""
    assert decide(Outcome("ok", 5), None).verdict == "no limit"
    assert [v.verdict for v in decide_all(Outcome("ok", 5), [LIMIT], date(2029, 1, 1))] == ["no limit"]


def test_each_basis_of_the_same_unit_gets_its_verdict():
    """A mass limit is not held against a concentration."""
    found = decide_all(Outcome("ok", 800), [LIMIT, MONTH, MASS], date(2031, 5, 1))
    assert [(v.basis, v.verdict) for v in found] == [
        ("daily_maximum", "within"),
        ("monthly_average", "above"),
    ]


def test_units_must_agree():
    """Milligrams a litre are never held against kilograms a day."""
    with pytest.raises(InputError):
        decide(Outcome("ok", 800), MASS)


def test_a_guarded_rule_needs_an_uncertainty():
    """Without U the guard band would silently be nothing."""
    with pytest.raises(InputError) as caught:
        decide(Outcome("ok", 800), LIMIT, GUARDED)
    assert "expanded_u" in caught.value.fields


def test_a_programmes_own_guard_band_is_named_as_such():
    """The number of the rule is a setting and is returned with its origin."""
    rule = rule_named("guarded", 0.5)
    found = decide(Outcome("ok", 950, expanded_u=80), LIMIT, rule)
    assert (found.verdict, found.guard_band, found.accept_up_to) == ("within", 40, 960)
    assert found.rule_source == "set by the programme"
    with pytest.raises(InputError):
        rule_named("generous")
    with pytest.raises(InputError):
        rule_named("guarded", -1)


@given(value=st.integers(0, 6000), u=st.integers(1, 500), limit=LIMIT_VALUES)
def test_guarding_one_side_never_helps_the_other(value, u, limit):
    """Guarded acceptance says "within" no oftener, guarded rejection "above" no oftener, than simple."""
    outcome = Outcome("ok", value, u=u, expanded_u=2 * u)
    held = Limit("daily_maximum", limit, date(2030, 1, 1), "permit")
    plain, sewer, discharger = (
        decide(outcome, held, r).verdict for r in (SIMPLE, GUARDED, GUARDED_REJECTION)
    )
    assert plain == ("above" if value > limit else "within")
    assert sewer in {"within": ("within", "undecided"), "above": ("above",)}[plain]
    assert discharger in {"above": ("above", "undecided"), "within": ("within",)}[plain]


@given(value=st.floats(0, 1e5), u=st.floats(0, 1e4), limit=LIMIT_VALUES, rule=st.sampled_from(sorted(RULES)))
def test_a_larger_value_never_looks_better(value, u, limit, rule):
    """Verdicts are monotone in the value, and the probability with them."""
    order = ["within", "undecided", "above"]
    held = Limit("daily_maximum", limit, date(2030, 1, 1), "permit")
    low, high = (
        decide(Outcome("ok", v, u=u, expanded_u=2 * u), held, RULES[rule]) for v in (value, value * 1.5)
    )
    assert order.index(low.verdict) <= order.index(high.verdict)
    assert low.probability_above <= high.probability_above


def test_outcomes_that_cannot_be_are_refused():
    """A result without its number, and an uncertainty that is no number."""
    with pytest.raises(InputError):
        Outcome("ok", None)
    with pytest.raises(InputError):
        Outcome("ok", float("nan"))
    with pytest.raises(InputError):
        Outcome("ok", 5, u=float("inf"))
