"""The long table of the forecast on open series: ``python -m tests.bench forecast FOLDER``.

One line a series and way of taking it: how often the forecast, the rules of
thumb and the oracle were right at the first digestion, over and below, how much
the 50 % and 90 % ranges held, the mean log density of ln COD and how far the
integral transform is from an even one. Then what learning adds, each station
forecast from a programme that the others taught, and time split: the programme
learnt from each station's first half, judged on the second.
"""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

from app.forecast import Programme
from app.forecast.learning import Point, learn
from app.forecast.trust import Shares, Trust
from tests.forecast.open_series import (
    RIVERS,
    STORMS,
    WORKS,
    Series,
    first_five,
    integral_transform,
    judged,
    off_uniform,
    points_of,
    works_of,
)

HEAD = (
    f"{'series':44}{'n':>6}{'right':>7}{'over':>7}{'below':>7}{'last':>7}{'median':>7}{'same':>7}{'oracle':>7}"
    f"{'in 50':>7}{'in 90':>7}{'ln dens':>9}{'uneven':>8}"
)


def _share(value: float | None) -> str:
    return f"{'-':>7}" if value is None else f"{100 * value:7.2f}"


def line(name: str, found: Trust, uneven: float | None = None) -> str:
    """Return one line of the table, shares in percent."""
    own: Shares = found.forecast
    rules = (found.last_value, found.median_of_five, found.same_dilution, found.oracle)
    shares = (own.right, own.over, own.below, *(one.right for one in rules), found.inside_50, found.inside_90)
    dense = "-" if found.log_density is None else f"{found.log_density:.3f}"
    odd = "" if uneven is None else f"{uneven:.3f}"
    return f"{name:44}{own.n:6d}{''.join(map(_share, shares))}{dense:>9}{odd:>8}"


def series(data: Path) -> Iterator[tuple[str, Series]]:
    """Yield each series and way of taking it."""
    for label, name in (("rivers", RIVERS), ("storm water", STORMS)):
        yield f"{label} x20", points_of(data / name)
        yield f"{label} x20, without readings", points_of(data / name, readings=False)
        yield f"{label} x20, bounds as bounds", points_of(data / name, bounds=True)
    yield "works x20, inlet", works_of(data / WORKS)
    yield "works x20, to the second stage", works_of(data / WORKS, "secondary_in", "secondary_in")
    yield "works x20, effluent", works_of(data / WORKS, "effluent", "secondary_in")


def learnt(data: Path) -> Iterator[str]:
    """Yield what a programme learnt elsewhere, or before, does for the rivers and the storm water."""
    for label, name in (("rivers", RIVERS), ("storm water", STORMS)):
        points = points_of(data / name)
        for own, others in ((points[::2], points[1::2]), (points[1::2], points[::2])):
            told = learn([Point(None, one) for one in others])
            yield line(f"{label}, one half of the stations", judged(own))
            yield line("  ... learnt from the other half", judged(own, told))
        told = learn([Point(None, one[: len(one) // 2]) for one in points])
        late = tuple(one[len(one) // 2 :] for one in points)
        yield line(f"{label}, each station's later half", judged(late))
        yield line("  ... learnt from the earlier half", judged(late, told))


def table(data: Path) -> Iterator[str]:
    """Yield the lines of the table."""
    yield HEAD
    for name, points in series(data):
        yield line(name, judged(points, Programme.default()), off_uniform(integral_transform(points)))
    yield from learnt(data)
    points = points_of(data / RIVERS)
    right = first_five(points)
    share = 100 * sum(right) / (5 * len(points))
    yield f"a new river's first five samples, learnt from the others: {share:.1f} % right; by sample {right}"


def main(folder: str) -> int:
    """Print the table; 1 where the folder does not hold the series."""
    data = Path(folder)
    absent = [name for name in (RIVERS, STORMS, WORKS) if not (data / name).is_file()]
    if absent:
        print(f"Not measured: {folder} does not hold {', '.join(absent)}")
        return 1
    for text in table(data):
        print(text, flush=True)
    return 0
