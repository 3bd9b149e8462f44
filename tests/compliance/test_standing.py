"""Standing: exact on the edges, the order of results never matters, and nothing open looks clean."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, date, datetime, timedelta
from fractions import Fraction
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.days import Measured, day_values
from app.compliance.deadlines import notice, quarter_ends, window_start
from app.compliance.exact import exact, plain
from app.compliance.judging import Policy
from app.compliance.limits import Limit
from app.compliance.standing import PointHistory, is_chronic, standing
from app.errors import InputError

CHICAGO = ZoneInfo("America/Chicago")
END = date(2031, 6, 30)
NOON = datetime(2031, 1, 2, 18, tzinfo=UTC)
DAILY = Limit("daily_maximum", 1000, date(2000, 1, 1), "permit")
MONTHLY = Limit("monthly_average", 700, date(2000, 1, 1), "permit")
POLICY = Policy(CHICAGO, non_detect="half")


def on(day: int, cod: float, **more: object) -> Measured:
    """Return a result taken some days into the half-year."""
    return Measured(NOON + timedelta(days=day), cod, **more)


MEASURED = st.builds(
    on,
    day=st.integers(-30, 210),
    cod=st.one_of(st.integers(0, 3000), st.floats(0, 3000).map(lambda x: round(x, 1))),
    below=st.booleans(),
)


@given(st.lists(MEASURED, max_size=40), st.randoms())
def test_the_order_of_results_never_matters(results, random):
    """Tablets deliver in any order."""
    shuffled = list(results)
    random.shuffle(shuffled)
    first = standing(results, [DAILY, MONTHLY], POLICY, END)
    second = standing(shuffled, [DAILY, MONTHLY], POLICY, END)
    assert (first.daily, first.monthly, first.undecided) == (second.daily, second.monthly, second.undecided)


@given(st.lists(MEASURED, max_size=60))
def test_counts_are_those_of_plain_fractions(results):
    """The quick comparison gives what slow, exact arithmetic gives."""
    found = standing(results, [DAILY, MONTHLY], POLICY, END)
    days: dict[date, list[Measured]] = {}
    for r in results:
        days.setdefault(r.taken.astimezone(CHICAGO).date(), []).append(r)

    def value(group: list[Measured]) -> Fraction:
        numbers = [exact(r.cod) / 2 if r.below else exact(r.cod) for r in group]
        return sum(numbers, Fraction(0)) / len(numbers)

    def decided(limit: float) -> dict[date, Fraction]:
        return {
            day: value(group)
            for day, group in days.items()
            if date(2031, 1, 1) <= day <= END and not any(r.below and r.cod > limit for r in group)
        }

    daily = decided(1000).values()
    assert found.daily.n == len(daily)
    assert found.daily.exceeding == sum(v > 1000 for v in daily)
    assert found.daily.technical == sum(v >= 1200 for v in daily)
    months: dict[int, list[Fraction]] = {}
    for day, v in decided(700).items():
        months.setdefault(day.month, []).append(v)
    averages = [sum(m, Fraction(0)) / len(m) for m in months.values()]
    assert found.monthly.n == len(averages)
    assert found.monthly.exceeding == sum(a > 700 for a in averages)
    assert found.monthly.technical == sum(a >= 840 for a in averages)


@given(st.lists(MEASURED, min_size=1, max_size=40), st.integers(0, 39), st.integers(1, 500))
def test_a_worse_result_never_helps(results, which, more):
    """Raising one measured value never lowers a count."""
    which %= len(results)
    results = [replace(r, below=False) for r in results]
    worse = list(results)
    worse[which] = replace(worse[which], cod=worse[which].cod + more)
    before, after = (standing(r, [DAILY, MONTHLY], POLICY, END) for r in (results, worse))
    assert after.daily.exceeding >= before.daily.exceeding
    assert after.monthly.technical >= before.monthly.technical
    assert bool(after.significant_noncompliance) >= bool(before.significant_noncompliance)


@given(st.lists(MEASURED, max_size=60))
def test_a_history_cut_into_windows_equals_each_window_by_itself(results):
    """Judging once and counting often changes nothing; also for windows that end inside a month."""
    history = PointHistory(results, [DAILY, MONTHLY], POLICY)
    for end in (*quarter_ends(2031), date(2031, 5, 17), date(2031, 2, 28)):
        start = window_start(end)
        inside = [r for r in results if start <= r.taken.astimezone(CHICAGO).date() <= end]
        alone, cut = standing(inside, [DAILY, MONTHLY], POLICY, end), history.standing(end)
        assert alone == cut


@pytest.mark.parametrize("limit", [10.3, 18.1, 20.6, 1000, 333.3])
def test_equal_to_limit_times_factor_is_technical(limit):
    """10.3 x 1.2 is 12.36; in binary floating point it is more, and 12.36 would slip through."""
    edge = float(exact(limit) * exact(1.2))
    held = Limit("daily_maximum", limit, date(2000, 1, 1), "permit")
    assert standing([on(1, edge)], [held], POLICY, END).daily.technical == 1
    assert standing([on(1, edge - 0.001)], [held], POLICY, END).daily.technical == 0


def test_a_mean_equal_to_the_limit_complies():
    """The mean of 1000.1 and 999.9 is 1000; of 0.1, 0.2 and 0.3 it is 0.2, whatever binary adds up to."""
    two = [on(1, 1000.1), replace(on(1, 999.9), taken=NOON + timedelta(days=1, hours=1))]
    assert standing(two, [DAILY], POLICY, END).daily.exceeding == 0
    three = [
        replace(on(1, v), taken=NOON + timedelta(days=1, hours=h)) for h, v in enumerate((0.1, 0.2, 0.3))
    ]
    low = Limit("daily_maximum", 0.2, date(2000, 1, 1), "permit")
    assert standing(three, [low], POLICY, END).daily.exceeding == 0


@given(st.integers(1, 400), st.data())
def test_shares_are_compared_in_whole_numbers(n, data):
    """66 % of 50 is 33; two thirds or a rounded percentage would judge otherwise."""
    k = data.draw(st.integers(0, n))
    assert is_chronic(k, n) == (Fraction(k, n) >= Fraction(66, 100))
    assert is_chronic(k, n, 33) == (Fraction(k, n) >= Fraction(33, 100))


@pytest.mark.parametrize(
    ("result", "daily_n", "undecided"),
    [
        (on(3, 1000, below=True), 1, 0),
        (on(3, 1000.1, below=True), 0, 1),
        (on(3, 1000, above=True), 0, 1),
        (on(3, 1000.1, above=True), 1, 0),
    ],
)
def test_which_bounds_decide(result, daily_n, undecided):
    """Below a bound at the limit decides; above a bound at the limit does not."""
    found = standing([result], [DAILY], POLICY, END)
    assert (found.daily.n, len(found.undecided)) == (daily_n, undecided)


def test_one_undecided_sample_takes_its_whole_day_out():
    """The day's mean is not known; it must be analysed again."""
    pair = [on(3, 900), replace(on(3, 1500, below=True), taken=NOON + timedelta(days=3, hours=1))]
    found = standing(pair, [DAILY], POLICY, END)
    assert (found.daily.n, found.undecided) == (0, (date(2031, 1, 5),))
    assert found.significant_noncompliance is None


