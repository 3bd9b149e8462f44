"""The controls of a rack: what ``calculate`` is given for them, and what they say in words.

A laboratory control sample holds a known COD of another source than the
standards; a duplicate is a second portion of a bottle taken through the whole
procedure; a spiked portion got a known addition. Duplicate and spike are
samples of the sum under names of their own and give no result. What a tube
was spiked with counts in its diluted sample, so that the addition is
multiplied by the dilution factor as the reading is.
"""

from __future__ import annotations

from typing import Any

from app.journal import measured
from app.records.change import Body

EXTRA = ("duplicate", "spike")


#: The decision that takes a failed check out of charts and bias; it stays listed with its cause.
NOT_USED = "not used"


def unused(run: Body) -> dict[tuple[str, str], str]:
    """Return the checks of a run that a person decided not to use, each with the reason."""
    decisions = (run.get("closed") or {}).get("decisions", [])
    return {(d["what"], d["subject"]): d["reason"] for d in decisions if d["decision"] == NOT_USED}


def is_extra(name: str) -> bool:
    """Tell whether a sample of an answer is a duplicate or a spiked portion."""
    return name.split(" ")[1:2] in (["duplicate"], ["spike"])


def read_tubes(run: Body, *roles: str) -> list[Body]:
    """Return the tubes of some roles that have a reading."""
    return [tube for tube in run["tubes"] if tube["role"] in roles and tube["absorbance"] is not None]


def kept(run: Body, role: str) -> list[Body]:
    """Return the read tubes of a role that nobody left out."""
    return [tube for tube in read_tubes(run, role) if tube["excluded"] is None]


def extra_names(run: Body) -> dict[str, Body]:
    """Return the kept duplicates and spiked portions of a rack by the names that the sum gives them."""
    found: dict[str, Body] = {}
    for role in EXTRA:
        for tube in kept(run, role):
            name = f"{tube['bottle']} {role}"
            found[name if name not in found else f"{name} {tube['position']}"] = tube
    return found


def native_of(tube: Body, samples: dict[str, list[Body]]) -> str | None:
    """Return the name of the sample that a duplicate or a spike belongs to; None where none counts."""
    own = [
        name
        for name, tubes in samples.items()
        if tubes[0]["bottle"] == tube["bottle"] and any(one["excluded"] is None for one in tubes)
    ]
    same = [name for name in own if samples[name][0]["dilution"]["factor"] == tube["dilution"]["factor"]]
    return next(iter([*same, *own]), None)


def pairs(run: Body, samples: dict[str, list[Body]]) -> list[tuple[str, str, Body]]:
    """Return each duplicate or spike as (its sample, its own name, its tube), where its sample counts."""
    named = ((native_of(tube, samples), name, tube) for name, tube in extra_names(run).items())
    return [(native, name, tube) for native, name, tube in named if native is not None]


def duplicates(found: list[tuple[str, str, Body]]) -> list[list[str]]:
    """Return the duplicates as ``calculate`` takes them."""
    return [[native, name] for native, name, tube in found if tube["role"] == "duplicate"]


def spikes(found: list[tuple[str, str, Body]]) -> list[Body]:
    """Return the spikes as ``calculate`` takes them, the addition in mg/L of the undiluted sample."""
    return [
        {
            "unspiked": native,
            "spiked": name,
            "sample_ml": measured.read(tube["spike"]["sample_ml"]).value,
            "spike_ml": measured.read(tube["spike"]["spike_ml"]).value,
            "spike_mg_l": _number(tube["spike"]["spike_mg_l"]) * tube["dilution"]["factor"],
        }
        for native, name, tube in found
        if tube["role"] == "spike"
    ]


def _number(text: str) -> float:
    return measured.read(text).value or 0.0


def _row(
    what: str, subject: str, tube: Body | None, value: float | None, ok: bool | None, words: str
) -> Body:
    position = None if tube is None else tube["position"]
    unit = "mAU" if what == "blank" else "%"
    row = {"what": what, "subject": subject, "position": position, "value": value, "unit": unit}
    return row | {"ok": ok, "words": words, "left_out": ""}


def rows(run: Body, given: Body, answer: Body, samples: dict[str, list[Body]]) -> list[Body]:
    """Return every check of a calculated run: what it is, its number, whether it holds, in words."""
    found = _blank(answer) + _known(run, given, answer)
    return [*found, *_pair_rows(run, given, answer, samples)]


def _blank(answer: Body) -> list[Body]:
    blank = answer["checks"]["blank"]
    if blank is None:
        return []
    sd = "" if blank["sd"] is None else f", standard deviation {1000 * blank['sd']:.1f}"
    words = f"mean of the blanks {1000 * blank['mean']:.1f} mAU{sd}"
    return [_row("blank", "blanks", None, 1000 * blank["mean"], None, words)]


