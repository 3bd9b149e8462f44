"""The server's words beside a result: chloride after dilution, the corrected value, the detection limit.

They are stated apart from the run's sums, so that a chloride measured after
the run reaches its results and no number of theirs is touched.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import asdict, replace
from typing import Any

from app.chemistry import rounding
from app.chemistry.interferences import (
    CORRECTABLE,
    ChlorideGate,
    chloride_gate,
    chloride_qualifier,
    corrected_beside,
)
from app.journal import measured
from app.records.change import Body, Change, Stating
from app.records.laboratory import SOFTWARE, inputs_digest
from app.records.outlooks import chloride_known
from app.records.studies import day_of, in_force


def of_bottle(change: Change, code: str) -> Iterator[str]:
    """Yield the results of a bottle, whose words a new statement may change."""
    yield from (change.get("bottle", code) or {}).get("results", [])


def _input(writing: Stating, result: Body) -> Body:
    run = writing.get("run", result["run"]) or {}
    recipe = writing.get("recipe", run["recipe"]) or {}
    known = writing.get("bottle", result["bottle"]) or {}
    sample: Body = (known.get("sample") and writing.get("sample", known["sample"])) or {}
    species = writing.get("interferents", result["bottle"]) or {}
    field: Body = sample.get("field") or {}
    return {
        "cod": result["cod"],
        "status": result["status"],
        "dilution_factor": result["dilution_factor"],
        "chloride_limit": (recipe.get("derived") or {}).get("chloride_limit", 0.0),
        "chloride": chloride_known(species, field),
        "conductivity_us_cm": measured.value(field.get("conductivity_us_cm"), "uS/cm"),
        "species": {name: species[name]["given"] for name in CORRECTABLE if name in species},
        "doubts": list(sample.get("doubts", [])),
        "gate_note": ((run.get("gates") or {}).get("chloride_within_limit") or {}).get("note", ""),
        "run_day": day_of(run),
        "detection_limit": in_force(writing, run),
    }


def of_meter(change: Change, meter: str) -> Iterator[str]:
    """Yield the results whose field readings a check of a meter may cast doubt on."""
    for used in (change.get("meter", meter) or {}).get("samples", []):
        yield from (change.get("sample", used["sample"]) or {}).get("results", [])


def over_limit(change: Change, run: Body) -> list[str]:
    """Return the samples of a rack whose chloride after dilution is known to be over the recipe's limit."""
    limit = ((change.get("recipe", run["recipe"]) or {}).get("derived") or {}).get("chloride_limit", 0.0)
    tubes = {(t["bottle"], t["dilution"]["factor"]) for t in run["tubes"] if t["bottle"] and t["dilution"]}
    found = []
    for code, factor in sorted(tubes):
        known = change.get("bottle", code) or {}
        sample: Body = (known.get("sample") and change.get("sample", known["sample"])) or {}
        chloride = chloride_known(change.get("interferents", code) or {}, sample.get("field") or {})
        if chloride:
            gate = chloride_gate(limit, factor, chloride["mg_l"], sign=chloride["sign"])
            found += [f"{code}: {gate.words}"] if gate.verdict == "closed" else []
    return found


def _gate(given: Body) -> ChlorideGate:
    known = given["chloride"] or {"mg_l": None, "sign": "="}
    return chloride_gate(
        given["chloride_limit"],
        given["dilution_factor"],
        known["mg_l"],
        given["conductivity_us_cm"],
        known["sign"],
    )


def _corrected(given: Body) -> tuple[Body | None, list[str]]:
    """Return the corrected value of a number, and the words about it; a bound subtracts nothing."""
    numbers, words = {}, []
    for name, typed in given["species"].items():
        if measured.read(typed["text"]).sign == "=":
            numbers[name] = measured.value(typed, "mg/L") or 0.0
        else:
            words.append(
                f"{CORRECTABLE[name].name.capitalize()} {typed['text']} {typed['unit']} is a bound: "
                "nothing is taken out for it."
            )
    if not numbers or given["status"] != "ok":
        return None, words
    found = corrected_beside(given["cod"], numbers)
    body: dict[str, Any] = asdict(found) | {"corrections": [asdict(one) for one in found.corrections]}
    for one, name in zip(body["corrections"], numbers, strict=True):
        one |= {
            "given": given["species"][name],
            "given_as": CORRECTABLE[name].given_as,
            "shown": rounding.plain(rounding.reported_cod(one["oxygen_demand"])),
        }
    body["shown"] = rounding.plain(rounding.reported_cod(max(found.corrected, 0.0)))
    return body, [*words, _said(body)]


def _said(body: Body) -> str:
    parts = [
        f"{one['name']} {one['given']['text']} {one['given_as']} takes {one['shown']} mg/L"
        for one in body["corrections"]
    ]
    return (
        f"For information, with {' and '.join(parts)} taken out: {body['shown']} mg/L. "
        "The reported result is the uncorrected one, which permits mean."
    )


def _limit(given: Body) -> tuple[Body | None, list[str]]:
    limit = given["detection_limit"]
    if limit is None:
        return None, []
    after = limit["mg_l"] * given["dilution_factor"]
    body = limit | {"after_dilution": after, "shown_after": rounding.plain(rounding.significant(after, 2))}
    return body, [
        f"Detection limit of the method in force: {limit['shown']} mg/L in the tube, {body['shown_after']} "
        f"mg/L after this dilution; calculated {limit['computed_on']}{_late(given)}."
    ]


def _late(given: Body) -> str:
    by: str = given["detection_limit"]["again_by"]
    return f", ▲ to be calculated again by {by}, before this run" if given["run_day"] > by else ""


def qualify(writing: Stating, id_: str) -> None:
    """State what stands beside a result; one that was issued on paper is never changed."""
    result = writing.get("result", id_)
    if result is None or result["certificate"] or result["source"] != "run":
        return
    given = _input(writing, result)
    gate, (corrected, words), (limit, of_limit) = _gate(given), _corrected(given), _limit(given)
    letter = chloride_qualifier(gate)
    if letter and gate.verdict == "closed" and given["gate_note"]:
        letter = replace(letter, note=f"{letter.note} Digested all the same: {given['gate_note']}")
    body = {
        "software": SOFTWARE,
        "inputs_digest": inputs_digest(given),
        "input": given,
        "chloride": asdict(gate),
        "qualifiers": [asdict(letter)] if letter else [],
        "corrected": corrected,
        "detection_limit": limit,
        "words": [*words, *of_limit, *(f"Field reading in doubt: {one}." for one in given["doubts"])],
    }
    writing.state("result.qualified", id_, body)
