"""Significant noncompliance against the text of 40 CFR 403.8(f)(2)(viii), on its edges.

The rule's numbers (66 %, 33 %, 1.2 for COD, "exceed", "equal or exceed") are
the regulation's; the values are chosen to sit on its edges and the expected
answers were worked out by hand. Factor 1.2 for COD: the text's "all other
pollutants except pH"; a city code spells COD out.
"""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta
from zoneinfo import ZoneInfo

import pytest

from app.compliance.days import Measured
from app.compliance.deadlines import notice, quarter_ends, report_late_from, results_by, window_start
from app.compliance.judging import Policy
from app.compliance.limits import Limit
from app.compliance.standing import PointHistory, Standing, standing

pytestmark = pytest.mark.published

CHICAGO = ZoneInfo("America/Chicago")
NEW_YORK = ZoneInfo("America/New_York")
START = datetime(2031, 1, 2, 15, tzinfo=UTC)


def daily(limit: float) -> Limit:
    """Return a daily maximum in force for ever."""
    return Limit("daily_maximum", limit, date(2000, 1, 1), "permit")


def stand(values: list[float], *, limit: float = 1000, factor: float = 1.2) -> Standing:
    """Judge values of successive days of one half-year."""
    results = [Measured(START + timedelta(days=i), v) for i, v in enumerate(values)]
    return standing(results, [daily(limit)], Policy(CHICAGO, factor), date(2031, 6, 30))


@pytest.mark.parametrize(
    ("values", "n", "exceeding", "technical", "chronic", "review"),
    [
        ([1001, 1050, 900], 3, 2, 0, True, False),
        ([1000, 1000, 1000], 3, 0, 0, False, False),
        ([1001] * 33 + [900] * 17, 50, 33, 0, True, False),
        ([1001] * 32 + [900] * 18, 50, 32, 0, False, False),
        ([1001] * 19 + [900] * 10, 29, 19, 0, False, False),
        ([1200, 900, 900], 3, 1, 1, False, True),
        ([1199.9, 900, 900], 3, 1, 0, False, False),
        ([1200] * 33 + [900] * 67, 100, 33, 33, False, True),
        ([1200] * 14 + [900] * 29, 43, 14, 14, False, False),
        ([1001], 1, 1, 0, True, False),
        ([1250, 1300, 900, 800, 700, 950], 6, 2, 2, False, True),
    ],
)
def test_the_two_tests_on_their_edges(values, n, exceeding, technical, chronic, review) -> None:
    """40 CFR 403.8(f)(2)(viii)(A) and (B): 66 % exceed; 33 % equal or exceed 1.2 times the limit."""
    found = stand(values)
    assert (found.daily.n, found.daily.exceeding, found.daily.technical) == (n, exceeding, technical)
    assert (found.chronic, found.technical_review) == (chronic, review)
    assert found.significant_noncompliance == (chronic or review)


@pytest.mark.parametrize(
    ("values", "technical"), [([1200, 900, 900], 0), ([1250, 1300, 900, 800, 700, 950], 0)]
)
def test_with_the_factor_of_oxygen_demand_and_solids_the_same_values_pass(values, technical) -> None:
    """Factor 1.4 belongs to BOD, TSS, fats, oil and grease, not to COD; it changes the verdict."""
    found = stand(values, factor=1.4)
    assert (found.daily.technical, found.technical_review) == (technical, False)


def test_nothing_measured_cannot_be_judged() -> None:
    """No measurement: neither test can be evaluated."""
    found = stand([])
    assert (found.chronic, found.technical_review, found.significant_noncompliance) == (None, None, None)
    assert found.daily.exceeding_fraction is None
    assert found.word == "cannot be judged"


def test_a_value_below_its_bound_is_a_measurement_and_a_bound_over_the_limit_decides_nothing() -> None:
    """<30 and 1100: one of two. <1500 and 900: hold and analyse again."""
    policy = Policy(CHICAGO, non_detect="half")

    def judged(bound: float, other: float) -> Standing:
        results = [Measured(START, bound, below=True), Measured(START + timedelta(days=1), other)]
        return standing(results, [daily(1000)], policy, date(2031, 6, 30))

    low, high = judged(30, 1100), judged(1500, 900)
    assert (low.daily.n, low.daily.exceeding, low.significant_noncompliance) == (2, 1, False)
    assert (high.daily.n, high.undecided) == (1, (date(2031, 1, 2),))
    assert high.word == "undecided: analyse again"


