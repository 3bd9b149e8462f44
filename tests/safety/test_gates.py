"""Gates stop until a person has confirmed; reminders never do; the words are one set for all."""

import json
from datetime import datetime, timedelta
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.errors import InputError
from app.safety import client_pack
from app.safety.gas import ALARMS, AlarmPoints, GasReading, gas_alarms, gas_gate
from app.safety.gates import (
    GATES,
    REMINDERS,
    Confirmation,
    RunFacts,
    missing,
    ready_to_read,
    run_gates,
)
from app.safety.hazards import AGENTS, DEFERRAL, EMERGENCY, FIELD_HAZARDS, STATEMENTS

FACTS = RunFacts(chloride_limit_mg_l=1998, order=("sample", "digestion solution", "acid reagent, slowly"))
ALL = {
    gate.id: Confirmation(
        gate.id,
        value=150.0 if gate.asks == "temperature" else None,
        container="12" if gate.asks == "container" else None,
    )
    for gate in GATES
}
CLEAR = GasReading(20.9, 0.0, 0.0, 0.0)


def test_the_gates_of_a_run_in_their_order():
    """Hood, chloride, order, caps, block, cooling, waste: the order of the work."""
    assert [gate.id for gate in run_gates(FACTS)] == [
        "hood_on",
        "chloride_within_limit",
        "order_of_addition",
        "caps_tight",
        "block_at_temperature",
        "cooling_done",
        "waste_container",
    ]


def test_a_runs_own_numbers_stand_in_the_words():
    """No placeholder is left, and the order comes from the recipe."""
    gates = {gate.id: gate for gate in run_gates(FACTS)}
    assert all("{" not in gate.question + gate.caution for gate in gates.values())
    assert "1998 mg/L" in gates["chloride_within_limit"].question
    assert "sample, then digestion solution, then acid reagent, slowly" in gates["order_of_addition"].question
    assert "150 degrees C, within 2" in gates["block_at_temperature"].question


def test_a_recipe_without_an_order_has_no_gates():
    """The order is never taken from code."""
    with pytest.raises(InputError):
        run_gates(RunFacts(chloride_limit_mg_l=0, order=()))


@given(st.sets(st.sampled_from(sorted(ALL))))
def test_exactly_the_unconfirmed_gates_are_missing(confirmed):
    """Whatever was confirmed, the rest still stops the work, in order."""
    left = missing(run_gates(FACTS), {k: ALL[k] for k in confirmed}, FACTS)
    assert [item.gate.id for item in left] == [gate.id for gate in GATES if gate.id not in confirmed]


def test_a_stage_asks_for_its_own_gates_and_those_before():
    """Heating cannot start without the hood; it does not ask for the waste container yet."""
    asked = [item.gate.id for item in missing(run_gates(FACTS), {}, FACTS, "before heating")]
    assert asked == [gate.id for gate in GATES[:5]]
    assert missing(run_gates(FACTS), ALL, FACTS) == []


@pytest.mark.parametrize(
    ("reading", "stops"),
    [
        (150.0, False),
        (148.0, False),
        (152.0, False),
        (147.9, True),
        (152.1, True),
        (None, True),
        (float("nan"), True),
    ],
)
def test_the_block_needs_a_probe_within_its_tolerance(reading, stops):
    """150 +/- 2 degrees C (Standard Methods 5220 D, from memory; a setting)."""
    said = {**ALL, "block_at_temperature": Confirmation("block_at_temperature", value=reading)}
    assert [m.gate.id for m in missing(run_gates(FACTS), said, FACTS)] == (
        ["block_at_temperature"] if stops else []
    )


def test_a_wider_tolerance_is_a_setting():
    """5 degrees for a programme that has said so."""
    wide = RunFacts(1998, ("sample", "acid"), tolerance_c=5)
    said = {**ALL, "block_at_temperature": Confirmation("block_at_temperature", value=146)}
    assert missing(run_gates(wide), said, wide) == []


def test_a_container_must_be_named():
    """A bare yes is not a container."""
    said = {**ALL, "waste_container": Confirmation("waste_container")}
    assert [m.why for m in missing(run_gates(FACTS), said, FACTS)] == ["no container was chosen"]


def test_cooling_is_elapsed_time():
    """20 minutes after the end of heating; a time without an offset is refused."""
    end = datetime(2031, 5, 14, 12, 45, tzinfo=ZoneInfo("America/Chicago"))
    assert ready_to_read(end, FACTS) == end + timedelta(minutes=20)
    with pytest.raises(InputError):
        ready_to_read(datetime(2031, 5, 14, 12, 45), FACTS)


