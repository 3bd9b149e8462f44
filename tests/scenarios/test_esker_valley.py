"""The invented programme: told through the one write path, the same at every rebuild, always of today."""

from __future__ import annotations

import csv
import json
import subprocess
import sys
from collections.abc import Iterator
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from app.compliance import codes
from app.forecast.sectors import SECTORS
from app.journal import chain
from app.journal.store import Store, StoreError
from app.records.change import find, get
from app.records.rebuild import rebuild
from app.safety.hazards import FIELD_HAZARDS
from app.scenarios import FOLDER, load

HERE = FOLDER / "esker_valley"
NOW = datetime(2031, 6, 15, 18, 0, tzinfo=UTC)


@pytest.fixture(scope="module")
def example(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Store]:
    store = Store(tmp_path_factory.mktemp("example"))
    load(store, now=NOW)
    yield store
    store.close()


def test_only_the_bottle_that_was_used_twice_is_held(example: Store) -> None:
    held = [body for _, body in find(example.read(), "held")]
    assert [(one["kind"], one["code"]) for one in held] == [("sample.taken", "bottle_in_use")]


def test_no_sum_failed(example: Store) -> None:
    assert find(example.read(), "problem") == []


def test_the_chain_is_whole_and_a_rebuild_gives_the_same_records(example: Store) -> None:
    assert chain.first_bad(example.read()) is None
    done = rebuild(example)
    assert done.entries > 500
    assert done.before == done.after


def test_there_is_something_to_see_in_every_state(example: Store) -> None:
    states = {body["state"] for _, body in find(example.read(), "sample")}
    assert {"taken", "handed over", "in digestion", "result"} <= states
    results = [body for _, body in find(example.read(), "result") if body["source"] == "run"]
    assert {"ok", "over"} <= {one["status"] for one in results}
    assert {verdict["verdict"] for one in results for verdict in one["verdicts"]} >= {"within", "above"}
    received = [body["received"] for _, body in find(example.read(), "bottle") if body["received"]]
    assert "qualified" in {one["decision"] for one in received}


def test_a_study_is_finished_with_its_due_date_and_a_sample_has_chloride_and_nitrite(example: Store) -> None:
    study = get(example.read(), "study", "study-1")
    assert study is not None
    (limit,) = study["limits"]
    assert study["gaps"] == []
    assert 2.5 < limit["mg_l"] < 3.5
    assert datetime.fromisoformat(limit["again_by"]) > datetime(2032, 1, 1)
    assert any(row["run"] and row["mg_l"] is not None for row in study["rows"]), "a blank of a run"
    results = {body["bottle"]: body for _, body in find(example.read(), "result") if body["source"] == "run"}
    told = [one for one in results.values() if one["corrected"]]
    assert [one["name"] for one in told[0]["corrected"]["corrections"]] == ["nitrite"]
    assert told[0]["detection_limit"]["study"] == "study-1"
    assert {letter["letter"] for one in results.values() for letter in one["qualifiers"]} == {"C"}


def test_the_run_in_progress_ends_in_the_future(example: Store) -> None:
    run = get(example.read(), "run", "run-13")
    assert run is not None
    heating = run["heating"]
    ends = datetime.fromisoformat(heating["started_at"]) + timedelta(minutes=heating["minutes"])
    assert run["state"] == "heating"
    assert NOW < ends < NOW + timedelta(hours=1)


def test_every_point_has_two_years_behind_it_and_an_expectation(example: Store) -> None:
    points = find(example.read(), "point")
    assert len(points) == 14
    for id_, _ in points:
        outlook = get(example.read(), "outlook", id_)
        assert outlook is not None
        assert outlook["n"] >= 12
        times = [body["collected_at"] for _, body in find(example.read(), "result", id_)]
        assert datetime.fromisoformat(times[0]) < NOW - timedelta(days=700)
        assert all(datetime.fromisoformat(at) < NOW for at in times)


def test_a_store_that_is_not_empty_is_left_alone(example: Store) -> None:
    head = chain.head(example.read())
    with pytest.raises(StoreError, match="empty store"):
        load(example, now=NOW)
    assert chain.head(example.read()) == head


def test_names_codes_sectors_and_hazards_are_known_and_unique() -> None:
    told = json.loads((HERE / "programme.json").read_text(encoding="utf-8"))
    names = [one["name"] for one in (*told["dischargers"], *told["people"])]
    assert len(names) == len(set(names))
    assert [codes.check(code) for code in told["codes"]] == told["codes"]
    assert {one["sector"] for one in told["dischargers"]} <= set(SECTORS)
    known = {hazard.id for hazard in FIELD_HAZARDS}
    assert {
        id_ for one in told["dischargers"] for point in one["points"] for id_ in point["hazards"]
    } <= known


def test_the_history_has_values_and_bounds() -> None:
    with (HERE / "history.csv").open(encoding="utf-8", newline="") as file:
        signs = {row["cod"][0] for row in csv.DictReader(file)}
    assert {"<", ">"} <= signs


def test_the_files_are_what_their_maker_makes(tmp_path: Path) -> None:
    for name in ("make.py", "fieldwork.py", "laboratory.py", "controls.py", "programme.json"):
        (tmp_path / name).write_bytes((HERE / name).read_bytes())
    subprocess.run([sys.executable, str(tmp_path / "make.py")], check=True)
    for name in ("history.csv", "story.json"):
        assert (tmp_path / name).read_bytes() == (HERE / name).read_bytes()
