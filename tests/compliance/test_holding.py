"""Receipt: nothing is overwritten in silence, the worst finding decides, and each has its words."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.compliance.holding import Preservation, elapsed_hours, hold_until
from app.compliance.receipt import DECISIONS, Receipt, receive
from app.errors import InputError

COLLECTED = datetime(2031, 5, 14, 8, 15, tzinfo=timezone(timedelta(hours=-5)))
GOOD = Receipt(COLLECTED + timedelta(hours=7), COLLECTED, temperature_c=4.0, ph=1.6)


def test_a_bottle_as_it_should_be_is_accepted_without_a_word():
    """Cold, acid, sealed, sound, in time."""
    found = receive(GOOD)
    assert (found.decision, found.findings, found.qualifiers) == ("accepted", (), "")
    assert found.hold_until == COLLECTED + timedelta(days=28)


@pytest.mark.parametrize(
    ("change", "decision", "check", "letter"),
    [
        ({"temperature_c": 6.0}, "accepted", None, ""),
        ({"temperature_c": 6.4}, "qualified", "temperature", "T"),
        ({"temperature_c": 15.0, "on_ice": True}, "accepted", "temperature", ""),
        ({"temperature_c": 0.0}, "qualified", "temperature", "T"),
        ({"frozen": True}, "qualified", "temperature", "T"),
        ({"temperature_c": None, "missing_reason": "thermometer broken"}, "qualified", "temperature", "T"),
        ({"ph": 2.0}, "qualified", "acidity", "P"),
        ({"ph": None, "missing_reason": "no strips left"}, "qualified", "acidity", "P"),
        ({"ph": None, "acid_added": False}, "qualified", "acidity", "P"),
        ({"ph": 7.0, "received_at": COLLECTED + timedelta(minutes=14)}, "accepted", "acidity", ""),
        ({"container": "wrong"}, "qualified", "container", "C"),
        ({"container": "leaking"}, "rejected", "container", "C"),
        ({"enough_volume": False}, "rejected", "container", "C"),
        ({"label_agrees": False}, "on hold", "identity", "K"),
        ({"label_agrees": False, "identity_proven": False}, "rejected", "identity", "K"),
        ({"seal": "broken"}, "rejected", "seal", "K"),
        ({"seal": "none"}, "accepted", None, ""),
        ({"in_scope": False}, "on hold", "scope", ""),
        ({"received_at": COLLECTED + timedelta(days=28, seconds=1)}, "rejected", "holding", "H"),
        ({"received_at": COLLECTED + timedelta(days=28)}, "accepted", None, ""),
    ],
)
def test_each_check_at_receipt(change, decision, check, letter):
    """The receipt checks: common practice around 40 CFR 136.3 Table II; 6.4 C is not rounded to 6."""
    found = receive(replace(GOOD, **change))
    assert found.decision == decision
    assert [f.check for f in found.findings] == ([check] if check else [])
    assert found.qualifiers == letter
    assert found.compliance_needs_decision == (decision != "accepted")
    assert all(reason.endswith(".") for reason in found.reasons)


def test_the_worst_finding_decides_and_all_are_kept():
    """Three findings, three sentences."""
    found = receive(replace(GOOD, temperature_c=9.0, label_agrees=False, ph=3.0))
    assert found.decision == "on hold"
    assert len(found.reasons) == 3
    assert found.qualifiers == "KPT"


def test_insufficient_acid_may_be_set_to_reject():
    """The programme's own rule is stricter."""
    assert receive(replace(GOOD, ph=3.0), Preservation(acidity="rejected")).decision == "rejected"


def test_cooling_on_ice_excuses_only_the_day_of_collection():
    """Two days on ice should have been enough."""
    late = replace(GOOD, temperature_c=9.0, on_ice=True, received_at=COLLECTED + timedelta(days=2))
    assert receive(late).decision == "qualified"


def test_a_bottle_is_not_received_without_temperature_and_ph():
    """Unless a reason is given; both fields are named at once."""
    with pytest.raises(InputError) as caught:
        receive(replace(GOOD, temperature_c=None, ph=None))
    assert set(caught.value.fields) == {"temperature_c", "ph"}


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"received_at": datetime(2031, 5, 14, 15)}, "received_at"),
        ({"received_at": COLLECTED - timedelta(minutes=1)}, "received_at"),
        ({"ph": 20.0}, "ph"),
        ({"temperature_c": 400.0}, "temperature_c"),
    ],
)
def test_what_cannot_be_is_refused(change, field):
    """A time without an offset, a receipt before collection, a pH and a temperature that do not exist."""
    with pytest.raises(InputError) as caught:
        receive(replace(GOOD, **change))
    assert field in caught.value.fields


@given(
    temperature=st.floats(-20, 40),
    ph=st.floats(0, 14),
    seal=st.sampled_from(["intact", "broken", "none"]),
    container=st.sampled_from(["sound", "leaking", "wrong"]),
    agrees=st.booleans(),
    hours=st.floats(0, 2000),
)
def test_the_decision_is_the_worst_finding(temperature, ph, seal, container, agrees, hours):
    """Whatever arrives: a decision, never an error, and exactly as bad as its worst finding."""
    found = receive(
        Receipt(COLLECTED + timedelta(hours=hours), COLLECTED, temperature, ph, seal, container, agrees)
    )
    worst = max((DECISIONS.index(f.decision) for f in found.findings), default=0)
    assert found.decision == DECISIONS[worst]
    assert len(found.reasons) == len(found.findings)


@given(st.datetimes(datetime(2020, 1, 1), datetime(2040, 1, 1)), st.integers(-720, 720))
def test_holding_does_not_depend_on_how_the_time_is_written(moment, offset):
    """The same instant with another offset gives the same deadline."""
    here = moment.replace(tzinfo=UTC)
    there = here.astimezone(timezone(timedelta(minutes=offset)))
    assert hold_until(here) == hold_until(there)


def test_time_runs_forward():
    """Collection cannot end before it starts."""
    with pytest.raises(InputError):
        elapsed_hours(COLLECTED, COLLECTED - timedelta(seconds=1))
