"""Decision rules against ILAC-G8:09/2019 and JCGM 106:2012; numbers worked by hand from their definitions."""

from datetime import date

import pytest

from app.compliance.decision import (
    GUARDED,
    GUARDED_REJECTION,
    SIMPLE,
    Outcome,
    decide,
    probability_above,
    rule_named,
)
from app.compliance.limits import Limit

pytestmark = pytest.mark.published

LIMIT = Limit("daily_maximum", 1000, date(2030, 1, 1), "permit 7, page 3")


@pytest.mark.parametrize(
    ("value", "simple", "guarded", "guarded_rejection", "four"),
    [
        (920, "within", "within", "within", "pass"),
        (921, "within", "undecided", "within", "conditional pass"),
        (1000, "within", "undecided", "within", "conditional pass"),
        (1001, "above", "above", "undecided", "conditional fail"),
        (1080, "above", "above", "undecided", "conditional fail"),
        (1081, "above", "above", "above", "fail"),
    ],
)
def test_the_three_rules_and_the_four_states(value, simple, guarded, guarded_rejection, four):
    """ILAC-G8:09/2019, 4.2.1 to 4.2.3: limit 1000, U = 80 (k = 2), so A = 920 and T + U = 1080."""
    outcome = Outcome("ok", value, u=40, expanded_u=80)
    found = [decide(outcome, LIMIT, rule).verdict for rule in (SIMPLE, GUARDED, GUARDED_REJECTION)]
    assert found == [simple, guarded, guarded_rejection]
    assert decide(outcome, LIMIT).four_state == four


def test_the_risk_at_the_edges():
    """ILAC-G8:09/2019 table 1, normal: 2.28 % at T - 2u, 5.0 % at T - 1.645 u, 50 % at the limit."""
    risks = [100 * probability_above(x, 40, 1000) for x in (920, 1000 - 1.645 * 40, 960, 1000)]
    assert risks == pytest.approx([2.28, 5.0, 15.9, 50.0], abs=0.04)


def test_one_sided_edges_of_a_result_near_its_limit():
    """580, u 17.5, beside 600 (JCGM 106:2012, 7.4 and 8.3): 0.1265; edges at 1.645 u 571.2, 628.8."""
    limit = Limit("daily_maximum", 600, date(2030, 1, 1), "permit 7, page 3")
    outcome = Outcome("ok", 580, u=17.5)
    guarded = decide(outcome, limit, rule_named("guarded", 1.645, "u"))
    shown = decide(outcome, limit, rule_named("guarded_rejection", 1.645, "u"))
    assert guarded.probability_above == pytest.approx(0.1265, abs=5e-5)
    assert (guarded.accept_up_to, shown.reject_above) == pytest.approx((571.2, 628.8), abs=0.05)
    assert guarded.verdict == "undecided"
