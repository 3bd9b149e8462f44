"""Whether to trust the plan: the programme's own results, each forecast from what came before.

The points start from the built-in values and not from what the programme has
learnt, so that no later result helps an earlier forecast. It takes seconds for
a large programme, so it is made again only when a good part of the results is
new, or when a recipe or the allowed dilutions changed.
"""

from __future__ import annotations

from dataclasses import asdict

from app.forecast import Programme, Range
from app.forecast.judgement import judge
from app.forecast.learning import Point
from app.forecast.trust import MEDIAN_OF, backtest_each
from app.records.change import Stating
from app.records.outlooks import FEW, GROWTH, SOFTWARE, history_of

#: Results of a point that are looked at, the latest ones.
LATEST = 60


def judge_again(writing: Stating, about: str) -> None:
    """State the back-test once enough results are new, or recipes or dilutions are others."""
    known = writing.get("trust", about) or {"results": 0, "ladder": None}
    results = writing.count("result")
    ranges = {id_: [body["working_low"], body["working_high"]] for id_, body in writing.find("recipe")}
    dilutions = writing.find("programme")[0][1]["settings"]["dilutions"]
    ladder = {"ranges": ranges, "dilutions": dilutions}
    grown = results >= GROWTH * known["results"] + FEW
    if not ranges or results < FEW or not (grown or known["ladder"] not in (None, ladder)):
        return
    told = [(id_, body["sector"], history_of(writing, id_)[-LATEST:]) for id_, body in writing.find("point")]
    told = [one for one in told if len(one[2]) > MEDIAN_OF]
    if not told:
        return
    points = [Point(sector, history) for _, sector, history in told]
    windows = [Range(id_, *ends) for id_, ends in ranges.items()]
    together, each = backtest_each(Programme.default(), points, windows, dilutions)
    body = {
        "software": SOFTWARE,
        "results": results,
        "ladder": ladder,
        "latest": LATEST,
        "first": MEDIAN_OF,
        "programme": asdict(judge(together)),
        "points": {id_: asdict(judge(one)) for (id_, _, _), one in zip(told, each, strict=True)},
    }
    writing.state("trust.judged", about, body)
