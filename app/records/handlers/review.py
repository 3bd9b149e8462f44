"""Results brought from before, reviews, certificates, expectations, settled entries."""

from __future__ import annotations

from app.journal import measured
from app.records.change import Body, Change, Refused
from app.records.handlers import handles
from app.records.handlers.field import bottle, put_bottle

_STATUS = {"=": "ok", "<": "below", ">": "over"}
_BLANK = (
    "sample",
    "run",
    "bottle",
    "u",
    "dof",
    "reported",
    "dilution_factor",
    "reporting_level",
    "components",
    "checks_ok",
    "review",
    "certificate",
)


@handles("result.recorded")
def result_recorded(change: Change) -> None:
    """A result of earlier records: its number as it stood there, its source beside it."""
    change.need("point", change.body["point"])
    reading = measured.read(change.body["cod"]["text"])
    body: Body = dict.fromkeys(_BLANK) | {
        "point": change.body["point"],
        "collected_at": change.body["collected_at"],
        "cod": measured.value(change.body["cod"], "mg/L"),
        "expanded_u": measured.value(change.body["expanded_u"], "mg/L"),
        "status": _STATUS[reading.sign],
        "shown": change.body["cod"]["text"],
        "field": change.body["field"],
        "activity": change.body["activity"],
        "verdicts": [],
        "source": change.body["source"],
    }
    change.put("result", change.entry.about, body, parent=body["point"], at=body["collected_at"])


@handles("result.reviewed")
def result_reviewed(change: Change) -> None:
    """A coordinator's decision; the number stays in the file whatever it is."""
    result = change.need("result", change.entry.about)
    if change.body["decision"] == "rejected" and not change.body["reason"].strip():
        raise Refused("reason_needed", "A rejection needs its reason.", {"reason": ["Missing."]})
    result["review"] = change.body | {"by": change.name_of(change.entry.by), "at": change.entry.at}
    change.update("result", change.entry.about, result)


@handles("certificate.issued")
def certificate_issued(change: Change) -> None:
    """A certificate; its result and bottle name it from now on."""
    body = change.body | {
        "state": "valid",
        "by": change.entry.by,
        "by_name": change.name_of(change.entry.by),
    }
    result = change.need("result", change.body["result"])
    body |= {"point": result["point"]}
    change.put("certificate", change.entry.about, body, parent=result["point"], at=change.body["issued_at"])
    change.update("result", change.body["result"], result | {"certificate": change.body["number"]})
    known = bottle(change, result["bottle"])
    put_bottle(change, known | {"certificate": change.body["number"]})


@handles("sum.failed")
def sum_failed(change: Change) -> None:
    """A sum that could not be done, shown beside its subject until it can."""
    problem = change.body | {"at": change.entry.at}
    run = change.get("run", change.entry.about) if change.body["what"] == "calculate" else None
    if run is not None:
        change.update("run", change.entry.about, run | {"problem": problem})
    change.put("problem", f"{change.body['what']}:{change.entry.about}", problem, at=change.entry.at)


@handles("programme.learned")
def programme_learned(change: Change) -> None:
    """What the points have in common; expectations made from now on begin with it."""
    change.put("learned", change.entry.about, change.body)


@handles("outlook.computed")
def outlook_computed(change: Change) -> None:
    """What to expect at a point, and what it was made from."""
    recent = [
        {"at": one["collected_at"], "cod": one["cod"], "status": one["status"], "shown": one["shown"]}
        for _, one in change.find("result", change.entry.about)[-12:]
    ]
    body = change.body | {"computed_at": change.entry.at, "recent": recent}
    change.put("outlook", change.entry.about, body, parent=change.entry.about)


@handles("trust.judged")
def trust_judged(change: Change) -> None:
    """The back-test of the programme under its own id, and of each point under the point's."""
    shared = {name: change.body[name] for name in ("software", "results", "latest", "first")}
    shared |= {"judged_at": change.entry.at}
    whole = change.body["programme"] | shared | {"ladder": change.body["ladder"]}
    change.put("trust", change.entry.about, whole)
    for point, judged in change.body["points"].items():
        change.put("trust", point, judged | shared, parent=point)
