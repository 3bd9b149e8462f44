"""Serving, rebuilding and verifying a store from the command line."""

from __future__ import annotations

import socket
import sqlite3
import subprocess
import sys
import threading
from pathlib import Path

import pytest

from app.documents.certificate import render_certificate
from app.documents.data import data_digest
from app.journal import chain
from app.journal.store import Store
from app.records.ledger import Ledger
from app.records.rebuild import rebuild
from app.scenarios import load
from tests.documents.example import BASE_URL, EXAMPLE


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    """Run a verb."""
    command = [sys.executable, "-m", "app", *arguments]
    return subprocess.run(command, capture_output=True, text=True, timeout=60)


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    store = Store(tmp_path / "store")
    load(store)
    store.close()
    return tmp_path / "store"


def test_rebuild_says_that_the_records_are_the_same(folder: Path) -> None:
    done = run("rebuild", "--store", str(folder))
    assert done.returncode == 0, done.stderr
    assert "the same as before" in done.stdout


def test_rebuild_mends_records_that_were_changed_behind_the_journals_back(folder: Path) -> None:
    with sqlite3.connect(folder / "weirbook.db") as connection:
        connection.execute("UPDATE record SET body = '{}' WHERE type = 'point'")
    connection.close()
    assert "different from before" in run("rebuild", "--store", str(folder)).stdout
    assert "the same as before" in run("rebuild", "--store", str(folder)).stdout


def test_verify_names_the_first_bad_entry(folder: Path) -> None:
    good = run("verify", "--store", str(folder))
    assert (good.returncode, "each as it was written" in good.stdout) == (0, True)
    with sqlite3.connect(folder / "weirbook.db") as connection:
        connection.execute("DROP TRIGGER journal_keeps")
        connection.execute("UPDATE journal SET raw = CAST(raw || ' ' AS BLOB) WHERE position IN (40, 41)")
    connection.close()
    bad = run("verify", "--store", str(folder))
    assert bad.returncode == 1
    assert bad.stdout.startswith("Entry 40 is not as it was written")


@pytest.mark.parametrize("verb", ["rebuild", "verify"])
def test_a_folder_without_a_store_is_told_in_one_sentence(tmp_path: Path, verb: str) -> None:
    done = run(verb, "--store", str(tmp_path / "nothing"))
    assert done.returncode == 1
    assert done.stdout == ""
    assert done.stderr.startswith("There is no store in")
    assert not (tmp_path / "nothing").exists()


def test_a_busy_port_is_told_in_one_sentence(tmp_path: Path) -> None:
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        done = run("serve", "--store", str(tmp_path / "s"), "--port", str(port))
    assert done.returncode == 1
    assert f"Port {port} cannot be used" in done.stderr
    assert "Traceback" not in done.stderr
    assert len(done.stderr.strip().splitlines()) == 1


def test_a_folder_that_cannot_be_written_is_told_in_one_sentence(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("x", encoding="utf-8")
    done = run("serve", "--store", str(tmp_path / "file"), "--port", "0")
    assert done.returncode == 1
    assert "cannot be opened" in done.stderr
    assert "Traceback" not in done.stderr


def test_a_backup_made_while_the_store_is_written_is_whole_and_restores(folder: Path, tmp_path: Path) -> None:
    store = Store(folder)
    ledger, stop = Ledger(store), threading.Event()

    def write() -> None:
        while not stop.is_set():
            ledger.state("person.changed", "teague", {"name": "R", "roles": ["inspector"], "active": True})

    writer = threading.Thread(target=write)
    writer.start()
    try:
        made = run("backup", str(tmp_path / "copies" / "one.db"), "--store", str(folder))
    finally:
        stop.set()
        writer.join()
    assert made.returncode == 0, made.stderr
    assert "was verified" in made.stdout
    epoch = store.epoch
    store.close()
    again = run("restore", str(tmp_path / "copies" / "one.db"), "--store", str(tmp_path / "restored"))
    assert again.returncode == 0, again.stderr
    restored = Store(tmp_path / "restored")
    assert restored.epoch != epoch
    assert chain.first_bad(restored.read()) is None
    assert chain.head(restored.read()).position > 500
    done = rebuild(restored)
    assert done.before == done.after
    restored.close()


def test_nothing_is_overwritten_and_a_damaged_copy_is_refused(folder: Path, tmp_path: Path) -> None:
    copy = tmp_path / "copy.db"
    assert run("backup", str(copy), "--store", str(folder)).returncode == 0
    assert "exists already" in run("backup", str(copy), "--store", str(folder)).stderr
    assert "holds a store already" in run("restore", str(copy), "--store", str(folder)).stderr
    assert "no store" in run("backup", str(tmp_path / "x.db"), "--store", str(tmp_path / "nothing")).stderr
    damaged = tmp_path / "damaged.db"
    data = bytearray(copy.read_bytes())
    data[len(data) // 2 : len(data) // 2 + 4000] = b"x" * 4000
    damaged.write_bytes(data)
    refused = run("restore", str(damaged), "--store", str(tmp_path / "new"))
    assert refused.returncode == 1
    assert "no whole copy" in refused.stderr
    assert not (tmp_path / "new" / "weirbook.db").exists()


def test_a_certificate_is_verified_without_a_server(tmp_path: Path) -> None:
    path = tmp_path / "c.pdf"
    path.write_bytes(render_certificate(EXAMPLE, BASE_URL))
    good = run("verify-document", str(path))
    assert good.returncode == 0, good.stderr
    assert f"Certificate {EXAMPLE.number}: {EXAMPLE.result.reported} mg/L" in good.stdout
    assert data_digest(EXAMPLE) in good.stdout
    elsewhere = run("verify-document", str(path), "--base-url", "http://other.example")
    assert elsewhere.returncode == 1
    assert "not what this version makes" in elsewhere.stdout
    path.write_bytes(path.read_bytes() + b"x")
    changed = run("verify-document", str(path))
    assert (changed.returncode, changed.stdout) == (1, "")
    assert "was changed since" in changed.stderr
    assert "cannot be read" in run("verify-document", str(tmp_path / "nothing.pdf")).stderr
