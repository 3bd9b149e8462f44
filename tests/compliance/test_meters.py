"""Field meters: an acceptance is met or not, and doubt reaches back to the last good check, no further."""

from datetime import UTC, datetime, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.meters import ACCEPTANCES, Point, in_doubt, judge
from app.errors import InputError

NOON = datetime(2031, 6, 1, 12, tzinfo=UTC)


def at(hours):
    """Return a moment in hours from noon."""
    return NOON + timedelta(hours=hours)


@pytest.mark.parametrize(
    ("quantity", "reference", "read", "ok"),
    [
        ("pH", 7.0, 7.1, True),
        ("pH", 7.0, 7.11, False),
        ("conductivity", 1413, 1413 * 1.10, True),
        ("conductivity", 1413, 1413 * 1.11, False),
        ("temperature", 20.0, 19.5, True),
        ("turbidity", 40, 35, False),
    ],
)
def test_the_acceptance_itself_is_met(quantity, reference, read, ok):
    """At the limit a meter holds, beyond it not; the words name the source of the limit."""
    judged = judge(quantity, [Point(reference, read)])
    assert judged.ok is ok
    assert ok is (ACCEPTANCES[quantity].source in judged.words[0])


def test_buffers_must_bracket_and_the_slope_must_hold():
    """Two buffers at least 3 pH apart; a slope of 92 to 102 % (from memory)."""
    near = [Point(6.86, 6.86), Point(7.0, 7.0)]
    wide = [Point(4.01, 4.0), Point(7.00, 7.0)]
    assert not judge("pH", near, calibration=True).ok
    assert judge("pH", near).ok and judge("pH", wide, 98.6, calibration=True).ok
    assert "slope" in judge("pH", wide, 90.0, calibration=True).words[0]


@pytest.mark.parametrize(
    ("quantity", "points"), [("oxygen", [Point(1, 1)]), ("pH", []), ("turbidity", [Point(0, 1)])]
)
def test_what_cannot_be_judged_is_refused(quantity, points):
    """An unknown quantity, no reference, a percentage of nothing."""
    with pytest.raises(InputError):
        judge(quantity, points)


def test_doubt_reaches_back_to_the_last_good_check():
    """Good at 7, failed at 15: the readings in between, not those before."""
    readings = [at(h) for h in (6, 8, 14, 16)]
    assert in_doubt([(at(15), False), (at(7), True)], readings) == (at(8), at(14))
    assert in_doubt([(at(15), False)], readings) == (at(6), at(8), at(14))
    assert in_doubt([(at(7), True), (at(15), True)], readings) == ()


@given(st.lists(st.tuples(st.integers(0, 50), st.booleans()), max_size=8), st.integers(0, 50))
def test_a_reading_is_in_doubt_exactly_when_the_next_check_that_tells_fails(checks, hour):
    """The first check at or after a reading decides; none decides nothing."""
    unique = list({h: ok for h, ok in checks}.items())
    following = sorted(h for h, _ in unique if h >= hour)
    decided = dict(unique)[following[0]] if following else True
    found = in_doubt([(at(h), ok) for h, ok in unique], [at(hour)])
    assert found == (() if decided else (at(hour),))