def test_cooling_over_a_clock_change_is_not_shortened():
    """Heating that ends 10 minutes before the spring change may be read 20 real minutes later."""
    end = datetime(2031, 3, 9, 1, 50, tzinfo=ZoneInfo("America/Chicago"))
    assert ready_to_read(end, FACTS).timestamp() - end.timestamp() == 20 * 60


@pytest.mark.parametrize(
    ("reading", "blocks"),
    [
        (CLEAR, False),
        (GasReading(19.5, 9.9, 9.9, 34.9), False),
        (GasReading(19.4, 0, 0, 0), True),
        (GasReading(23.6, 0, 0, 0), True),
        (GasReading(20.9, 10, 0, 0), True),
        (GasReading(20.9, 0, 10, 0), True),
        (GasReading(20.9, 0, 0, 35), True),
        (GasReading(None, 0, 0, 0), True),
        (GasReading(20.9, 0, None, 0), True),
    ],
)
def test_alarm_points_of_a_manhole(reading, blocks):
    """29 CFR 1910.146 appendix E: O2 under 19.5 %, LEL 10 %, H2S 10 ppm, CO 35 ppm; not measured blocks."""
    assert bool(gas_alarms(reading)) == blocks
    assert gas_gate([reading]).blocked == blocks
    assert "cannot permit entry" in gas_gate([reading]).words


def test_after_an_alarm_a_new_reading_and_a_person_are_needed():
    """Neither alone opens the gate."""
    alarm = GasReading(20.9, 0, 14, 0)
    assert gas_gate([]).blocked
    assert gas_gate([alarm], "person-1").blocked
    assert gas_gate([alarm, CLEAR]).blocked
    assert not gas_gate([alarm, CLEAR], "person-1").blocked
    assert gas_gate([CLEAR, alarm], "person-1").blocked


def test_alarms_come_in_the_order_of_testing():
    """Oxygen, combustible, toxic (29 CFR 1910.146(c)(5)(ii)(C))."""
    words = gas_alarms(GasReading(15, 50, 100, 200))
    assert [w.split()[0] for w in words] == ["oxygen", "combustible", "hydrogen", "carbon"]


@given(st.floats(0, 30), st.floats(0, 100), st.floats(0, 500), st.floats(0, 500), st.floats(0, 1))
def test_a_stricter_programme_never_blocks_less(oxygen, lel, h2s, co, share):
    """Lower set points keep every alarm."""
    reading = GasReading(oxygen, lel, h2s, co)
    strict = AlarmPoints(lel_percent=10 * share, h2s_ppm=10 * share, co_ppm=35 * share)
    assert len(gas_alarms(reading, strict)) >= len(gas_alarms(reading, ALARMS))


def test_ids_are_unique_and_stable_words():
    """Entries in the journal refer to them for ever."""
    for group in (GATES, REMINDERS, AGENTS, FIELD_HAZARDS, EMERGENCY):
        ids = [item.id for item in group]
        assert len(set(ids)) == len(ids)
        assert all(i == i.lower() and " " not in i for i in ids)


def test_every_statement_is_written_out_and_used():
    """No code without words, no words without an agent."""
    used = {code for agent in AGENTS for code in agent.statements}
    assert used == set(STATEMENTS)


def test_the_pack_is_json_and_the_same_words():
    """The client gets what the server shows, placeholders named, the deferral with it."""
    pack = json.loads(json.dumps(client_pack()))
    assert [g["question"] for g in pack["gates"]] == [g.question for g in GATES]
    assert [r["words"] for r in pack["reminders"]] == [r.words for r in REMINDERS]
    assert pack["deferral"] == DEFERRAL
    assert {"safety data sheet", "local codes", "licensed practice"} <= {
        w for w in ("safety data sheet", "local codes", "licensed practice") if w in pack["deferral"]
    }
    assert all("{" not in line for item in pack["emergency"] for line in item["lines"])


def test_a_programmes_numbers_stand_in_the_emergency_lines():
    """And without them the site's own are pointed to."""
    own = json.dumps(client_pack("112", "555-0100")["emergency"])
    assert "112" in own and "555-0100" in own
    assert "posted at your site" in json.dumps(client_pack()["emergency"])


def test_nothing_claims_to_permit_or_to_replace():
    """Cautions defer; none says that something is safe or allowed."""
    text = json.dumps(client_pack()).lower()
    assert "cannot permit entry" in text
    for claim in ("is safe to", "you are allowed", "guarantee", "certified safe"):
        assert claim not in text
