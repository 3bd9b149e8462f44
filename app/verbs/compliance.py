"""The verbs ``assess``, ``load``, ``bod-ratio`` and ``trend``."""

from __future__ import annotations

from dataclasses import asdict
from datetime import date
from typing import Any

from marshmallow import fields, validate

from app.compliance.days import LARGEST, Measured
from app.compliance.judging import Policy
from app.compliance.limits import Limit
from app.compliance.loads import load_of
from app.compliance.ratio import correlate
from app.compliance.standing import Counts, Exceedance, standing
from app.compliance.trend import mann_kendall
from app.verbs.fields import Count, Day, Flag, Moment, Number, Strict, Zone, load

STATED = "as given"


class LimitsSchema(Strict):
    """The limits of a point, the same on every day of the window."""

    daily_maximum = Number(load_default=None, allow_none=True, above=0)
    monthly_average = Number(load_default=None, allow_none=True, above=0)
    technical_review_factor = Number(load_default=1.2, least=1)


class ResultSchema(Strict):
    """One result."""

    taken = Moment(required=True)
    cod = Number(required=True, least=0, most=LARGEST)
    below = Flag(load_default=False)
    above = Flag(load_default=False)
    known = Moment(load_default=None, allow_none=True)


class AssessSchema(Strict):
    """What ``assess`` reads."""

    limits = fields.Nested(LimitsSchema, required=True)
    time_zone = Zone(required=True)
    results = fields.List(fields.Nested(ResultSchema), required=True)
    window_end = Day(required=True)
    non_detect = fields.String(load_default=None, validate=validate.OneOf(["zero", "half", "limit"]))


def _counts(counts: Counts | None) -> dict[str, Any] | None:
    if counts is None:
        return None
    return {
        "n": counts.n,
        "exceeding": counts.exceeding,
        "exceeding_fraction": counts.exceeding_fraction,
        "technical": counts.technical,
        "technical_fraction": counts.technical_fraction,
        "few": counts.few,
    }


def _exceedance(e: Exceedance) -> dict[str, Any]:
    return {
        "basis": e.basis,
        "day" if e.basis == "daily_maximum" else "month": e.when,
        "value": e.value,
        "limit": e.limit,
        "notify_by": e.notify_by and e.notify_by.isoformat(),
        "results_by": e.results_by and e.results_by.isoformat(),
    }


def assess(value: Any) -> dict[str, Any]:
    """Answer how a point stands over six months."""
    given = load(AssessSchema(), value)
    told = given["limits"]
    limits = [
        Limit(basis, told[basis], date.min, STATED)
        for basis in ("daily_maximum", "monthly_average")
        if told[basis] is not None
    ]
    policy = Policy(given["time_zone"], told["technical_review_factor"], given["non_detect"])
    found = standing([Measured(**r) for r in given["results"]], limits, policy, given["window_end"])
    return {
        "window": [found.start.isoformat(), found.end.isoformat()],
        "undecided": [day.isoformat() for day in found.undecided],
        "daily": _counts(found.daily),
        "monthly": _counts(found.monthly),
        "chronic": found.chronic,
        "technical_review": found.technical_review,
        "significant_noncompliance": found.significant_noncompliance,
        "word": found.word,
        "unjudged": list(found.unjudged),
        "exceedances": [_exceedance(e) for e in found.exceedances],
        "settings": {
            "technical_review_factor": policy.technical_review_factor,
            "non_detect": policy.non_detect,
            "time_zone": policy.zone.key,
            "source": policy.source,
        },
    }


class SampleSchema(Strict):
    """One sampled day."""

    day = Count(required=True, least=1)
    cod = Number(required=True, least=0, most=LARGEST)


class LoadSchema(Strict):
    """What ``load`` reads."""

    flow_m3 = fields.List(Number(least=0, most=LARGEST, allow_none=True), required=True)
    samples = fields.List(fields.Nested(SampleSchema), required=True)


def load_verb(value: Any) -> dict[str, Any]:
    """Answer the load of a period from its flows and some samples."""
    given = load(LoadSchema(), value)
    found = load_of(given["flow_m3"], [(s["day"], s["cod"]) for s in given["samples"]])
    return {
        "days": found.days,
        "sampled": found.sampled,
        "filled": found.filled,
        "flow_m3": found.flow_m3,
        "flow_weighted_mean": found.flow_weighted_mean,
        "ratio_kg": found.ratio_kg,
        "beale_kg": found.beale_kg,
        "relative_standard_error": found.relative_standard_error,
        "interval_kg": found.interval_kg,
        "weak": found.weak,
        "qualified": found.qualified,
    }


class PairSchema(Strict):
    """COD and BOD of one sample."""

    cod = Number(required=True, least=0, most=LARGEST)
    bod = Number(required=True, least=0, most=LARGEST)


class RatioSchema(Strict):
    """What ``bod-ratio`` reads."""

    pairs = fields.List(fields.Nested(PairSchema), required=True)
    estimate = fields.List(Number(least=0, most=LARGEST), load_default=list)


def bod_ratio(value: Any) -> dict[str, Any]:
    """Answer the line of BOD on COD and what it predicts."""
    given = load(RatioSchema(), value)
    line = correlate([(p["cod"], p["bod"]) for p in given["pairs"]])
    return {
        "n": line.n,
        "slope": line.slope,
        "intercept": line.intercept,
        "residual_sd": line.residual_sd,
        "r_squared": line.r_squared,
        "range": [line.cod_low, line.cod_high],
        "estimate": [asdict(line.at(cod)) for cod in given["estimate"]],
    }


class ValueSchema(Strict):
    """One value with its time."""

    at = Moment(required=True)
    value = Number(required=True, least=-LARGEST, most=LARGEST)


class TrendSchema(Strict):
    """What ``trend`` reads."""

    values = fields.List(fields.Nested(ValueSchema), required=True)


def trend(value: Any) -> dict[str, Any]:
    """Answer whether values rise or fall, and how fast."""
    values = load(TrendSchema(), value)["values"]
    return asdict(mann_kendall([v["at"] for v in values], [v["value"] for v in values]))


VERBS = {"assess": assess, "load": load_verb, "bod-ratio": bod_ratio, "trend": trend}
