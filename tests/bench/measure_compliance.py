"""Standing of a thousand points over ten years of monthly results, beside plain pandas.

The pandas side works out
the same counts (daily and monthly, exceeding and technical, forty quarterly
windows) on floating point, one group at a time, as a spreadsheet person would
write it; it has no bounds, no exact edges and no deadlines. The counts of both
are compared before any time is told; pandas is timed on a tenth of the points.
"""

from __future__ import annotations

import gc
import random
import time
from collections.abc import Callable, Iterator
from datetime import UTC, date, datetime
from zoneinfo import ZoneInfo

import pandas as pd

from app.compliance.days import Measured
from app.compliance.deadlines import quarter_ends, window_start
from app.compliance.judging import Policy
from app.compliance.limits import Limit
from app.compliance.standing import PointHistory
from tests.bench.measure import Measure

POINTS, PANDAS_POINTS, YEARS = 1000, 100, range(2021, 2031)
ZONE = ZoneInfo("America/Chicago")
DAILY, MONTHLY, FACTOR = 1500.0, 1000.0, 1.2
LIMITS = [
    Limit("daily_maximum", DAILY, date(2020, 1, 1), "permit"),
    Limit("monthly_average", MONTHLY, date(2020, 1, 1), "permit"),
]
ENDS = [end for year in YEARS for end in quarter_ends(year)]
Counts = list[tuple[int, int, int, int, int, int]]
Timed = tuple[float, list[Counts]]


def histories() -> list[list[Measured]]:
    """Return invented monthly results, the same on every run."""
    rng = random.Random(8)
    return [
        [
            Measured(
                datetime(year, month, rng.randint(1, 28), 15, tzinfo=UTC),
                round(rng.lognormvariate(6.8, 0.3), 1),
            )
            for year in YEARS
            for month in range(1, 13)
        ]
        for _ in range(POINTS)
    ]


def ours(points: list[list[Measured]]) -> list[Counts]:
    """Judge every point and count every window."""
    policy, found = Policy(ZONE, FACTOR), []
    for results in points:
        history = PointHistory(results, LIMITS, policy)
        windows = [history.standing(end) for end in ENDS]
        found.append(
            [
                (
                    s.daily.n,
                    s.daily.exceeding,
                    s.daily.technical,
                    s.monthly.n,
                    s.monthly.exceeding,
                    s.monthly.technical,
                )
                for s in windows
                if s.daily and s.monthly
            ]
        )
    return found


def plain_pandas(points: list[list[Measured]]) -> list[Counts]:
    """Count the same with pandas."""
    found = []
    for results in points:
        taken = pd.to_datetime([r.taken for r in results]).tz_convert("America/Chicago")
        frame = pd.DataFrame({"day": taken.date, "cod": [r.cod for r in results]})
        days = frame.groupby("day")["cod"].mean()
        days.index = pd.to_datetime(days.index)
        months = days.groupby(days.index.to_period("M")).mean()
        counts = []
        for end in ENDS:
            start = window_start(end)
            d = days[pd.Timestamp(start) : pd.Timestamp(end)]
            m = months[pd.Period(start, "M") : pd.Period(end, "M")]
            counts.append(
                (
                    len(d),
                    int((d > DAILY).sum()),
                    int((d >= DAILY * FACTOR).sum()),
                    len(m),
                    int((m > MONTHLY).sum()),
                    int((m >= MONTHLY * FACTOR).sum()),
                )
            )
        found.append(counts)
    return found


def timed(work: Callable[[list[list[Measured]]], list[Counts]], points: list[list[Measured]]) -> Timed:
    """Return seconds of wall clock and the counts."""
    gc.collect()
    start = time.perf_counter()
    counts = work(points)
    return time.perf_counter() - start, counts


def measures() -> Iterator[Measure]:
    """Take the time of both on the same points, after comparing their counts."""
    points = histories()
    seconds, counts = timed(ours, points)
    pandas_seconds, pandas_counts = timed(plain_pandas, points[:PANDAS_POINTS])
    if counts[:PANDAS_POINTS] != pandas_counts:
        raise AssertionError("standing and plain pandas count differently: nothing is worth timing")
    yield Measure("standing of 1000 points, ten years of months", seconds, 2.0, "s", more_is_better=False)
    times = pandas_seconds * POINTS / PANDAS_POINTS / seconds
    yield Measure("the same beside plain pandas, times as fast", times, 1.0, "times")
    start = time.perf_counter()
    PointHistory(points[0], LIMITS, Policy(ZONE, FACTOR)).standing(ENDS[-1])
    page = 1000 * (time.perf_counter() - start)
    yield Measure("standing of one point, cold", page, 100.0, "ms", more_is_better=False)
