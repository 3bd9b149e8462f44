"""From the readings of one run to results, each with its uncertainty.

The mean digested blank is subtracted from every tube and verification, once;
standards come blank-corrected, and where the instrument was zeroed on the
blank nothing is subtracted. The curve is the equal-weight fit. Tubes are
screened, their mean (or median) is turned back, and the status is the first
that holds: over, disagree, below, ok.

Over means that the tube was green, that less than a tenth of the oxidant was
left, or that the COD in the tube lies above the lower of the range's top and
0.9 times the capacity: beyond the capacity every sample reads the same. A
reading beyond the turning point of a parabola has no COD; it is over range
where the curve turns above its standards and below where it turns under them.

    u^2 = line^2 + repeatability^2 + dilution^2 + standards^2 + bias^2

in mg/L of the sample. The scatter of the tubes enters once, by the
laboratory's repeatability; the curve's residuals enter by the line only.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from app.chemistry.advice import Advice, NextDilutionRule, Seen, Status, advise, next_dilution_by_rule
from app.chemistry.calibration import fit
from app.chemistry.curve import Curve
from app.chemistry.diagnostics import beyond_standards, slope_findings
from app.chemistry.quality import (
    BlankCheck,
    DuplicateCheck,
    SpikeCheck,
    VerificationCheck,
    blank_check,
    duplicate_check,
    spike_check,
    verification_check,
)
from app.chemistry.recipe import USABLE_SHARE, range_warnings, usable_top
from app.chemistry.replicates import Screening, screen
from app.chemistry.rounding import bound_text, plain, reported_cod, reported_u
from app.chemistry.run import Run, SampleTubes, run_problems
from app.chemistry.uncertainty import Budget, Component, combine
from app.errors import InputError

LEAST_REMAINING = 0.10


@dataclass(frozen=True)
class SetAside:
    """A tube that does not count.

    Parameters
    ----------
    index : int
        Of the tube, from 0.
    by : {"person", "rule"}
        Who set it aside.
    reason : str
        The cause, or the rule.
    """

    index: int
    by: Literal["person", "rule"]
    reason: str


@dataclass(frozen=True)
class Reported:
    """What goes on paper, rounded once.

    Parameters
    ----------
    text : str
        ``"2670"``, ``"< 200"`` or ``"> 9000"``.
    cod : float or None
        The rounded number; None for a bound.
    expanded_u : float or None
        Rounded to two figures; None for a bound.
    expanded_u_text : str
        As printed; empty for a bound.
    """

    text: str
    cod: float | None
    expanded_u: float | None
    expanded_u_text: str


@dataclass(frozen=True)
class SampleResult:
    """The result of one sample.

    Parameters
    ----------
    sample : str
        Its name.
    used : tuple of int
        Tubes that count.
    excluded : tuple of SetAside
        Tubes that do not, and why.
    suspect : int or None
        The tube that stands furthest off when they disagree.
    absorbance : float
        Blank-corrected mean (or median) that was turned back.
    in_tube, cod : float or None
        mg/L in the tube and of the sample; None beyond the turning point.
    budget : Budget or None
        Components and expanded uncertainty, mg/L of the sample.
    status : {"ok", "over", "below", "disagree"}
        The first that holds of over, disagree, below, ok.
    reported : Reported or None
        None when the tubes disagree.
    advice : Advice or None
        None for a result.
    """

    sample: str
    used: tuple[int, ...]
    excluded: tuple[SetAside, ...]
    suspect: int | None
    absorbance: float
    in_tube: float | None
    cod: float | None
    budget: Budget | None
    status: Status
    reported: Reported | None
    advice: Advice | None


@dataclass(frozen=True)
class Checks:
    """The checks of a run.

    Parameters
    ----------
    verifications, duplicates, spikes : tuple
        In the order given.
    blank : BlankCheck or None
        None when the instrument was zeroed on the blank.
    """

    verifications: tuple[VerificationCheck, ...]
    duplicates: tuple[DuplicateCheck, ...]
    spikes: tuple[SpikeCheck, ...]
    blank: BlankCheck | None

    @property
    def ok(self) -> bool:
        """Whether no check failed; one that was not judged does not fail."""
        judged: list[bool | None] = [check.ok for check in self.verifications]
        judged += [check.ok for check in self.duplicates]
        judged += [check.ok for check in self.spikes]
        return False not in judged


@dataclass(frozen=True)
class RunResult:
    """Everything that follows from one run.

    Parameters
    ----------
    samples : tuple of SampleResult
        In the order of the tubes.
    checks : Checks
        Verifications, duplicates, spikes, blank.
    ok : bool
        Whether no check failed.
    curve : Curve
        The calibration used.
    warnings : tuple of str
        Sentences for the analyst about recipe, range and slope.
    """

    samples: tuple[SampleResult, ...]
    checks: Checks
    ok: bool
    curve: Curve
    warnings: tuple[str, ...]


def calculate(run: Run, next_dilution: NextDilutionRule = next_dilution_by_rule) -> RunResult:
    """Calculate one run.

    Parameters
    ----------
    run : Run
        Recipe, standards, tubes, checks and policy.
    next_dilution : callable
        Chooses the next dilution of a sample that is over or below.

    Returns
    -------
    RunResult

    Raises
    ------
    InputError
        With every wrong field; or naming ``calibration.standards`` when the
        curve is hopeless or runs against the colour that is read.
    """
    wrong = run_problems(run)
    if wrong:
        raise InputError("This run cannot be calculated.", wrong)
    curve = fit(run.standards, run.model, run.weights, prefix="calibration.")
    warnings = (*_range_warnings(run, curve), *_slope_warnings(run, curve))
    blank = blank_check(run.blanks)
    bench = _Bench(run, curve, blank.mean if blank else 0.0, usable_top(run.recipe, run.working_range))
    samples = tuple(bench.sample(tubes, next_dilution) for tubes in run.tubes)
    checks = _checks(run, bench, {s.sample: s for s in samples}, blank)
    return RunResult(samples, checks, checks.ok, curve, warnings)


def _slope_warnings(run: Run, curve: Curve) -> list[str]:
    """Return what the slope says of itself, and stop where it has the wrong sign."""
    found = slope_findings(curve, run.recipe)
    stops = [finding.words for finding in found if finding.severity == "stop"]
    if stops:
        raise InputError("The curve runs the wrong way.", {"calibration.standards": stops})
    return [finding.words for finding in found]


def _range_warnings(run: Run, curve: Curve) -> list[str]:
    words = list(range_warnings(run.recipe, run.working_range))
    beyond = beyond_standards(curve, run.working_range)
    return [*words, beyond] if beyond else words


@dataclass(frozen=True)
class _Bench:
    """One run's curve, blank and usable top, ready for sample after sample."""

    run: Run
    curve: Curve
    blank: float
    top: float

    def sample(self, tubes: SampleTubes, rule: NextDilutionRule) -> SampleResult:
        net = [a - self.blank for a in tubes.absorbance]
        screening = screen(net, tubes.kept, self.curve.cod, self.run.policy.repeatability)
        in_tube = self.curve.cod(screening.absorbance)
        exhausted = self._exhausted(tubes, in_tube)
        status = self._status(screening, in_tube, exhausted)
        budget = None if in_tube is None else self._budget(tubes, in_tube, len(screening.used))
        low, factor = self.run.working_range[0], tubes.dilution_factor
        advice = None
        if status != "ok":
            seen = Seen(tubes.sample, status, factor, in_tube, exhausted, low, self.top)
            advice = advise(seen, rule)
        return SampleResult(
            tubes.sample,
            screening.used,
            _set_aside(tubes, screening),
            screening.suspect,
            screening.absorbance,
            in_tube,
            None if in_tube is None else factor * in_tube,
            budget,
            status,
            self._reported(status, factor, in_tube, budget),
            advice,
        )

    def _exhausted(self, tubes: SampleTubes, in_tube: float | None) -> bool:
        """Tell whether the oxidant was used up, or nearly."""
        if tubes.colour == "green":
            return True
        if tubes.remaining_oxidant is not None and tubes.remaining_oxidant < LEAST_REMAINING:
            return True
        if in_tube is None:
            return self.curve.turns_above()
        return in_tube > USABLE_SHARE * self.run.recipe.oxidant_capacity

    def _status(self, screening: Screening, in_tube: float | None, exhausted: bool) -> Status:
        if exhausted or (in_tube is not None and in_tube > self.top):
            return "over"
        if not screening.agree:
            return "disagree"
        if in_tube is None or in_tube < self.run.working_range[0]:
            return "below"
        return "ok"

    def _budget(self, tubes: SampleTubes, x: float, used: int) -> Budget:
        policy, factor = self.run.policy, tubes.dilution_factor
        cod = abs(factor * x)
        scatter = policy.repeatability
        return combine(
            (
                Component("line", factor * self.curve.line_u(x), self.curve.dof),
                Component("repeatability", factor * scatter.sigma(x) / math.sqrt(used), scatter.dof),
                Component("dilution", cod * tubes.dilution_relative_u),
                Component("standards", cod * self.run.standards_relative_u),
                Component("bias", cod * policy.bias_relative_u, policy.bias_dof),
            )
        )

    def _reported(
        self, status: Status, factor: float, in_tube: float | None, budget: Budget | None
    ) -> Reported | None:
        if status == "below":
            return Reported(bound_text("<", self.run.working_range[0], factor), None, None, "")
        if status == "over":
            return Reported(bound_text(">", self.top, factor), None, None, "")
        if status == "disagree" or in_tube is None or budget is None:
            return None
        cod, u = reported_cod(factor * in_tube), reported_u(budget.expanded_u)
        return Reported(plain(cod), float(cod), float(u), plain(u))


