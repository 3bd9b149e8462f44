"""A result beside the limits that were in force on its day, as it is stored with the result."""

from __future__ import annotations

from dataclasses import asdict
from datetime import date

from app.compliance.decision import Outcome, decide_all, rule_named
from app.compliance.limits import Limit
from app.records.change import Body


def limits_of(limits: list[Body]) -> list[Limit]:
    """Return a point's limits as the compliance package takes them."""
    return [
        Limit(one["basis"], one["value"], date.fromisoformat(one["from"]), one["source"], one["unit"])
        for one in limits
    ]


def _outcome(result: Body) -> Outcome:
    status = result["status"]
    value = {"below": result["reporting_level"], "over": result["top"]}.get(status, result["cod"])
    if status == "ok" and result["reported"]:
        value = result["reported"]["cod"]
    if status == "disagree":
        return Outcome("disagree", None)
    if status != "ok":
        return Outcome(status, value)
    return Outcome("ok", value, u=result["u"], expanded_u=result["expanded_u"], dof=result["dof"])


def beside_limits(result: Body, limits: list[Body], day: date, rule: str) -> list[Body]:
    """Return the verdict of a result beside each limit in force on its day."""
    found = decide_all(_outcome(result), limits_of(limits), day, rule_named(rule))
    told = []
    for verdict in found:
        body = asdict(verdict)
        if verdict.effective_from is not None:
            body["effective_from"] = verdict.effective_from.isoformat()
        told.append(body)
    return told