def _known(run: Body, given: Body, answer: Body) -> list[Body]:
    """Return verifications and controls: a known COD digested; the verb judges both by recovery."""
    within = given["policy"]["verification_percent"]
    tubes = [*kept(run, "verification"), *kept(run, "control")]
    found = []
    for i, (tube, one) in enumerate(zip(tubes, answer["checks"]["verifications"], strict=True)):
        what, recovery = tube["role"], one["recovery_percent"]
        subject = f"{i + 1}: {one['expected']:g} mg/L"
        if what == "control":
            subject = f"position {tube['position']}: {one['expected']:g} mg/L"
        source = f" ({tube['source']})" if tube.get("source") else ""
        words = f"the curve gives no COD for {one['expected']:g} mg/L{source}"
        if recovery is not None:
            words = f"found {one['found']:.0f} of {one['expected']:g} mg/L{source}: {recovery:.1f} %, "
            words += f"{'within' if one['ok'] else 'not within'} {100 - within:g} to {100 + within:g} %"
        found.append(_row(what, subject, tube, recovery, one["ok"], words))
    return found


def _pair_rows(run: Body, given: Body, answer: Body, samples: dict[str, list[Body]]) -> list[Body]:
    tubes = {name: (native, tube) for native, name, tube in pairs(run, samples)}
    status = {one["sample"]: one["status"] for one in answer["samples"]}
    policy, found = given["policy"], []
    for one in answer["checks"]["duplicates"]:
        words = _duplicate_words(one, policy["duplicate_rpd_percent"])
        subject = " and ".join(one["samples"])
        found.append(
            _row("duplicate", subject, tubes[one["samples"][1]][1], one["rpd_percent"], one["ok"], words)
        )
    control = [check["ok"] for check in answer["checks"]["verifications"][len(kept(run, "verification")) :]]
    for one in answer["checks"]["spikes"]:
        words = _spike_words(one, policy["spike_percent"], status, control)
        recovery = one["recovery_percent"]
        found.append(_row("spike", one["spiked"], tubes[one["spiked"]][1], recovery, one["ok"], words))
    return found


def _duplicate_words(one: Body, limit: float) -> str:
    if one["rpd_percent"] is None:
        return "no relative difference can be given"
    words = f"they differ by {one['rpd_percent']:.1f} % of their mean"
    if one["ok"] and one["rpd_percent"] > limit:
        return f"{words}, by less than one reporting level: it holds near that level"
    return f"{words}, {'within' if one['ok'] else 'more than'} {limit:g} %"


def _spike_words(one: Body, percent: list[float], status: dict[str, str], control: list[bool]) -> str:
    if one["recovery_percent"] is None:
        return "no recovery can be given"
    words = f"{one['recovery_percent']:.1f} % of the addition was found again"
    if "over" in (status[one["spiked"]], status[one["unspiked"]]):
        return f"{words}, but a tube is over range: nothing can be concluded"
    if one["ok"] is None:
        return f"{words}; not judged, because less than a quarter of the native value was added"
    if one["ok"]:
        return f"{words}, within {percent[0]:g} to {percent[1]:g} %"
    words += f", not within {percent[0]:g} to {percent[1]:g} %"
    if control and all(control):
        return f"{words}; the control holds, so the matrix of this sample is in doubt and not the run"
    return words


def with_left_out(found: list[Body], run: Body, in_tube: dict[int, float | None]) -> list[Body]:
    """Return the checks with the known tubes that a person left out, for the charts: number and cause."""
    gone = [tube for tube in read_tubes(run, "verification", "control") if tube["excluded"] is not None]
    for tube in gone:
        value, expected = in_tube.get(tube["position"]), _number(tube["expected"])
        if value is None:
            continue
        row = _row(
            tube["role"], f"position {tube['position']}", tube, 100 * value / expected, None, "left out"
        )
        found = [*found, row | {"left_out": tube["excluded"]["cause"]}]
    return found


def questions(body: Body) -> list[dict[str, Any]]:
    """Return what a person must decide about a run's samples and checks before it is closed."""
    samples = (one for one in body["answer"]["samples"] if not is_extra(one["sample"]))
    found = [
        {"what": one["status"], "subject": one["sample"]}
        for one in samples
        if one["status"] in ("over", "disagree")
    ]
    failed = [one for one in body["checks"] if one["ok"] is False]
    return found + [{"what": one["what"], "subject": one["subject"]} for one in failed]
