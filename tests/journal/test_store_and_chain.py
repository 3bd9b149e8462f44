"""The store keeps what it acknowledged; the chain names the first entry that is not as it was written."""

from __future__ import annotations

import sqlite3
import threading
from collections.abc import Iterator
from pathlib import Path

import pytest

from app.journal import append, chain
from app.journal.entry import parse
from app.journal.store import DiskFull, Store, StoreError
from tests.tools import devices


@pytest.fixture
def store(tmp_path: Path) -> Iterator[Store]:
    made = Store(tmp_path / "store")
    yield made
    made.close()


def fill(store: Store, count: int = 8, device: devices.Device | None = None) -> None:
    """Append some entries."""
    device = device or devices.Device("p")
    with store.write() as connection:
        for i in range(count):
            entry = parse(device.make("lot.made", f"x{i}", {"i": i}).encode())
            append.append(connection, chain.head(connection), entry, "p", "2031-06-01T00:00:00Z", None)


def test_the_journal_refuses_change_and_removal(store: Store) -> None:
    fill(store)
    change = "UPDATE journal SET author = 'x' WHERE position = 2"
    for statement in (change, "DELETE FROM journal WHERE position = 2"):
        with pytest.raises(sqlite3.IntegrityError, match="never changed"), store.write() as connection:
            connection.execute(statement)
    assert chain.first_bad(store.read()) is None


TAMPER = {
    "raw": ("UPDATE journal SET raw = CAST(raw || ' ' AS BLOB) WHERE position = 4", 4),
    "digest": ("UPDATE journal SET digest = digest || '0' WHERE position = 5", 5),
    "raw digest": ("UPDATE journal SET raw_digest = '0' WHERE position = 3", 3),
    "removed": ("DELETE FROM journal WHERE position = 6", 6),
    "first removed": ("DELETE FROM journal WHERE position = 1", 1),
    "moved": ("UPDATE journal SET position = 99 WHERE position = 2", 2),
    "swapped": (
        "UPDATE journal SET raw = (SELECT raw FROM journal WHERE position = 8) WHERE position = 7",
        7,
    ),
}


@pytest.mark.parametrize("name", sorted(TAMPER))
def test_tampering_is_found_at_its_first_place(store: Store, name: str) -> None:
    fill(store)
    statement, position = TAMPER[name]
    with store.write() as connection:
        connection.execute("DROP TRIGGER journal_keeps")
        connection.execute("DROP TRIGGER journal_stays")
        connection.execute(statement)
    assert chain.first_bad(store.read()) == position


def test_a_cut_tail_shows_only_against_an_anchored_head(store: Store) -> None:
    fill(store)
    anchor = chain.head(store.read())
    with store.write() as connection:
        connection.execute("DROP TRIGGER journal_stays")
        connection.execute("DELETE FROM journal WHERE position > 6")
    assert chain.first_bad(store.read()) is None
    assert chain.head(store.read()) != anchor


def test_a_full_disk_takes_nothing_and_reads_go_on(store: Store) -> None:
    """F27."""
    fill(store)
    before = chain.head(store.read())
    with store._lock:
        pages = store._writer.execute("pragma page_count").fetchone()[0]
        store._writer.execute(f"pragma max_page_count = {pages}")
    with pytest.raises(DiskFull) as caught:
        fill(store, 3000, devices.Device("q"))
    assert caught.value.status == 507
    assert "stay on the devices" in caught.value.message
    assert chain.head(store.read()) == before
    with store._lock:
        store._writer.execute("pragma max_page_count = 1073741823")
    fill(store, 3, devices.Device("r"))
    assert chain.head(store.read()).position == before.position + 3


def test_a_store_of_a_newer_weirbook_is_left_alone_with_one_sentence(tmp_path: Path) -> None:
    """F33."""
    store = Store(tmp_path / "s")
    with store.write() as connection:
        connection.execute(
            "INSERT INTO _sqlite_migrations (migration_set, name, applied_at) "
            "VALUES ('weirbook', 'm999_moon', 'now')"
        )
    store.close()
    with pytest.raises(StoreError, match="newer Weirbook"):
        Store(tmp_path / "s")


def test_a_file_that_is_no_store_is_told_in_words(tmp_path: Path) -> None:
    (tmp_path / "s").mkdir()
    (tmp_path / "s" / "weirbook.db").write_bytes(b"not a database at all, but long enough to look" * 50)
    with pytest.raises(StoreError, match="cannot be opened"):
        Store(tmp_path / "s")


def test_an_error_inside_a_write_leaves_nothing(store: Store) -> None:
    with pytest.raises(ZeroDivisionError), store.write() as connection:
        connection.execute("INSERT INTO meta VALUES ('a', 'b')")
        raise ZeroDivisionError
    assert store.read().execute("SELECT count(*) FROM meta WHERE key = 'a'").fetchone() == (0,)


def test_many_writers_wait_for_one_another(store: Store) -> None:
    """F28."""
    failures: list[BaseException] = []

    def work(name: str) -> None:
        try:
            for _ in range(12):
                fill(store, 2, devices.Device(name))
        except BaseException as error:
            failures.append(error)

    threads = [threading.Thread(target=work, args=(f"w{i}",)) for i in range(6)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert failures == []
    assert chain.head(store.read()).position == 6 * 12 * 2
    assert chain.first_bad(store.read()) is None


def test_the_epoch_stays_with_the_store(tmp_path: Path) -> None:
    first = Store(tmp_path / "s")
    epoch = first.epoch
    first.close()
    again = Store(tmp_path / "s")
    assert again.epoch == epoch
    again.close()
    other = Store(tmp_path / "t")
    assert other.epoch != epoch
    other.close()


def test_commits_are_on_the_disk(store: Store) -> None:
    names = ("journal_mode", "synchronous")
    modes = [store._writer.execute(f"pragma {name}").fetchone()[0] for name in names]
    assert modes == ["wal", 2]
