"""From records to what a certificate says: the numbers are passed on, never rounded again."""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal
from typing import Any

from app.chemistry import rounding
from app.chemistry.uncertainty import coverage_factor, whole_dof
from app.documents import data as paper
from app.documents.corrected import Corrected, Correction
from app.errors import InputError
from app.journal.units import table
from app.records.change import Body
from app.records.controls import EXTRA
from app.records.laboratory import SOFTWARE, sample_names
from app.records.ledger import Writing
from app.web.certificate_pictures import calibration_of, components_of, strip_of

_FIELD = {
    "conductivity_us_cm": "conductivity",
    "turbidity_ntu": "turbidity",
    "ph": "pH",
    "temperature_c": "temperature",
    "chloride_mg_l": "chloride by strip",
}


def next_number(issued: list[tuple[str, Body]], now: str) -> str:
    """Return the next certificate's number: the year and a count without gaps."""
    year = now[:4]
    count = sum(1 for number, _ in issued if number.startswith(f"{year}-"))
    return f"{year}-{count + 1:04d}"


def _need(writing: Writing, type_: str, id_: str | None) -> Body:
    body = writing.get(type_, id_) if id_ else None
    if body is None:
        raise InputError(f"The {type_} of this result is not on the server.", {"result": [f"No {type_}."]})
    return body


def _refuse_unready(result: Body, run: Body) -> None:
    wrong = []
    if result["certificate"]:
        wrong.append(f"Certificate {result['certificate']} was issued for it already.")
    if result["status"] == "disagree":
        wrong.append("Its tubes disagree: the value is provisional. Repeat it first.")
    if run["state"] != "closed":
        wrong.append("Its run is not closed: each failed check needs a decision.")
    if not result["review"] or result["review"]["decision"] != "accepted":
        wrong.append("It was not reviewed and accepted yet.")
    if wrong:
        raise InputError("This result cannot be certified: " + " ".join(wrong), {"result": wrong})


def _measured(name: str, given: Body | None) -> list[paper.Measured]:
    if given is None:
        return []
    unit = table()[given["unit"]]["shown"]
    return [paper.Measured(name, given["text"], "" if unit == "pH" else unit)]


def _sample(id_: str, sample: Body) -> paper.Sample:
    received: Body = sample["received"] or {}
    kept = sample["preservation"]
    preservation = []
    if kept["acid"]:
        preservation.append(f"sulfuric acid to pH {kept['ph']['text']}" if kept["ph"] else "sulfuric acid")
    if kept["cooled"]:
        preservation.append("cooled")
    readings = [one for name, words in _FIELD.items() for one in _measured(words, sample["field"].get(name))]
    receipt = _measured("temperature", received.get("temperature")) + _measured("pH", received.get("ph"))
    receipt += [paper.Measured("seal", received["seal"])] if received else []
    condition = ", ".join([received.get("decision", ""), *received.get("reasons", [])]).strip(", ")
    return paper.Sample(
        id=id_,
        bottle=sample["bottle"],
        kind=sample["sample_kind"],
        collected_at=sample["collected_at"],
        collected_by=sample["by_name"],
        received_at=received.get("at"),
        received_by=received.get("by_name", ""),
        hold_until=sample["hold_until"],
        preservation=tuple(preservation),
        field_readings=tuple(readings),
        receipt=tuple(receipt),
        condition=condition,
        note=sample["note"],
    )


def plain(number: float) -> str:
    """Return a number as paper prints it: its shortest text, without an exponent."""
    return rounding.plain(Decimal(repr(float(number))).normalize())


def _method(run: Body, recipe: Body) -> paper.Method:
    heating: Body = run["heating"] or {}
    read = [one["at"] for tube in run["tubes"] for one in tube["readings"]]
    return paper.Method(
        recipe=recipe["name"],
        source=recipe["source"],
        wavelength_nm=plain(recipe["wavelength_nm"]),
        minutes=round(float(heating.get("minutes") or recipe["minutes"])),
        temperature_c=plain(recipe["temperature_c"]),
        working_low=plain(recipe["working_low"]),
        working_high=plain(recipe["working_high"]),
        run=run["name"],
        analysed_from=heating.get("started_at"),
        analysed_to=max(read, default=None),
        analysed_by=run["planned_by"],
    )