def _set_aside(tubes: SampleTubes, screening: Screening) -> tuple[SetAside, ...]:
    found = [SetAside(e.index, "person", e.reason) for e in tubes.excluded]
    if screening.set_aside is not None:
        words = f"Dixon r10 {screening.ratio:.3f} is above the 95 % value and the other tubes agree"
        found.append(SetAside(screening.set_aside, "rule", words))
    return tuple(found)


def _checks(run: Run, bench: _Bench, found: Mapping[str, SampleResult], blank: BlankCheck | None) -> Checks:
    policy, factor = run.policy, {t.sample: t.dilution_factor for t in run.tubes}
    verifications = tuple(
        verification_check(
            v.expected,
            bench.curve.cod(math.fsum(v.absorbance) / len(v.absorbance) - bench.blank),
            policy.verification_percent,
        )
        for v in run.verifications
    )
    duplicates = tuple(
        duplicate_check(
            (a, b),
            found[a].cod,
            found[b].cod,
            run.working_range[0] * max(factor[a], factor[b]),
            policy.duplicate_rpd_percent,
        )
        for a, b in run.duplicates
    )
    spikes = tuple(
        spike_check(
            (s.unspiked, s.spiked),
            (found[s.unspiked].cod, found[s.spiked].cod),
            (s.sample_ml, s.spike_ml),
            s.spike_mg_l,
            policy.spike_percent,
        )
        for s in run.spikes
    )
    return Checks(verifications, duplicates, spikes, blank)