def test_a_bound_may_decide_one_basis_and_not_the_other():
    """Below 900 decides 1000 and not 700: in the daily set, out of the monthly one, and listed."""
    found = standing([on(3, 900, below=True)], [DAILY, MONTHLY], POLICY, END)
    assert (found.daily.n, found.monthly.n) == (1, 0)
    assert found.undecided == (date(2031, 1, 5),)
    assert found.unjudged == ("monthly_average",)
    assert found.word == "undecided: analyse again"


def test_the_day_is_the_programmes_and_not_utc():
    """23:30 on 30 June in Chicago is 1 July in UTC, and still inside the window."""
    late = Measured(datetime(2031, 7, 1, 4, 30, tzinfo=UTC), 1300)
    assert standing([late], [DAILY], POLICY, END).daily.n == 1
    later = Measured(datetime(2031, 7, 1, 5, 30, tzinfo=UTC), 1300)
    assert standing([later], [DAILY], POLICY, END).daily.n == 0


def test_a_renewal_does_not_judge_the_past_again():
    """The same 900 exceeds only from the day the lower limit came into force."""
    lower = Limit("daily_maximum", 800, date(2031, 3, 1), "renewal")
    found = standing([on(10, 900), on(100, 900)], [DAILY, lower], POLICY, END)
    assert [(e.when, e.limit, e.source) for e in found.exceedances] == [("2031-04-12", 800, "renewal")]


def test_a_limit_not_in_force_in_the_window_is_no_basis():
    """Neither clean nor failing: there is nothing to hold against."""
    ended = replace(DAILY, effective_until=date(2030, 12, 31))
    found = standing([on(10, 5000)], [ended], POLICY, END)
    assert (found.daily, found.monthly, found.significant_noncompliance) == (None, None, None)
    assert found.word == "cannot be judged"


