"""The journal leaves as lines that anybody can walk; a verified backup seals what it holds, and says so."""

from __future__ import annotations

import hashlib
import json
import subprocess
import sys
from pathlib import Path

import pytest

from app.journal.backup import backup, restore, sealed
from app.journal.devices import known_devices
from app.journal.store import Store, StoreError
from app.records.change import find
from app.records.ledger import Ledger
from app.web import backups
from app.web.backups import Backups
from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES


def test_the_exported_lines_are_a_chain_that_anybody_can_walk(ready: Desk, tmp_path: Path) -> None:
    ready.tell("\udce9 not an entry", devices.sample(ready.device, "s", CODES[0]))
    file = tmp_path / "journal.jsonl"
    command = [sys.executable, "-m", "app", "export-journal", "--store", str(ready.store.folder), str(file)]
    assert "entries" in subprocess.run(command, capture_output=True, text=True, check=True).stdout
    rows = [json.loads(line) for line in file.read_text(encoding="utf-8").splitlines()]
    assert [row["position"] for row in rows] == list(range(1, len(rows) + 1))
    previous = "0" * 64
    for row in rows:
        text = row["text"].encode("utf-8", "surrogatepass")
        assert row["digest"] == hashlib.sha256(previous.encode() + text).hexdigest()
        previous = row["digest"]
    assert any(row["held"] for row in rows)
    again = subprocess.run(command, capture_output=True, text=True, check=False)
    assert (again.returncode, "nothing was overwritten" in again.stderr) == (1, True)


def test_a_verified_backup_seals_what_it_holds_and_never_less(ready: Desk, tmp_path: Path) -> None:
    assert sealed(ready.store.read()) == 0
    first = backup(ready.store.folder, tmp_path / "one.db")
    assert sealed(ready.store.read()) == first.position > 0
    ready.tell(devices.sample(ready.device, "s", CODES[0]))
    assert sealed(ready.store.read()) == first.position
    second = backup(ready.store.folder, tmp_path / "two.db")
    assert sealed(ready.store.read()) == second.position > first.position
    restore(tmp_path / "one.db", tmp_path / "again")
    store = Store(tmp_path / "again")
    assert sealed(store.read()) == first.position
    store.close()


def test_a_restored_server_and_its_devices_add_up_to_everything(ready: Desk, tmp_path: Path) -> None:
    """F29: what came after the backup is offered again by the device; the union is whole, nothing doubled."""
    d = ready.device
    sent = [devices.sample(d, f"s{i}", code) for i, code in enumerate(CODES[:6])]
    ready.tell(*sent[:3])
    backup(ready.store.folder, tmp_path / "copy.db")
    ready.tell(*sent[3:])
    restore(tmp_path / "copy.db", tmp_path / "again")
    store = Store(tmp_path / "again")
    assert store.epoch != ready.store.epoch
    answers = Ledger(store).push(sent, "maren", d.id, d.incarnation)
    assert [one.result for one in answers] == ["duplicate"] * 3 + ["stored"] * 3
    assert {id_ for id_, _ in find(store.read(), "sample")} == {f"s{i}" for i in range(6)}
    store.close()


def test_the_server_makes_its_own_backups_and_tells_of_a_failure(ready: Desk, tmp_path: Path) -> None:
    made = Backups(ready.store.folder, tmp_path / "copies", hours=1)
    assert Backups(ready.store.folder).told() is None
    said = made.make()
    assert (said["problem"], said["position"]) == ("", sealed(ready.store.read()))
    assert len(list((tmp_path / "copies").iterdir())) == 1
    (tmp_path / "file").write_text("in the way", encoding="utf-8")
    broken = Backups(ready.store.folder, tmp_path / "file", hours=1)
    assert "The backup failed" in broken.make()["problem"]
    assert broken.told() is not None


def test_a_copy_that_failed_does_not_lie_among_the_good_ones(
    ready: Desk, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def half(_: Path, target: Path) -> None:
        target.parent.mkdir(exist_ok=True)
        target.write_bytes(b"half a copy")
        raise StoreError("no whole copy")

    monkeypatch.setattr(backups, "backup", half)
    said = Backups(ready.store.folder, tmp_path / "copies").make()
    assert (said["position"], said["problem"]) == (None, "The backup failed: no whole copy")
    assert list((tmp_path / "copies").iterdir()) == []
    assert sealed(ready.store.read()) == 0


def test_only_its_own_old_copies_are_removed(ready: Desk, tmp_path: Path) -> None:
    folder = tmp_path / "copies"
    folder.mkdir()
    (folder / "letters.txt").write_text("keep", encoding="utf-8")
    for i in range(35):
        (folder / f"weirbook-20310101-0000{i:02d}-000000.db").write_bytes(b"")
    Backups(ready.store.folder, folder).make()
    names = sorted(path.name for path in folder.iterdir())
    assert "letters.txt" in names
    assert len(names) == 31
    assert "weirbook-20310101-000000-000000.db" not in names


def test_a_device_shows_what_is_missing_doubled_and_broken(ready: Desk) -> None:
    """The list says up to which number entries are expected when some never came."""
    d = ready.device
    before = d.n
    lost = devices.sample(d, "lost", CODES[0])
    follows = devices.sample(d, "s1", CODES[1])
    changed = json.loads(devices.sample(d, "s2", CODES[2]))
    changed["prev"] = "0" * 64
    ready.tell(follows, json.dumps(changed))
    (known,) = [one for one in known_devices(ready.store.read()) if one.device == d.id]
    assert (known.last, known.missing, known.doubled, known.breaks) == (before + 3, 1, 0, 1)
    twin = json.loads(follows) | {"id": "0197b3b2-7c1e-7f60-8a51-2f6d1c0a4e99", "about": "other"}
    ready.tell(json.dumps(twin), lost)
    (known,) = [one for one in known_devices(ready.store.read()) if one.device == d.id]
    assert (known.missing, known.doubled) == (0, 1)
    assert known.carrier == "maren"
