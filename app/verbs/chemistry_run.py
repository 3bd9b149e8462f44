"""From the JSON of one run to its dataclasses.

Where the structure is wrong in one place, the meaning of everything else is
still looked at, so that all bad fields are named at once: what is broken is
filled with something harmless, and what the sums say about the filling is left
out.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from marshmallow import ValidationError

from app.chemistry.calibration import Standard
from app.chemistry.recipe import Recipe
from app.chemistry.repeatability import Repeatability
from app.chemistry.run import Exclusion, Policy, Run, SampleTubes, Spike, Verification, run_problems
from app.errors import Fields, InputError, flatten
from app.verbs.chemistry_schemas import CalculateInput, RecipeInput

_SCHEMA = CalculateInput()
_RECIPE_KEYS = len(RecipeInput().fields)
_HARMLESS_RECIPE = Recipe(2.5, 1.5, 3.5, 10.216, 33.3, 10.12, 600.0)
_HARMLESS_STANDARDS = tuple(Standard(float(cod), (0.0,)) for cod in range(5))
_REFUSAL = "This run cannot be calculated."

Data = Mapping[str, Any]


def load_run(value: Any) -> Run:
    """Return the run that a decoded JSON value describes.

    The sums check a run whose structure is sound when they calculate it.

    Raises
    ------
    InputError
        Naming every bad field, in structure and in meaning.
    """
    try:
        data, broken = _SCHEMA.load(value), {}
    except ValidationError as error:
        data = error.valid_data if isinstance(error.valid_data, dict) else {}
        broken = flatten(error.messages)
    wrong: Fields = {}
    run = _run(data, wrong)
    if broken or wrong:
        meaning = {**run_problems(run), **wrong}
        raise InputError(_REFUSAL, broken | {k: v for k, v in meaning.items() if not _hidden(k, broken)})
    return run


def _hidden(path: str, broken: Fields) -> bool:
    """Tell whether a path lies at, in or around something broken, or speaks of what could not be read."""
    if ".excluded" in path and f"{path.partition('.excluded')[0]}.absorbance" in broken:
        return True
    if path.startswith(("duplicates.", "spikes.")) and any(
        name == "tubes" or (name.startswith("tubes.") and name.count(".") == 1) or name.endswith(".sample")
        for name in broken
    ):
        return True
    return any(path == name or path.startswith(f"{name}.") or name.startswith(f"{path}.") for name in broken)


def _run(data: Data, wrong: Fields) -> Run:
    calibration = data.get("calibration") or {}
    low, high = data.get("working_range") or (0.0, 1.0)
    return Run(
        _recipe(data.get("recipe") or {}, wrong),
        standards_from(calibration["standards"]) if "standards" in calibration else _HARMLESS_STANDARDS,
        calibration.get("model", "linear"),
        calibration.get("standards_relative_u", 0.0),
        (low, high),
        data.get("blanks"),
        tuple(_tubes(i, tubes) for i, tubes in enumerate(data.get("tubes", ()))),
        tuple(_verification(v) for v in data.get("verifications", ())),
        data.get("duplicates", ()),
        tuple(_spike(s) for s in data.get("spikes", ())),
        _policy(data.get("policy") or {}),
        calibration.get("weights", "equal"),
    )


def standards_from(rows: list[Data]) -> tuple[Standard, ...]:
    """Return standards from validated rows."""
    return tuple(Standard(row.get("cod", 0.0), row.get("absorbance", (0.0,))) for row in rows)


def _recipe(data: Data, wrong: Fields) -> Recipe:
    if len(data) < _RECIPE_KEYS:
        return _HARMLESS_RECIPE
    try:
        return Recipe(**data)
    except InputError as error:
        wrong.update({f"recipe.{field}": words for field, words in error.fields.items()})
        return _HARMLESS_RECIPE


def _tubes(index: int, data: Data) -> SampleTubes:
    excluded = data.get("excluded")
    return SampleTubes(
        data.get("sample", f"the sample at place {index}, whose name cannot be read"),
        data.get("absorbance", (0.0,)),
        data.get("dilution_factor", 1.0),
        data.get("dilution_relative_u", 0.0),
        data.get("colour"),
        data.get("remaining_oxidant"),
        tuple(Exclusion(e.get("index", 0), e.get("reason", "?")) for e in excluded) if excluded else (),
    )


def _verification(data: Data) -> Verification:
    return Verification(data.get("expected", 1.0), data.get("absorbance", (0.0,)))


def _spike(data: Data) -> Spike:
    volumes = (data.get(name, 1.0) for name in ("sample_ml", "spike_ml", "spike_mg_l"))
    return Spike(data.get("unspiked", ""), data.get("spiked", ""), *volumes)


def _policy(data: Data) -> Policy:
    scatter = data.get("repeatability") or {}
    low, high = data.get("spike_percent") or (0.0, 1.0)
    return Policy(
        Repeatability(scatter.get("a", 0.0), scatter.get("k", 0.0), scatter.get("dof")),
        data.get("bias_relative_u", 0.0),
        data.get("bias_dof"),
        data.get("verification_percent", 1.0),
        data.get("duplicate_rpd_percent", 1.0),
        (low, high),
    )