def _result(result: Body, used: int) -> paper.Result:
    given = paper.Result(
        status=result["status"],
        reported=result["shown"],
        reporting_level=plain(result["reporting_level"]),
        tubes_used=used,
        detection_limit=_detection_limit(result.get("detection_limit")),
    )
    if result["status"] != "ok" or result["shown_u"] is None:
        return given
    dof: float | None = result["dof"]
    return replace(
        given,
        expanded_u=result["shown_u"],
        coverage_factor=f"{coverage_factor(dof):.2f}",
        dof=None if dof is None else str(whole_dof(dof)),
    )


def _detection_limit(limit: Body | None) -> str:
    if limit is None:
        return ""
    after = f"{limit['shown_after']} mg/L after dilution"
    return f"{after}, {limit['shown']} mg/L in the tube, calculated {limit['computed_on']}"


def _corrected(found: Body | None) -> Corrected | None:
    """Return the value beside the reported one, its texts as the server rounded them."""
    if found is None:
        return None
    return Corrected(
        found["shown"],
        tuple(
            Correction(one["name"], f"{one['given']['text']} {one['given_as']}", one["shown"])
            for one in found["corrections"]
        ),
    )


def _verdict(one: Body) -> paper.Verdict:
    above = one["probability_above"]
    return paper.Verdict(
        verdict=one["verdict"],
        why=one["why"],
        rule=one["rule"],
        rule_source=one["rule_source"],
        basis=(one["basis"] or "").replace("_", " "),
        limit=None if one["limit"] is None else plain(one["limit"]),
        effective_from=one["effective_from"],
        source=one["source"] or "",
        probability_above_percent=None if above is None else f"{100 * above:.1f}",
    )


def _checks(run: Body, code: str) -> tuple[paper.Check, ...]:
    """Return the checks of a run that bear on a bottle: not another bottle's duplicate or spike."""
    decided = {
        (one["what"], one["subject"]): f"{one['decision']}: {one['reason']}"
        for one in run["closed"]["decisions"]
    }
    found = []
    known = len(run["input"]["verifications"]) - _controls(run)
    for index, one in enumerate(run["answer"]["checks"]["verifications"][:known]):
        subject = f"{index + 1}: {one['expected']:g} mg/L"
        found.append(
            paper.Check(
                f"Verification {one['expected']:g} mg/L",
                f"within {run['input']['policy']['verification_percent']:g} %",
                f"{one['found']:.1f} mg/L, {one['recovery_percent']:.1f} %",
                one["ok"],
                decided.get(("verification", subject), ""),
            )
        )
    for one in run.get("checks") or []:
        if one["what"] in NAMED and one["ok"] is not None and _bears_on(one, code):
            words = decided.get((one["what"], one["subject"]), "")
            asked = _asked(one["what"], run["input"]["policy"])
            found.append(paper.Check(NAMED[one["what"]], asked, f"{one['value']:.1f} %", one["ok"], words))
    blank = run["answer"]["checks"]["blank"]
    if blank:
        found.append(paper.Check("Digested blank", "subtracted", f"{blank['mean']:.4f} AU", None))
    return tuple(found)


NAMED = {"control": "Laboratory control", "duplicate": "Duplicate", "spike": "Spike"}


def _controls(run: Body) -> int:
    """Return how many controls stand behind the verifications of a run's sum."""
    return len([one for one in run.get("checks") or [] if one["what"] == "control" and not one["left_out"]])


def _asked(what: str, policy: Body) -> str:
    if what == "duplicate":
        return f"differ by at most {policy['duplicate_rpd_percent']:g} %"
    if what == "control":
        return f"within {policy['verification_percent']:g} %"
    low, high = policy["spike_percent"]
    return f"{low:g} to {high:g} %"


def _bears_on(check: Body, code: str) -> bool:
    return check["what"] == "control" or check["subject"].split(" ")[0] == code


def _what(tube: Body) -> str:
    if tube["role"] in ("verification", "control"):
        return f"{tube['role']} {tube['expected']}"
    if tube["role"] in EXTRA:
        return f"{tube['bottle']} {tube['role']}"
    return str(tube["bottle"] or tube["role"])


