"""The words of safety as plain data, the same for server, paper and offline client."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from app.safety.gas import ALARMS, NO_ENTRY
from app.safety.gates import GATES, REMINDERS, RunFacts
from app.safety.hazards import AGENTS, DEFERRAL, EMERGENCY, FIELD_HAZARDS, STATEMENTS

DEFAULTS = RunFacts(chloride_limit_mg_l=0.0, order=())


def client_pack(emergency_number: str = "", poison_number: str = "") -> dict[str, Any]:
    """Return gates, reminders, hazards and emergency lines as JSON-ready dicts.

    Parameters
    ----------
    emergency_number, poison_number : str
        The programme's numbers; without them the lines ask for the local ones.

    Returns
    -------
    dict
        ``gates`` and ``reminders`` in their order, ``agents`` with their
        statements written out, ``field`` hazards, ``emergency`` lines, ``gas``
        set points, the ``defaults`` that fill the placeholders, and the
        ``deferral`` that is shown with all of it.
    """
    numbers = {
        "{emergency_number}": emergency_number or "the one posted at your site",
        "{poison_number}": poison_number or "the one posted at your site",
    }
    return {
        "deferral": DEFERRAL,
        "no_entry": NO_ENTRY,
        "gates": [asdict(gate) for gate in GATES],
        "reminders": [asdict(reminder) for reminder in REMINDERS],
        "agents": [
            {
                **asdict(agent),
                "statements": [{"code": code, "words": STATEMENTS[code]} for code in agent.statements],
                "cautions": list(agent.cautions),
            }
            for agent in AGENTS
        ],
        "field": [asdict(hazard) for hazard in FIELD_HAZARDS],
        "emergency": [
            {"id": line.id, "title": line.title, "lines": [_filled(words, numbers) for words in line.lines]}
            for line in EMERGENCY
        ],
        "gas": asdict(ALARMS),
        "defaults": {
            "temperature": DEFAULTS.temperature_c,
            "tolerance": DEFAULTS.tolerance_c,
            "cooling_minutes": DEFAULTS.cooling_minutes,
            "cool_to": DEFAULTS.cool_to_c,
        },
    }


def _filled(words: str, numbers: dict[str, str]) -> str:
    for mark, number in numbers.items():
        words = words.replace(mark, number)
    return words
