"""The write path: rebuilds are identical, held entries are settled, sums that fail stop nothing."""

from __future__ import annotations

import json
import random
from typing import Any

import pytest

from app import verbs
from app.errors import InputError
from app.journal import chain
from app.journal.kinds import table
from app.records import handlers, laboratory
from app.records.change import find
from app.records.rebuild import rebuild
from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES


def test_every_kind_has_a_handler_and_every_handler_a_kind() -> None:
    assert set(handlers.table()) | {"entry.settled"} == set(table())


def test_a_rebuild_gives_the_same_records_after_a_long_mixed_story(ready: Desk) -> None:
    d = ready.device
    ready.tell(*devices.whole_path("maren")[9:])
    ready.tell(
        "{",
        devices.sample(d, "s2", CODES[0]),
        devices.sample(d, "s3", CODES[3]),
        d.make("moon.landed", "x", {}),
    )
    ready.tell(devices.received(d, CODES[7]), devices.reading(d, "run-1", 3, "0.4"))
    done = rebuild(ready.store)
    assert done.before == done.after
    assert done.entries == chain.head(ready.store.read()).position
    assert chain.first_bad(ready.store.read()) is None


def test_shuffled_entries_leave_a_store_that_rebuilds(ready: Desk) -> None:
    """F41 in part: whatever the order of arrival, nothing is lost and the rebuild agrees."""
    texts = devices.whole_path("maren")[9:]
    random.Random(7).shuffle(texts)
    answers = ready.tell(*texts)
    assert len(answers) == len(texts)
    kept = ready.store.read().execute("SELECT count(*) FROM journal WHERE device != 'server'").fetchone()[0]
    assert kept == len(texts) + 9
    done = rebuild(ready.store)
    assert done.before == done.after


def test_a_run_is_calculated_by_the_verb_on_the_input_that_is_kept(ready: Desk) -> None:
    ready.tell(*devices.whole_path("maren")[9:])
    run = ready.get("run", "run-1")
    assert verbs.find("calculate")(run["input"]) == run["answer"]


def test_what_the_server_states_is_an_entry_with_software_and_digest(ready: Desk) -> None:
    ready.tell(*devices.whole_path("maren")[9:])
    rows = [json.loads(row.raw) for row in chain.rows(ready.store.read())]
    (calculated,) = [one for one in rows if one["kind"] == "run.calculated"]
    assert calculated["by"] == "system"
    assert calculated["body"]["software"].startswith("weirbook ")
    assert calculated["body"]["inputs_digest"] == laboratory.inputs_digest(calculated["body"]["input"])


def test_many_results_of_one_point_make_one_expectation(ready: Desk) -> None:
    d = ready.device

    def made() -> int:
        return len([1 for row in chain.rows(ready.store.read()) if b'"outlook.computed"' in row.raw])

    before = made()
    texts = []
    for i in range(1, 20):
        body: dict[str, Any] = {
            "point": "outlet-b",
            "collected_at": f"2030-01-{i:02d}T08:00:00-07:00",
            "cod": devices.measured("< 100" if i == 7 else f"{900 + 20 * i}", "mg/L"),
            "expanded_u": None,
            "field": {},
            "activity": None,
            "source": "book",
        }
        texts.append(d.make("result.recorded", f"old-{i}", body))
    assert set(ready.held(*texts)) == {None}
    assert made() == before + 1
    outlook = ready.get("outlook", "outlet-b")
    assert outlook["n"] == 19
    assert {one["status"] for one in outlook["recent"]} == {"ok"}


def test_a_sum_that_fails_is_stated_and_stops_nothing(ready: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*_: object) -> None:
        raise InputError(
            "This run cannot be calculated: the curve is hopeless.", {"calibration": ["hopeless"]}
        )

    monkeypatch.setattr(laboratory, "run_input", fail)
    answers = ready.tell(*devices.whole_path("maren")[9:-3])
    assert {answer.result for answer in answers} == {"stored"}
    run = ready.get("run", "run-1")
    assert run["answer"] is None
    assert "hopeless" in run["problem"]["error"]
    monkeypatch.undo()
    assert ready.held(ready.device.make("readings.finished", "run-1", {})) == [None]
    run = ready.get("run", "run-1")
    assert (run["problem"], run["state"]) == (None, "calculated")
    done = rebuild(ready.store)
    assert done.before == done.after


