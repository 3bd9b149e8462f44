"""Waste: totals add up whatever the order, clocks count calendar days, a full container stops."""

from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.errors import InputError
from app.safety.accumulation import FEDERAL, Generator, central_clock, month_total, satellite_clock
from app.safety.container import COD_DIGEST, Container, fill, label, room_for
from app.safety.waste import (
    PerTube,
    Totals,
    mercury_mg_per_kg,
    sum_totals,
    totals,
    waste_codes,
    whole_tubes_within,
)

TUBE = PerTube(33.776, 5.417, 24.507, 2.5, 1.5, 3.5)
MERCURY_FREE = PerTube(0.0, 5.417, 24.507, 2.5, 1.5, 3.5)


@given(st.lists(st.integers(0, 40), max_size=12))
def test_totals_of_runs_add_up_to_the_totals_of_all_tubes(runs):
    """Splitting tubes over runs loses and makes nothing."""
    whole, parts = totals(TUBE, sum(runs)), sum_totals(totals(TUBE, n) for n in runs)
    assert parts.tubes == whole.tubes
    assert parts.mercury_mg == pytest.approx(whole.mercury_mg)
    assert parts.volume_ml == pytest.approx(whole.volume_ml)
    assert parts.mass_g == pytest.approx(whole.mass_g)


def test_no_tubes_leave_nothing():
    """An empty run, and an empty sum."""
    assert totals(TUBE, 0) == Totals() == sum_totals([])


def test_a_mercury_free_recipe_keeps_the_other_codes():
    """40 CFR 261.22 and .24: still corrosive, chromium and silver."""
    assert [c.code for c in waste_codes(totals(MERCURY_FREE, 3))] == ["D002", "D007", "D011"]


def test_what_cannot_be_counted_is_refused_with_every_field():
    """Negative metal, no number, negative tubes."""
    with pytest.raises(InputError) as caught:
        totals(PerTube(-1, 5, float("nan"), 2.5, 1.5, 3.5), -1)
    assert set(caught.value.fields) == {"mercury_mg", "silver_mg", "tubes"}
    for empty in (waste_codes, mercury_mg_per_kg):
        with pytest.raises(InputError):
            empty(Totals())
    with pytest.raises(InputError):
        whole_tubes_within(TUBE)


def test_the_whole_site_counts_and_the_note_says_so():
    """A small COD laboratory in a large works is a large generator."""
    found = month_total({"COD digest": 0.27, "solvents": 1200})
    assert (found.category, found.days) == ("large", 90)
    assert "whole site" in found.note and "state and local rules decide" in found.note
    assert month_total({"COD digest": 0.27}).days is None
    assert (month_total({"a": 300}).days, month_total({"a": 300}, far=True).days) == (180, 270)


def test_a_programmes_own_thresholds_are_used():
    """Some states know no very small generator."""
    assert month_total({"COD digest": 0.27}, rules=Generator(small_above_kg=0.0)).category == "small"
    with pytest.raises(InputError):
        month_total({"COD digest": -1})


def test_central_clock_over_a_leap_day():
    """90 and 180 calendar days from the start of central accumulation; called to mind at 75 %."""
    clock = central_clock(date(2032, 1, 15), 90)
    assert (clock.due, clock.remind_on) == (date(2032, 4, 14), date(2032, 3, 23))
    assert central_clock(date(2031, 1, 15), 180).due == date(2031, 7, 14)


def test_three_days_are_calendar_days():
    """40 CFR 262.15(a)(6): three consecutive calendar days; passed on a Friday, due on the Monday."""
    assert satellite_clock(date(2031, 5, 16)).due == date(2031, 5, 19)
    assert FEDERAL.satellite_l == pytest.approx(208.198, abs=5e-4)


@pytest.mark.parametrize(
    ("container", "volume", "contents", "blocked"),
    [
        (Container("12", 2000, 1000), 187.5, COD_DIGEST, False),
        (Container("12", 2000, 1612.5), 187.5, COD_DIGEST, False),
        (Container("12", 2000, 1613), 187.5, COD_DIGEST, True),
        (Container("12", 2000, 0, state="closed"), 10, COD_DIGEST, True),
        (Container("12", 2000, 0, state="picked up"), 10, COD_DIGEST, True),
        (Container("12", 2000, 0, contents="alkaline waste"), 10, COD_DIGEST, True),
        (Container("12", 2000, 0), 10, "solvents", True),
    ],
)
def test_a_container_stops_when_full_closed_or_of_another_content(container, volume, contents, blocked):
    """Each reason alone is enough."""
    found = room_for(container, volume, contents)
    assert found.blocked == blocked == bool(found.why)


def test_every_reason_is_named_and_80_percent_reminds():
    """Three things wrong, three sentences."""
    assert len(room_for(Container("12", 100, 99, "bleach", "closed"), 50).why) == 3
    assert room_for(Container("12", 100, 79), 0.5).reminders == ()
    assert room_for(Container("12", 100, 79), 2).reminders == ("container 12 will be 81 % full",)


@given(st.floats(1, 1e5), st.integers(0, 400))
def test_filling_until_it_stops_never_passes_the_limit(capacity, tubes):
    """Whatever is added run by run, an open container stays at or under its limit."""
    container, waste = Container("12", capacity), totals(TUBE, tubes)
    for _ in range(5):
        if room_for(container, waste.volume_ml).blocked:
            break
        container = fill(container, waste)
    assert container.share <= 0.9 + 1e-9


def test_a_label_says_what_the_rule_asks_for():
    """40 CFR 262.15(a)(5): the words, the contents, the hazards; the date only in central accumulation."""
    made = label(Container("12", 2000), waste_codes(totals(TUBE, 1)), "Marsh Lane Laboratory")
    assert made.title == "Hazardous Waste"
    assert "mercury" in made.contents and "corrosive" in made.hazards
    assert made.codes == ("D002", "D007", "D009", "D011")
    assert made.started is None


def test_containers_that_cannot_be():
    """No capacity, less than empty."""
    for capacity, filled in ((0, 0), (float("nan"), 0), (100, -1)):
        with pytest.raises(InputError):
            Container("12", capacity, filled)