def test_an_exclusion_needs_a_reason_and_a_name_and_is_listed():
    """Nothing leaves the counts in silence."""
    out = on(5, 5000, excluded_reason="bottle of another point", excluded_by="R. Vale")
    found = standing([on(4, 900), out], [DAILY], POLICY, END)
    assert (found.daily.n, found.excluded) == (1, (out,))
    with pytest.raises(InputError) as caught:
        standing([on(5, 5000, excluded_reason="because")], [DAILY], POLICY, END)
    assert "results.0.excluded_reason" in caught.value.fields


def test_deadlines_follow_the_last_result_that_made_the_value():
    """A mean is not known before its last part; without a time there is no deadline."""
    first, last = datetime(2031, 1, 7, 15, tzinfo=UTC), datetime(2031, 1, 9, 15, tzinfo=UTC)
    pair = [
        on(3, 1300, known=last),
        replace(on(3, 1300, known=first), taken=NOON + timedelta(days=3, hours=1)),
        on(6, 1300),
    ]
    found = standing(pair, [DAILY], POLICY, END).exceedances
    assert found[0].notify_by == last + timedelta(hours=24)
    assert found[0].results_by == date(2031, 2, 8)
    assert (found[1].notify_by, found[1].results_by) == (None, None)


def test_settings_of_the_day():
    """Highest and flow-weighted instead of the mean."""
    pair = [on(3, 1200, flow=1), replace(on(3, 600, flow=3), taken=NOON + timedelta(days=3, hours=1))]
    values = {
        rule: day_values(pair, CHICAGO, None, rule)[0].value for rule in ("mean", "highest", "flow_weighted")
    }
    assert values == {"mean": 900, "highest": 1200, "flow_weighted": 750}
    with pytest.raises(InputError) as caught:
        day_values([on(3, 5)], CHICAGO, None, "flow_weighted")
    assert "results.0.flow" in caught.value.fields


@pytest.mark.parametrize(("rule", "counted"), [("zero", 0), ("half", 15), ("limit", 30)])
def test_how_a_value_below_its_bound_counts(rule, counted):
    """Nothing, half or all of the bound: the permit's rule, which has no default."""
    assert day_values([on(3, 30, below=True)], CHICAGO, rule)[0].value == counted
    with pytest.raises(InputError) as caught:
        standing([on(3, 30, below=True)], [DAILY], Policy(CHICAGO), END)
    assert "non_detect" in caught.value.fields


def test_everything_wrong_is_named_at_once():
    """A naive time, a negative value, two bounds at once, known before taken."""
    bad = [
        Measured(datetime(2031, 1, 5), 5),
        on(1, -5),
        on(2, 5, below=True, above=True),
        on(3, 5, known=NOON),
        on(4, float("nan")),
    ]
    with pytest.raises(InputError) as caught:
        standing(bad, [DAILY], POLICY, END)
    assert set(caught.value.fields) == {
        "results.0.taken",
        "results.1.cod",
        "results.2.above",
        "results.3.known",
        "results.4.cod",
    }


def test_a_factor_under_one_would_soften_nothing_but_sense():
    """Limit times factor is never under the limit."""
    with pytest.raises(InputError):
        Policy(CHICAGO, 0.9)


def test_the_words_in_their_order():
    """Worst first, and "within limits" only when all is closed."""
    assert standing([on(3, 1300)], [DAILY], POLICY, END).word == "significant noncompliance"
    few = [on(i, 500) for i in range(9)]
    assert standing([*few, on(20, 1001)], [DAILY], POLICY, END).word == "above a limit"
    assert standing(few, [DAILY], POLICY, END).word == "within limits"
    assert standing(few, [DAILY], POLICY, END).daily.few is False
    assert standing(few[:3], [DAILY], POLICY, END).daily.few is True


@given(st.floats(0, 1e9, allow_subnormal=False))
def test_numbers_keep_the_text_that_was_typed(value):
    """exact() stands for the shortest text, and plain() writes it without an exponent."""
    assert exact(value) == Fraction(repr(value))
    assert float(plain(value)) == value
    assert "e" not in plain(value)


def test_what_has_no_value_has_no_exact_value():
    """Infinities and no numbers are refused."""
    for bad in (float("inf"), float("nan")):
        with pytest.raises(InputError):
            exact(bad)
    with pytest.raises(InputError):
        notice(datetime(2031, 1, 5), CHICAGO)