def _set_aside(run: Body) -> dict[int, str]:
    """Return why each tube that the rule of the replicates set aside was set aside, by position."""
    found = {}
    names = sample_names(run)
    for one in run["answer"]["samples"]:
        for left in one["excluded"]:
            if left["by"] == "rule":
                found[names[one["sample"]][left["index"]]["position"]] = (
                    f"set aside by rule: {left['reason']}"
                )
    return found


def _tubes(run: Body, code: str) -> tuple[paper.Tube, ...]:
    told = [tube for tube in run["tubes"] if tube["bottle"] in (None, code)]
    by_rule = _set_aside(run)
    return tuple(
        paper.Tube(
            position=tube["position"],
            what=_what(tube),
            absorbance=tube["absorbance"]["text"] if tube["absorbance"] else "",
            in_tube="" if tube["in_tube"] is None else f"{tube['in_tube']:.1f}",
            state=tube["colour"] or "",
            excluded=tube["excluded"]["cause"] if tube["excluded"] else by_rule.get(tube["position"], ""),
            excluded_by=tube["excluded"]["by"] if tube["excluded"] else "",
        )
        for tube in told
    )


def _answer_of(run: Body, result: Body) -> Body:
    names = [name for name, tubes in sample_names(run).items() if tubes[0]["bottle"] == result["bottle"]]
    answers: list[Body] = [one for one in run["answer"]["samples"] if one["sample"] in names]
    return next(one for one in answers if one["cod"] == result["cod"])


def _dof(writing: Writing, run: Body) -> dict[str, float | None]:
    """Return the degrees of freedom of the components that have finite ones."""
    calibration = writing.get("calibration", run["calibration"]) or {}
    policy = run["input"]["policy"]
    line = (calibration.get("fitted") or {}).get("dof")
    return {"line": line, "repeatability": policy["repeatability"]["dof"], "bias": policy["bias_dof"]}


def dilution_of(dilution: Body) -> paper.Dilution:
    """Return a dilution as paper prints it."""
    steps = tuple(paper.Step(plain(one["pipette_ml"]), plain(one["flask_ml"])) for one in dilution["steps"])
    return paper.Dilution(plain(dilution["factor"]), steps)


def gather(
    writing: Writing, result_id: str, number: str | None, signer: str, meaning: str, now: str
) -> paper.CertificateData:
    """Return what the certificate of a result says.

    Raises
    ------
    InputError
        If the result is not ready to be certified; every reason is named.
    """
    result = _need(writing, "result", result_id)
    run = _need(writing, "run", result["run"])
    _refuse_unready(result, run)
    recipe, sample = _need(writing, "recipe", run["recipe"]), _need(writing, "sample", result["sample"])
    point = _need(writing, "point", result["point"])
    discharger = _need(writing, "discharger", point["discharger"])
    programme = writing.find("programme")[0][1]
    answer = _answer_of(run, result)
    facts: dict[str, Any] = {
        "calibration": calibration_of(writing, run, answer),
        "strip": strip_of(result, recipe, sample),
        "components": components_of(result, _dof(writing, run)),
        "checks": _checks(run, result["bottle"]),
        "tubes": _tubes(run, result["bottle"]),
        "qualifiers": tuple(paper.Qualifier(**one) for one in result.get("qualifiers", [])),
        "corrected": _corrected(result.get("corrected")),
    }
    return paper.CertificateData(
        number=number,
        programme=paper.Party(programme["name"], programme["settings"].get("address", "")),
        laboratory=paper.Party(programme["laboratory"]),
        discharger=paper.Party(discharger["name"], discharger["address"]),
        point=point["name"],
        zone=programme["zone"],
        sample=_sample(result["sample"], sample),
        method=_method(run, recipe),
        dilution=dilution_of(result["dilution"]),
        result=_result(result, len(answer["used"])),
        verdicts=tuple(map(_verdict, result["verdicts"])),
        authorised=paper.Signature(signer, "coordinator", meaning, now),
        journal=paper.Journal(writing.head.position, writing.head.digest),
        software=SOFTWARE,
        issued_at=now,
        example=programme["example"],
        **facts,
    )
