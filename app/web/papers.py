"""Papers beside the certificate: bottle labels, run sheet, custody form, waste label."""

from __future__ import annotations

import secrets
import sqlite3
from datetime import UTC, datetime
from typing import Any

from flask import Response
from flask_smorest import Blueprint
from marshmallow import fields, validate

from app.compliance import codes
from app.documents.custody import CustodyBottle, CustodyData, Transfer, render_custody
from app.documents.labels import Label, render_labels
from app.documents.run_sheet import RunSheetData, RunTube, render_run_sheet
from app.documents.waste_label import WasteLabelData, render_waste_label
from app.journal.kinds import Body
from app.records import change
from app.records.handlers.runs import facts_of
from app.safety import container as safety_container
from app.safety import gates, waste
from app.web.certificate_data import dilution_of, plain
from app.web.context import context
from app.web.security import NotFound
from app.web.sessions import need

blueprint = Blueprint("papers", __name__, url_prefix="/api/papers", description="Papers that print")

BODIES = len(codes.ALPHABET) ** (codes.LENGTH - 1)


class PaperSchema(Body):
    """The size of the paper."""

    paper = fields.String(load_default="a4", validate=validate.OneOf(["a4", "letter"]))


class LabelsSchema(PaperSchema):
    """How many labels."""

    count = fields.Integer(load_default=21, validate=validate.Range(min=1, max=210))


def now_text() -> str:
    """Return the present as papers carry it."""
    return datetime.now(UTC).isoformat(timespec="seconds")


def pdf(data: bytes, name: str) -> Response:
    """Answer with a paper."""
    headers = {"Content-Disposition": f'inline; filename="{name}.pdf"'}
    return Response(data, mimetype="application/pdf", headers=headers)


def record(connection: sqlite3.Connection, type_: str, id_: str) -> change.Body:
    """Return a record's body, or say that there is none."""
    body = change.get(connection, type_, id_)
    if body is None:
        raise NotFound(f"There is no such {type_.replace('_', ' ')} here.")
    return body


def programme_of(connection: sqlite3.Connection) -> change.Body:
    """Return the programme."""
    return change.find(connection, "programme")[0][1]


def fresh_codes(connection: sqlite3.Connection, count: int) -> list[str]:
    """Return bottle codes that no bottle on the server has, drawn at random so that sheets do not meet."""
    found: dict[str, None] = {}
    while len(found) < count:
        code = next(codes.codes(secrets.randbelow(BODIES), 1))
        if change.get(connection, "bottle", code) is None:
            found[code] = None
    return list(found)


@blueprint.route("/labels.pdf")
@need()
@blueprint.arguments(LabelsSchema, location="query")
@blueprint.response(200, content_type="application/pdf")
def labels(given: dict[str, Any]) -> Response:
    """A sheet of bottle labels with codes that are free."""
    connection = context().store.read()
    made = tuple(Label(code) for code in fresh_codes(connection, given["count"]))
    name = programme_of(connection)["name"]
    return pdf(render_labels(made, name, now_text(), given["paper"]), "labels")


def _run_tube(tube: change.Body) -> RunTube:
    role, code = tube["role"], tube["bottle"]
    what = {"sample": code, "duplicate": f"{code} duplicate", "spike": f"{code} spike"}.get(role, role)
    return RunTube(
        position=tube["position"],
        what=str(what),
        dilution=dilution_of(tube["dilution"]) if tube["dilution"] else None,
        expected=tube["expected"] or "",
        absorbance=tube["absorbance"]["text"] if tube["absorbance"] else "",
    )


@blueprint.route("/run/<run_id>.pdf")
@need()
@blueprint.arguments(PaperSchema, location="query")
@blueprint.response(200, content_type="application/pdf")
def run_sheet(given: dict[str, Any], run_id: str) -> Response:
    """The sheet of a run: rack, gates, room for readings by pen."""
    connection = context().store.read()
    run, programme = record(connection, "run", run_id), programme_of(connection)
    recipe = record(connection, "recipe", run["recipe"])
    asked = gates.run_gates(facts_of(recipe))
    names = {
        name: record(connection, type_, run[name])["name"]
        for name, type_ in (
            ("lot", "lot"),
            ("instrument", "instrument"),
            ("block", "instrument"),
            ("container", "container"),
        )
    }
    data = RunSheetData(
        name=run["name"],
        programme=programme["name"],
        laboratory=programme["laboratory"],
        zone=programme["zone"],
        made_at=now_text(),
        planned_by=run["planned_by"],
        recipe=recipe["name"],
        source=recipe["source"],
        lot=names["lot"],
        photometer=names["instrument"],
        wavelength_nm=plain(recipe["wavelength_nm"]),
        block=names["block"],
        calibration=f"valid until {record(connection, 'calibration', run['calibration'])['valid_until']}",
        container=names["container"],
        minutes=round(recipe["minutes"]),
        temperature_c=plain(recipe["temperature_c"]),
        tubes=tuple(map(_run_tube, run["tubes"])),
        order=tuple(recipe["order"]),
        gates=tuple(gate.question for gate in asked),
        cautions=tuple(gate.caution for gate in asked),
        example=programme["example"],
    )
    return pdf(render_run_sheet(data, given["paper"]), "run-sheet")


