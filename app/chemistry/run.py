"""One run as it stands on the bench: recipe, standards, tubes, checks, policy.

These dataclasses are what a person or a screen states. :func:`run_problems`
says everything that is wrong with them at once, under the paths of the JSON
that the command line takes (``tubes.3.absorbance``).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from app.chemistry.calibration import SMALLEST, Standard, standard_problems
from app.chemistry.curve import Model, Weights
from app.chemistry.problems import Problems
from app.chemistry.recipe import Recipe
from app.chemistry.repeatability import Repeatability
from app.chemistry.replicates import MOST_TUBES
from app.errors import Fields

Colour = Literal["orange", "olive", "green"]
MOST_DILUTION = 1e6
MOST_REMAINING = 1.5


@dataclass(frozen=True)
class Exclusion:
    """A tube that a person set aside, with the cause.

    Parameters
    ----------
    index : int
        Of the tube, from 0.
    reason : str
        The assignable cause.
    """

    index: int
    reason: str


@dataclass(frozen=True)
class SampleTubes:
    """The tubes of one sample.

    Parameters
    ----------
    sample : str
        Its name in this run.
    absorbance : tuple of float
        One reading a tube, in AU, before the blank is subtracted.
    dilution_factor : float
        What multiplies the COD in the tube; 1 for an undiluted sample.
    dilution_relative_u : float
        Relative standard uncertainty of that factor.
    colour : {"orange", "olive", "green"}, optional
        After digestion, the furthest gone of its tubes.
    remaining_oxidant : float, optional
        Share of the blank's dichromate still there at 440 nm.
    excluded : tuple of Exclusion
        Tubes that a person set aside.
    """

    sample: str
    absorbance: tuple[float, ...]
    dilution_factor: float = 1.0
    dilution_relative_u: float = 0.0
    colour: Colour | None = None
    remaining_oxidant: float | None = None
    excluded: tuple[Exclusion, ...] = ()

    @property
    def kept(self) -> tuple[int, ...]:
        """Indices of the tubes that no person set aside."""
        if not self.excluded:
            return tuple(range(len(self.absorbance)))
        gone = {exclusion.index for exclusion in self.excluded}
        return tuple(i for i in range(len(self.absorbance)) if i not in gone)


@dataclass(frozen=True)
class Verification:
    """A standard of known COD digested as a check.

    Parameters
    ----------
    expected : float
        mg/L.
    absorbance : tuple of float
        Its readings, before the blank is subtracted.
    """

    expected: float
    absorbance: tuple[float, ...]


@dataclass(frozen=True)
class Spike:
    """A sample measured with and without an addition.

    Parameters
    ----------
    unspiked, spiked : str
        Names of the two samples.
    sample_ml, spike_ml : float
        Volumes brought together.
    spike_mg_l : float
        COD of what was added.
    """

    unspiked: str
    spiked: str
    sample_ml: float
    spike_ml: float
    spike_mg_l: float


@dataclass(frozen=True)
class Policy:
    """What the programme asks of a run.

    Parameters
    ----------
    repeatability : Repeatability
        The laboratory's own scatter between tubes.
    bias_relative_u : float
        Relative standard uncertainty of bias.
    bias_dof : float or None
        Its degrees of freedom; None is infinite.
    verification_percent, duplicate_rpd_percent : float
        Largest deviation of a verification from 100 %, and largest relative
        percent difference of duplicates.
    spike_percent : tuple of float
        Lowest and highest spike recovery.
    """

    repeatability: Repeatability
    bias_relative_u: float
    bias_dof: float | None
    verification_percent: float
    duplicate_rpd_percent: float
    spike_percent: tuple[float, float]


@dataclass(frozen=True)
class Run:
    """One digestion with everything that its results depend on.

    Parameters
    ----------
    recipe : Recipe
        The chemistry.
    standards : tuple of Standard
        Of the calibration in force, blank-corrected.
    model : {"linear", "quadratic"}
        Of its curve.
    standards_relative_u : float
        Relative standard uncertainty of the standards' COD.
    working_range : tuple of float
        Lower and upper end, mg/L in the tube.
    blanks : tuple of float or None
        Digested blanks; None when the instrument was zeroed on the blank.
    tubes : tuple of SampleTubes
        One entry a sample.
    verifications, duplicates, spikes : tuple
        The checks; duplicates are pairs of sample names.
    policy : Policy
        What is asked.
    weights : {"equal", "inverse", "inverse_square"}
        Of the standards.
    """

    recipe: Recipe
    standards: tuple[Standard, ...]
    model: Model
    standards_relative_u: float
    working_range: tuple[float, float]
    blanks: tuple[float, ...] | None
    tubes: tuple[SampleTubes, ...]
    verifications: tuple[Verification, ...]
    duplicates: tuple[tuple[str, str], ...]
    spikes: tuple[Spike, ...]
    policy: Policy
    weights: Weights = "equal"


def run_problems(run: Run) -> Fields:
    """Return everything that is wrong with a run, by field.

    Parameters
    ----------
    run : Run
        As stated.

    Returns
    -------
    dict of str to list of str
        Empty when the run can be calculated.
    """
    wrong = Problems()
    wrong.fields.update(standard_problems(run.standards, "calibration."))
    wrong.number("calibration.standards_relative_u", run.standards_relative_u, least=0, most=1)
    wrong.number("working_range", run.working_range[0], least=0)
    wrong.number("working_range", run.working_range[1], above=0)
    if run.working_range[0] >= run.working_range[1]:
        wrong.add("working_range", "the lower end must lie below the upper end")
    if run.blanks is not None:
        wrong.readings("blanks", run.blanks)
    for i, tubes in enumerate(run.tubes):
        _tube_problems(wrong, f"tubes.{i}", tubes)
    for i, verification in enumerate(run.verifications):
        wrong.number(f"verifications.{i}.expected", verification.expected, least=SMALLEST)
        wrong.readings(f"verifications.{i}.absorbance", verification.absorbance)
    name_problems(wrong, [tubes.sample for tubes in run.tubes], run.duplicates, run.spikes)
    for i, spike in enumerate(run.spikes):
        for name in ("sample_ml", "spike_ml", "spike_mg_l"):
            wrong.number(f"spikes.{i}.{name}", getattr(spike, name), least=SMALLEST)
    _policy_problems(wrong, run.policy)
    return wrong.fields


def _tube_problems(wrong: Problems, path: str, tubes: SampleTubes) -> None:
    wrong.readings(f"{path}.absorbance", tubes.absorbance)
    wrong.number(f"{path}.dilution_factor", tubes.dilution_factor, least=1, most=MOST_DILUTION)
    wrong.number(f"{path}.dilution_relative_u", tubes.dilution_relative_u, least=0, most=1)
    if tubes.remaining_oxidant is not None:
        wrong.number(f"{path}.remaining_oxidant", tubes.remaining_oxidant, least=0, most=MOST_REMAINING)
    seen: set[int] = set()
    for j, exclusion in enumerate(tubes.excluded):
        if tubes.absorbance and not 0 <= exclusion.index < len(tubes.absorbance):
            wrong.add(f"{path}.excluded.{j}.index", f"there is no tube {exclusion.index} in this sample")
        elif exclusion.index in seen:
            wrong.add(f"{path}.excluded.{j}.index", "this tube is excluded twice")
        seen.add(exclusion.index)
        if not exclusion.reason.strip():
            wrong.add(f"{path}.excluded.{j}.reason", "a tube is excluded only with its cause")
    left = len(tubes.kept)
    if tubes.absorbance and not left:
        wrong.add(f"{path}.excluded", "every tube of this sample is excluded: nothing is left to report")
    if left > MOST_TUBES:
        wrong.add(f"{path}.absorbance", f"more than {MOST_TUBES} tubes of one sample cannot be screened")


def name_problems(
    wrong: Problems,
    names: Sequence[str],
    duplicates: Sequence[tuple[str, str]],
    spikes: Sequence[Spike],
) -> None:
    """Note sample names that are empty, used twice, or unknown where a check names them.

    Parameters
    ----------
    wrong : Problems
        Where to note them.
    names : sequence of str
        Of the samples, in order.
    duplicates : sequence of pairs of str
        Pairs of samples.
    spikes : sequence of Spike
        Their samples.
    """
    known: set[str] = set()
    for i, name in enumerate(names):
        if not name.strip():
            wrong.add(f"tubes.{i}.sample", "a sample needs a name")
        elif name in known:
            wrong.add(f"tubes.{i}.sample", f"the name '{name}' is used twice in this run")
        known.add(name)
    for i, pair in enumerate(duplicates):
        for name in dict.fromkeys(pair):
            if name not in known:
                wrong.add(f"duplicates.{i}", f"no sample of this run is called '{name}'")
        if pair[0] == pair[1]:
            wrong.add(f"duplicates.{i}", "a sample is no duplicate of itself")
    for i, spike in enumerate(spikes):
        for field in ("unspiked", "spiked"):
            name = getattr(spike, field)
            if name not in known:
                wrong.add(f"spikes.{i}.{field}", f"no sample of this run is called '{name}'")
        if spike.unspiked == spike.spiked:
            wrong.add(f"spikes.{i}.spiked", "the spiked and the unspiked sample are the same")


def _policy_problems(wrong: Problems, policy: Policy) -> None:
    repeatability = policy.repeatability
    wrong.number("policy.repeatability.a", repeatability.a, least=0)
    wrong.number("policy.repeatability.k", repeatability.k, least=0, most=1)
    if repeatability.dof is not None:
        wrong.number("policy.repeatability.dof", repeatability.dof, least=1)
    wrong.number("policy.bias_relative_u", policy.bias_relative_u, least=0, most=1)
    if policy.bias_dof is not None:
        wrong.number("policy.bias_dof", policy.bias_dof, least=1)
    wrong.number("policy.verification_percent", policy.verification_percent, above=0)
    wrong.number("policy.duplicate_rpd_percent", policy.duplicate_rpd_percent, above=0)
    for end in policy.spike_percent:
        wrong.number("policy.spike_percent", end, least=0)
    if policy.spike_percent[0] >= policy.spike_percent[1]:
        wrong.add("policy.spike_percent", "the lowest recovery must lie below the highest")
