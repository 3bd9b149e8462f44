"""The gates of a run: what must be confirmed, and what only reminds.

A gate stops the work until a person has confirmed it; the tool has no way round
it. A reminder never stops anything. Which is which follows common practice
around closed-reflux digestion (heat of mixing, pressure in a closed tube at 150
degrees C, mercury in every tube). The order in which sample and reagents go into a tube is a
field of the recipe version, because texts differ, and is shown from there.

Texts carry placeholders in braces that are filled from the run; the offline
client fills the same ones.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from datetime import UTC, datetime, timedelta
from typing import Literal

from app.errors import InputError
from app.safety.hazards import DEFERRAL

Stage = Literal["before tubes", "before heating", "before reading", "before closing"]
Asks = Literal["yes", "temperature", "container"]

ROUNDING = 1e-9


@dataclass(frozen=True)
class Gate:
    """One gate of a run.

    Parameters
    ----------
    id : str
        Stable name; entries refer to it.
    stage : str
        The step that it stops.
    title : str
        Two to four words.
    question : str
        What the person confirms, true as written.
    caution : str
        The hazard and the usual precaution.
    asks : {"yes", "temperature", "container"}
        What is given with the confirmation.
    """

    id: str
    stage: Stage
    title: str
    question: str
    caution: str
    asks: Asks = "yes"


@dataclass(frozen=True)
class Reminder:
    """A line that reminds and never stops.

    Parameters
    ----------
    id : str
        Stable name.
    stage : str
        When it is shown.
    words : str
        The reminder.
    """

    id: str
    stage: Stage
    words: str


GATES: tuple[Gate, ...] = (
    Gate(
        "hood_on",
        "before tubes",
        "Hood on",
        "The hood is on, its sash is down as far as the work allows and it draws.",
        "Acid, chromium(VI) and mercury: open tubes and reagents stay in the hood.",
    ),
    Gate(
        "chloride_within_limit",
        "before tubes",
        "Chloride within the limit",
        "In every tube the chloride after dilution is at or under this recipe's {chloride_limit} mg/L.",
        "Chloride beyond what the mercury binds is oxidised: the result is high and chlorine may form.",
    ),
    Gate(
        "order_of_addition",
        "before tubes",
        "Order of addition",
        "Each tube was filled in this recipe's order: {order}.",
        "Mixing makes great heat. Acid into water, never water into concentrated acid; slowly, in the hood, "
        "behind a shield; mix only when all tubes are capped.",
    ),
    Gate(
        "caps_tight",
        "before heating",
        "Caps tight, tubes sound",
        "Every cap is tight, every tube is dry outside and without stars or cracks.",
        "At {temperature} degrees C the tubes are under pressure. A loose cap loses sample; a scratched "
        "tube may burst.",
    ),
    Gate(
        "block_at_temperature",
        "before heating",
        "Block at temperature",
        "An independent probe in a dummy tube reads {temperature} degrees C, within {tolerance}.",
        "The block's own display is no check: too cold digests too little, too hot raises the pressure.",
        "temperature",
    ),
    Gate(
        "cooling_done",
        "before reading",
        "Cooled",
        "The tubes have cooled for at least {cooling_minutes} minutes and are under {cool_to} degrees C.",
        "A hot tube is under pressure: never open it, never tighten its cap. Hot glass also reads wrong.",
    ),
    Gate(
        "waste_container",
        "before closing",
        "Waste container",
        "The waste container is chosen, in use, not full, and holds only acid COD digest.",
        "Bases, cyanide, sulfide, metals or organics in it can react. Nothing goes down the drain.",
        "container",
    ),
)

REMINDERS: tuple[Reminder, ...] = (
    Reminder(
        "protection",
        "before tubes",
        "Splash goggles and face shield, long acid gloves, apron, closed shoes.",
    ),
    Reminder("eyewash", "before tubes", "Eyewash and shower are near and free."),
    Reminder(
        "spill_kit", "before tubes", "The spill kit is at hand: absorbent, mercury powder, tongs, bags."
    ),
    Reminder("data_sheet", "before tubes", "The safety data sheet of the very lot is open or printed."),
    Reminder("local_rules", "before tubes", DEFERRAL),
    Reminder("burst", "before heating", "If a tube bursts, stay away from the hood until it has vented."),
    Reminder("hands", "before closing", "Gloves off without touching their outside; wash hands."),
)


@dataclass(frozen=True)
class RunFacts:
    """What fills the texts and is held against the confirmations of one run.

    Parameters
    ----------
    chloride_limit_mg_l : float
        Of the recipe, in the tube's sample (0 without mercury).
    order : tuple of str
        The recipe version's order of addition.
    temperature_c, tolerance_c : float
        Digestion temperature and how far the probe may be from it.
    cooling_minutes, cool_to_c : float
        Least cooling and the temperature to be under (common practice: 20
        minutes in the block, then a rack, under about 60 degrees C).
    """

    chloride_limit_mg_l: float
    order: tuple[str, ...]
    temperature_c: float = 150.0
    tolerance_c: float = 2.0
    cooling_minutes: float = 20.0
    cool_to_c: float = 60.0


def _short(value: float) -> str:
    return f"{value:g}"


def _filled(gate: Gate, facts: RunFacts) -> Gate:
    words = {
        "{chloride_limit}": f"{facts.chloride_limit_mg_l:.0f}",
        "{order}": ", then ".join(facts.order),
        "{temperature}": _short(facts.temperature_c),
        "{tolerance}": _short(facts.tolerance_c),
        "{cooling_minutes}": _short(facts.cooling_minutes),
        "{cool_to}": _short(facts.cool_to_c),
    }
    question, caution = gate.question, gate.caution
    for mark, text in words.items():
        question, caution = question.replace(mark, text), caution.replace(mark, text)
    return replace(gate, question=question, caution=caution)


def run_gates(facts: RunFacts) -> tuple[Gate, ...]:
    """Return the gates of a run in their order, with its own numbers in the words.

    Parameters
    ----------
    facts : RunFacts
        Of the run's recipe and settings.

    Returns
    -------
    tuple of Gate

    Raises
    ------
    InputError
        If the recipe states no order of addition.
    """
    if not facts.order:
        raise InputError(
            "The recipe does not state its order of addition.",
            {"order": ["state what goes into the tube first, second and third"]},
        )
    return tuple(_filled(gate, facts) for gate in GATES)


@dataclass(frozen=True)
class Confirmation:
    """What a person stated at a gate.

    Parameters
    ----------
    gate : str
        Id of the gate.
    value : float, optional
        The probe's reading in degrees C where the gate asks for one.
    container : str, optional
        The container where the gate asks for one.
    """

    gate: str
    value: float | None = None
    container: str | None = None


@dataclass(frozen=True)
class Open:
    """A gate that still stops the work, and why.

    Parameters
    ----------
    gate : Gate
        The gate.
    why : str
        What is missing, in words.
    """

    gate: Gate
    why: str


def _objection(gate: Gate, said: Confirmation | None, facts: RunFacts) -> str:
    if said is None:
        return "not confirmed yet"
    if gate.asks == "temperature":
        if said.value is None:
            return "the probe's reading is missing"
        if not abs(said.value - facts.temperature_c) <= facts.tolerance_c + ROUNDING:
            return (
                f"the probe reads {_short(said.value)} degrees C, not {_short(facts.temperature_c)} "
                f"within {_short(facts.tolerance_c)}"
            )
    if gate.asks == "container" and not said.container:
        return "no container was chosen"
    return ""


def missing(
    gates: Iterable[Gate], confirmed: Mapping[str, Confirmation], facts: RunFacts, stage: Stage | None = None
) -> list[Open]:
    """Return the gates that still stop the work.

    Parameters
    ----------
    gates : iterable of Gate
        From :func:`run_gates`.
    confirmed : mapping of str to Confirmation
        The latest confirmation of each gate by its id.
    facts : RunFacts
        Of the run.
    stage : str, optional
        Only the gates of this stage and of those before it.

    Returns
    -------
    list of Open
        In the order of the gates; empty when the work may go on.
    """
    stages: tuple[Stage, ...] = ("before tubes", "before heating", "before reading", "before closing")
    until = len(stages) if stage is None else stages.index(stage)
    found = []
    for gate in gates:
        why = _objection(gate, confirmed.get(gate.id), facts)
        if why and stages.index(gate.stage) <= until:
            found.append(Open(gate, why))
    return found


def ready_to_read(heating_ended: datetime, facts: RunFacts) -> datetime:
    """Return the first moment at which tubes may be opened or read.

    Parameters
    ----------
    heating_ended : datetime.datetime
        Aware.
    facts : RunFacts
        Of the run.

    Returns
    -------
    datetime.datetime
        Aware.
    """
    if heating_ended.utcoffset() is None:
        raise InputError("A time without an offset is ambiguous.", {"heating_ended": ["needs an offset"]})
    ready = heating_ended.astimezone(UTC) + timedelta(minutes=facts.cooling_minutes)
    return ready.astimezone(heating_ended.tzinfo)