def _custody_bottle(connection: sqlite3.Connection, code: str) -> CustodyBottle:
    bottle = record(connection, "bottle", code)
    sample = (bottle["sample"] and change.get(connection, "sample", bottle["sample"])) or {}
    point = (bottle["point"] and change.get(connection, "point", bottle["point"])) or {}
    kept = sample.get("preservation", {})
    preserved = (("acid", kept.get("acid")), ("cooled", kept.get("cooled")))
    return CustodyBottle(
        code=code,
        discharger=point.get("discharger_name", ""),
        point=point.get("name", ""),
        kind=sample.get("sample_kind", ""),
        collected_at=sample.get("collected_at", ""),
        preservation=tuple(words for words, done in preserved if done),
        collected_by=sample.get("by_name", ""),
        remarks=sample.get("note", ""),
    )


@blueprint.route("/hand-over/<hand_over_id>.pdf")
@need()
@blueprint.arguments(PaperSchema, location="query")
@blueprint.response(200, content_type="application/pdf")
def custody(given: dict[str, Any], hand_over_id: str) -> Response:
    """The custody form of a hand-over, with room for the next ones."""
    connection = context().store.read()
    over, programme = record(connection, "hand_over", hand_over_id), programme_of(connection)
    person = change.get(connection, "person", over["by"]) or {"name": over["by"]}
    temperature = over["temperature"]
    transfer = Transfer(
        given_by=person["name"],
        taken_by=over["to"],
        at=over["at"],
        temperature=f"{temperature['text']} °C" if temperature else "",
        seals=f"seal or lock {over['seal']}" if over["seal"] else "",
        note=over["note"],
        given_strokes=(over["given"] or {}).get("strokes", ""),
        taken_strokes=(over["taken"] or {}).get("strokes", ""),
    )
    data = CustodyData(
        id=hand_over_id,
        programme=programme["name"],
        laboratory=programme["laboratory"],
        zone=programme["zone"],
        made_at=now_text(),
        bottles=tuple(_custody_bottle(connection, code) for code in over["bottles"]),
        transfers=(transfer,),
        example=programme["example"],
    )
    return pdf(render_custody(data, given["paper"]), "custody")


def _codes_of(held: change.Body) -> tuple[str, ...]:
    if held["filled_ml"] <= 0:
        return ()
    total = waste.Totals(
        tubes=held["tubes"],
        mercury_mg=held["mercury_mg"],
        chromium_mg=held["chromium_mg"],
        silver_mg=held["silver_mg"],
        acid_reagent_ml=held["acid_reagent_ml"],
        sulfuric_acid_g=held["sulfuric_acid_g"],
        volume_ml=held["filled_ml"],
        mass_g=held["mass_g"],
    )
    return tuple(one.code for one in waste.waste_codes(total))


@blueprint.route("/container/<container_id>.pdf")
@need()
@blueprint.arguments(PaperSchema, location="query")
@blueprint.response(200, content_type="application/pdf")
def waste_label(given: dict[str, Any], container_id: str) -> Response:
    """The label of a waste container; local rules decide what it must carry."""
    connection = context().store.read()
    held, programme = record(connection, "container", container_id), programme_of(connection)
    metals = (("mercury", "mercury_mg"), ("chromium", "chromium_mg"), ("silver", "silver_mg"))
    data = WasteLabelData(
        container=held["name"],
        contents=safety_container.CONTENTS,
        hazards=safety_container.HAZARDS,
        generator=programme["laboratory"],
        address=programme["settings"].get("address", ""),
        phone="",
        zone=programme["zone"],
        made_at=now_text(),
        started_on=held["opened_at"][:10],
        codes=_codes_of(held),
        amounts=tuple((metal, f"{held[name] / 1000:.2f} g") for metal, name in metals),
        filled=f"{held['filled_ml']:.0f} of {plain(held['capacity_ml'])} mL",
        example=programme["example"],
    )
    return pdf(render_waste_label(data, given["paper"]), "waste-label")
