"""What a certificate's appendix draws: the curve, the strip, the uncertainty budget."""

from __future__ import annotations

import math

from app.chemistry import rounding
from app.documents import data as paper
from app.records.change import Body
from app.records.laboratory import standards
from app.records.ledger import Writing

#: 95 % point of the normal distribution.
Z_95 = 1.6448536269514722

_WORDS = {
    "line": ("calibration line", "scatter of the standards about the curve"),
    "repeatability": ("repeatability", "scatter of tubes of one sample"),
    "dilution": ("dilution", "class A tolerances of pipettes and flasks"),
    "standards": ("standards", "purity, balance and flask of the standard"),
    "bias": ("bias", "control samples of the laboratory against their true value"),
}


def calibration_of(writing: Writing, run: Body, answer: Body) -> paper.Calibration | None:
    """Return the curve with its standards and where this sample was read."""
    calibration = writing.get("calibration", run["calibration"])
    if calibration is None or "coefficients" not in (calibration["fitted"] or {}):
        return None
    fitted = calibration["fitted"]
    typed = calibration["standards"]
    numbers = standards(calibration)
    found = {one["cod"]: one for one in fitted["standards"]}
    lot, instrument = writing.get("lot", run["lot"]) or {}, writing.get("instrument", run["instrument"]) or {}
    return paper.Calibration(
        name=f"{calibration['model']}, {calibration['wavelength_nm']:g} nm",
        made_at=calibration["made_at"],
        valid_until=calibration["valid_until"],
        standards=tuple(_standard(one, text, found) for one, text in zip(numbers, typed, strict=True)),
        coefficients=tuple(fitted["coefficients"]),
        lot=lot.get("name", ""),
        instrument=instrument.get("name", ""),
        made_by=calibration["made_by"],
        read=(answer["in_tube"], answer["absorbance"]),
        facts=_facts(fitted),
    )


def _standard(one: Body, typed: Body, found: dict[float, Body]) -> paper.Standard:
    told: Body = found.get(one["cod"], {})
    recovery = told.get("recovery_percent")
    return paper.Standard(
        cod=one["cod"],
        absorbance=tuple(one["absorbance"]),
        cod_text=typed["cod"],
        absorbance_texts=tuple(typed["absorbance"]),
        back_calculated=f"{told['back_calculated']:.1f}" if told else "",
        recovery_percent="" if recovery is None else f"{recovery:.1f}",
    )


def _facts(fitted: Body) -> tuple[paper.Measured, ...]:
    facts = [
        paper.Measured("slope", f"{fitted['coefficients'][1]:.4g}", "AU per mg/L"),
        paper.Measured("intercept", f"{fitted['coefficients'][0]:.2g}", "AU"),
        paper.Measured("residual standard deviation", f"{fitted['residual_sd']:.2g}", "AU"),
        paper.Measured("degrees of freedom", str(fitted["dof"])),
    ]
    if fitted["relative_standard_error_percent"] is not None:
        facts.append(
            paper.Measured("relative standard error", f"{fitted['relative_standard_error_percent']:.2f}", "%")
        )
    return tuple(facts)


def _expected(plan: Body) -> tuple[tuple[float, float], ...]:
    """Return the density of what was expected at the point, over mg/L.

    The plan keeps the median and the ends that nine in ten lie between; drawn
    is the lognormal density through them.
    """
    low, middle, high = (plan.get(name) for name in ("low", "median", "high"))
    if not (low and middle and high) or not low < middle < high:
        return ()
    spread = math.log(high / low) / (2 * Z_95)
    steps = [i / 20 for i in range(-60, 61)]
    return tuple((middle * math.exp(z * spread), math.exp(-0.5 * z * z)) for z in steps)


def strip_of(result: Body, recipe: Body, sample: Body) -> paper.Strip:
    """Return the strip: what was expected, the window of this dilution, the limits and the result."""
    factor = result["dilution_factor"]
    plan: Body = sample["plan"] or {}
    chance = plan.get("p_in_range") if plan.get("dilution_factor") == factor else None
    bar = paper.StripBar(
        f"{factor:g}",
        recipe["working_low"] * factor,
        recipe["working_high"] * factor,
        chosen=True,
        share_percent="" if chance is None else f"{100 * chance:.0f}",
    )
    marks = tuple(
        paper.Mark(one["limit"], f"{(one['basis'] or '').replace('_', ' ')} {one['limit']:g}")
        for one in result["verdicts"]
        if one["limit"] is not None
    )
    sign = {"below": "<", "over": ">"}.get(result["status"], "")
    bound = {"below": result["reporting_level"], "over": result["top"]}.get(result["status"])
    half = result["expanded_u"] or 0.0
    shown = (result["cod"] - half, result["cod"] + half) if bound is None else (bound, bound)
    return paper.Strip(
        density=_expected(plan),
        bars=(bar,),
        limits=marks,
        result=(bound if bound is not None else result["cod"], *shown),
        result_sign=sign,  # type: ignore[arg-type]
        result_label=f"result {result['shown']}" + (f" ± {result['shown_u']}" if result["shown_u"] else ""),
    )


def components_of(result: Body, dof: dict[str, float | None]) -> tuple[paper.Component, ...]:
    """Return the uncertainty budget, each component's size and share; a bound carries none."""
    if result["status"] != "ok" or not result["components"]:
        return ()
    total = sum(value**2 for value in result["components"].values())
    return tuple(
        paper.Component(
            name=_WORDS[name][0],
            u=rounding.plain(rounding.reported_u(value)) if value else "0",
            share=value**2 / total if total else 0.0,
            share_percent=f"{100 * value**2 / total:.1f}" if total else "0",
            dof="" if dof.get(name) is None else f"{dof[name]:g}",
            explained=_WORDS[name][1],
        )
        for name, value in result["components"].items()
    )