def test_an_unforeseen_failure_of_a_sum_is_told_without_its_inside(
    ready: Desk, monkeypatch: pytest.MonkeyPatch
) -> None:
    def fail(*_: object) -> None:
        raise ZeroDivisionError("inside")

    monkeypatch.setattr(laboratory, "run_input", fail)
    assert {a.result for a in ready.tell(*devices.whole_path("maren")[9:-3])} == {"stored"}
    assert "inside" not in ready.get("run", "run-1")["problem"]["error"]


def test_a_held_entry_is_admitted_or_set_aside_once(ready: Desk) -> None:
    d = ready.device
    early = d.make("result.reviewed", f"run-1:{CODES[0]}", {"decision": "accepted", "reason": ""})
    id_ = json.loads(early)["id"]
    assert ready.held(early) == ["unknown_result"]
    admit = {"decision": "admit", "reason": "the run has arrived"}
    assert ready.held(d.make("entry.settled", id_, admit)) == ["unknown_result"]
    ready.tell(*devices.whole_path("maren")[9:-1])
    assert ready.held(d.make("entry.settled", id_, admit)) == [None]
    assert ready.get("result", f"run-1:{CODES[0]}")["review"]["decision"] == "accepted"
    assert ready.get("held", id_)["state"] == "admitted"
    assert ready.held(d.make("entry.settled", id_, admit)) == ["already_settled"]
    done = rebuild(ready.store)
    assert done.before == done.after


def test_what_cannot_be_read_can_only_be_set_aside(ready: Desk) -> None:
    (answer,) = ready.tell("{")
    d = ready.device
    assert ready.held(
        d.make("entry.settled", answer.id, {"decision": "admit", "reason": "x"}),
        d.make("entry.settled", answer.id, {"decision": "set aside", "reason": "garbled"}),
    ) == ["cannot_admit", None]
    assert ready.get("held", answer.id)["state"] == "set aside"


def test_the_servers_own_entries_are_numbered_and_chained(ready: Desk) -> None:
    ready.tell(*devices.whole_path("maren")[9:])
    own = [json.loads(row.raw) for row in chain.rows(ready.store.read()) if row.device == "server"]
    assert [one["n"] for one in own] == list(range(1, len(own) + 1))


def test_a_refused_statement_of_the_server_leaves_nothing(ready: Desk) -> None:
    head = chain.head(ready.store.read())
    with pytest.raises(InputError):
        ready.ledger.state("person.changed", "nobody", {"name": "N", "roles": [], "active": True})
    assert chain.head(ready.store.read()) == head
    assert find(ready.store.read(), "held") == []


def test_what_points_have_in_common_is_learnt_when_many_results_are_new(ready: Desk) -> None:
    d = ready.device

    def tell(first: int, last: int) -> int:
        texts = []
        for i in range(first, last):
            body: dict[str, Any] = {"point": "outlet-b", "expanded_u": None, "field": {}, "activity": None}
            body |= {
                "collected_at": f"2029-{1 + i // 28:02d}-{1 + i % 28:02d}T08:00:00-07:00",
                "source": "book",
            }
            body["cod"] = devices.measured(f"{700 + 9 * i}", "mg/L")
            texts.append(d.make("result.recorded", f"old-{i}", body))
        assert set(ready.held(*texts)) == {None}
        return len([1 for row in chain.rows(ready.store.read()) if b'"programme.learned"' in row.raw])

    assert tell(0, 9) == 0
    assert tell(9, 12) == 1
    assert tell(12, 14) == 1
    assert tell(14, 40) == 2
    assert ready.get("learned", "programme")["n"] == 40
    done = rebuild(ready.store)
    assert done.before == done.after