def quarters() -> PointHistory:
    """Return five quarters of three results around a limit of 1000."""
    table = {
        (2023, 10): [1250, 1300, 1010],
        (2024, 1): [1005, 1400, 800],
        (2024, 4): [900, 700, 950],
        (2024, 7): [990, 1000, 1200],
        (2024, 10): [1199, 600, 500],
    }
    results = [
        Measured(datetime(year, month + i, 15, 12, tzinfo=UTC), value)
        for (year, month), values in table.items()
        for i, value in enumerate(values)
    ]
    return PointHistory(results, [daily(1000)], Policy(CHICAGO))


def test_rolling_six_months_at_the_end_of_each_quarter() -> None:
    """Six months looked back at from each quarter's end; calendar halves would find nothing in 2024."""
    found = [quarters().standing(end) for end in quarter_ends(2024)]
    assert [(s.daily.n, s.daily.exceeding, s.daily.technical) for s in found] == [
        (6, 5, 3),
        (6, 2, 1),
        (6, 1, 1),
        (6, 2, 1),
    ]
    assert [s.significant_noncompliance for s in found] == [True, False, False, False]
    loose = PointHistory(
        [r for d in quarters().days for r in d.results], [daily(1000)], Policy(CHICAGO, 1.4)
    ).standing(date(2024, 3, 31))
    assert (loose.daily.technical, loose.technical_review) == (1, False)


def test_the_monthly_set_is_judged_apart_from_the_daily_one() -> None:
    """Five of six monthly averages over 600: chronic; pooled with the days it would be 5 of 20."""
    table = {
        1: [700, 650, 480],
        2: [620, 610],
        3: [590, 560, 700],
        4: [800, 500],
        5: [400, 550, 300],
        6: [900],
    }
    results = [
        Measured(datetime(2031, month, 5 + 7 * i, 12, tzinfo=UTC), value)
        for month, values in table.items()
        for i, value in enumerate(values)
    ]
    limits = [daily(1000), Limit("monthly_average", 600, date(2000, 1, 1), "permit")]
    found = standing(results, limits, Policy(CHICAGO), date(2031, 6, 30))
    assert (found.daily.n, found.daily.exceeding) == (14, 0)
    assert (found.monthly.n, found.monthly.exceeding, found.monthly.technical) == (6, 5, 1)
    assert (found.chronic, found.technical_review, found.significant_noncompliance) == (True, False, True)
    averages = [e.value for e in found.exceedances]
    assert averages == pytest.approx([610, 615, 616.667, 650, 900], abs=0.0005)


def test_a_months_average_is_the_mean_of_its_daily_values() -> None:
    """40 CFR 122.2: 900 and 1100 on one day, 500 on another: 750, not 833.3."""
    first = datetime(2031, 1, 2, 15, tzinfo=UTC)
    results = [
        Measured(first, 900),
        Measured(first + timedelta(hours=2), 1100),
        Measured(first + timedelta(days=1), 500),
    ]
    limit = Limit("monthly_average", 749, date(2000, 1, 1), "permit")
    found = standing(results, [limit], Policy(CHICAGO), date(2031, 6, 30))
    assert found.exceedances[0].value == 750


def test_windows_and_late_reports() -> None:
    """Six months to 31 March begin on 1 October; a report is 45 days late on the 46th (leap year)."""
    assert window_start(date(2024, 3, 31)) == date(2023, 10, 1)
    assert window_start(date(2024, 12, 31)) == date(2024, 7, 1)
    assert report_late_from(date(2024, 1, 31)) == date(2024, 3, 17)
    assert report_late_from(date(2024, 1, 31), 30) == date(2024, 3, 2)
    assert report_late_from(date(2025, 7, 31)) == date(2025, 9, 15)


def test_24_hours_are_elapsed_hours() -> None:
    """40 CFR 403.12(g)(2), over the changes of clocks in 2024 (IANA tz)."""
    spring = notice(datetime(2024, 3, 9, 14, 10, tzinfo=NEW_YORK), NEW_YORK)
    autumn = notice(datetime(2024, 11, 2, 14, 10, tzinfo=NEW_YORK), NEW_YORK)
    assert spring.due.isoformat() == "2024-03-10T15:10:00-04:00"
    assert spring.target.isoformat() == "2024-03-10T14:10:00-04:00"
    assert autumn.due == autumn.target
    assert autumn.due.isoformat() == "2024-11-03T13:10:00-05:00"


def test_results_of_the_repeat_are_due_in_30_days() -> None:
    """40 CFR 403.12(g)(2): aware on 9 March 2024, results in hand by 8 April."""
    assert results_by(datetime(2024, 3, 9, 14, 10, tzinfo=NEW_YORK), NEW_YORK) == date(2024, 4, 8)
