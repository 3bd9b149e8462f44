"""The programme's settings: every number of a rule that a person may set.

Each has a default with its source; whatever decided something is printed
beside the verdict it decided.
"""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from marshmallow import fields, validate

from app.journal.kinds import Body
from app.safety.accumulation import FEDERAL


def _share(**kwargs: Any) -> fields.Float:
    return fields.Float(validate=validate.Range(min=0, max=1), **kwargs)


def _percent(**kwargs: Any) -> fields.Float:
    return fields.Float(validate=validate.Range(min=0, max=1000), **kwargs)


class Repeatability(Body):
    """Scatter of one tube, sqrt(a² + (k x)²), and the degrees of freedom it was found with."""

    a = fields.Float(required=True, validate=validate.Range(min=0, max=1000))
    k = _share(required=True)
    dof = fields.Float(required=True, allow_none=True, validate=validate.Range(min=1))


class WasteRules(Body):
    """Thresholds and days of hazardous waste; state and local rules decide."""

    small_above_kg = fields.Float(validate=validate.Range(min=0))
    large_from_kg = fields.Float(validate=validate.Range(min=0))
    acute_above_kg = fields.Float(validate=validate.Range(min=0))
    small_days = fields.Integer(strict=True, validate=validate.Range(min=1, max=3650))
    small_far_days = fields.Integer(strict=True, validate=validate.Range(min=1, max=3650))
    large_days = fields.Integer(strict=True, validate=validate.Range(min=1, max=3650))
    satellite_l = fields.Float(validate=validate.Range(min=0))
    satellite_days = fields.Integer(strict=True, validate=validate.Range(min=1, max=365))
    note = fields.String(validate=validate.Length(max=300))


class Settings(Body):
    """All settings of a programme."""

    replicates = fields.Integer(strict=True, validate=validate.Range(min=1, max=10))
    repeatability = fields.Nested(Repeatability)
    bias_relative_u = _share()
    bias_dof = fields.Float(allow_none=True, validate=validate.Range(min=1))
    standards_relative_u = _share()
    verification_percent = _percent()
    second_source_percent = _percent()
    second_source_required = fields.Boolean()
    duplicate_rpd_percent = _percent()
    spike_percent = fields.List(_percent(), validate=validate.Length(equal=2))
    dilutions = fields.List(
        fields.Float(validate=validate.Range(min=1, max=1_000_000)), validate=validate.Length(min=1, max=40)
    )
    decision_rule = fields.String(validate=validate.OneOf(["simple", "guarded", "guarded_rejection"]))
    address = fields.String(validate=validate.Length(max=300))
    waste = fields.Nested(WasteRules)


DEFAULTS: dict[str, Any] = {
    "replicates": 3,  # common practice
    "repeatability": {"a": 4.0, "k": 0.025, "dof": None},  # start values until 20 own sets exist: practice
    "bias_relative_u": 0.02,  # from own control samples once 20 exist: practice
    "bias_dof": None,
    "standards_relative_u": 0.005,  # potassium hydrogen phthalate, balance and flask: practice
    "verification_percent": 10.0,  # EPA 410.4 rev 2.0, 9.3.4
    "second_source_percent": 10.0,  # EPA 410.4 rev 2.0, 9.2.3
    "second_source_required": False,  # a curve without one is offered with a warning
    "duplicate_rpd_percent": 20.0,  # common practice
    "spike_percent": [90.0, 110.0],  # EPA 410.4 rev 2.0, 9.4.2
    "dilutions": [1.0, 2.0, 4.0, 5.0, 10.0, 20.0, 25.0, 50.0, 100.0],
    "decision_rule": "simple",  # ILAC-G8:09/2019, 4.2.1
    "address": "",
    "waste": asdict(FEDERAL),  # 40 CFR 260.10, 262.13 to 262.17: the federal defaults
}
