"""Limits in force: the sample's day decides, and a later limit never re-judges an earlier sample."""

from datetime import date, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.limits import (
    Limit,
    combined_wastestream_limit,
    equivalent_concentration_mg_l,
    limit_on,
    limits_on,
)
from app.errors import InputError

FIRST = Limit("daily_maximum", 1500, date(2030, 1, 1), "permit 1")
SECOND = Limit("daily_maximum", 1200, date(2031, 3, 1), "permit 2")
MONTH = Limit("monthly_average", 900, date(2031, 3, 1), "permit 2", effective_until=date(2031, 12, 31))


def test_the_limit_of_the_day_is_the_one_that_came_into_force_last():
    """One day before a renewal the old limit stands, on its first day the new one."""
    limits = [SECOND, MONTH, FIRST]
    assert limit_on(limits, date(2031, 2, 28), "daily_maximum") == FIRST
    assert limit_on(limits, date(2031, 3, 1), "daily_maximum") == SECOND
    assert limit_on(limits, date(2029, 12, 31), "daily_maximum") is None


def test_a_limit_ends_after_its_last_day():
    """The last day itself is still in force."""
    assert limit_on([MONTH], date(2031, 12, 31), "monthly_average") == MONTH
    assert limit_on([MONTH], date(2032, 1, 1), "monthly_average") is None


def test_of_two_limits_of_one_day_the_one_set_later_stands():
    """A mistyped limit is corrected by setting it again."""
    again = Limit("daily_maximum", 1100, SECOND.effective_from, "permit 2, corrected")
    assert limit_on([SECOND, again], date(2031, 4, 1), "daily_maximum") == again


def test_every_basis_is_found_on_its_own():
    """A point has a daily maximum and a monthly average at the same time."""
    assert limits_on([FIRST, SECOND, MONTH], date(2031, 4, 1)) == [SECOND, MONTH]


@given(
    days=st.lists(st.integers(0, 400), min_size=1, max_size=8, unique=True),
    later=st.integers(0, 400),
    asked=st.integers(0, 400),
)
def test_a_later_limit_never_changes_an_earlier_day(days, later, asked):
    """Adding a limit with a later first day leaves every earlier day's limit as it was."""
    start = date(2030, 1, 1)
    limits = [Limit("daily_maximum", 100 + d, start + timedelta(d), "permit") for d in days]
    day = start + timedelta(min(asked, later - 1)) if later else None
    if day is None:
        return
    added = [*limits, Limit("daily_maximum", 9999, start + timedelta(later), "new permit")]
    assert limit_on(added, day, "daily_maximum") == limit_on(limits, day, "daily_maximum")


def test_a_limit_that_could_not_be_defended_is_refused_with_every_reason():
    """All wrong fields are named at once."""
    with pytest.raises(InputError) as caught:
        Limit("weekly", -3, date(2031, 3, 1), " ", effective_until=date(2031, 2, 1))
    assert set(caught.value.fields) == {"basis", "value", "source", "effective_until"}


def test_a_mass_limit_has_an_equivalent_concentration():
    """500 lb/d at 0.05 million gallons a day is 1198.26 mg/L: exact factors, arithmetic."""
    mass, flow = 500 * 0.45359237, 0.05e6 * 3.785411784 / 1000
    assert equivalent_concentration_mg_l(mass, flow) == pytest.approx(1198.26, abs=0.005)


def test_combined_wastestream_formula():
    """40 CFR 403.6(e)(1)(i): C 600, F_i 0.03, F_D 0.02, F_T 0.05 give 360 mg/L."""
    assert combined_wastestream_limit([(600, 0.03)], 0.02, 0.05) == pytest.approx(360)


def test_streams_cannot_carry_more_than_the_combined_point():
    """Otherwise the formula would raise a limit."""
    with pytest.raises(InputError):
        combined_wastestream_limit([(600, 0.04)], 0.02, 0.05)
