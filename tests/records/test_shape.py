"""Records of another shape are derived again when the store is opened, and devices read all again."""

from __future__ import annotations

from pathlib import Path

from app.records.change import get
from app.records.rebuild import bring_up_to_date, state_name
from app.web.factory import create_app
from tests.records.conftest import Desk
from tests.tools import devices
from tests.tools.devices import CODES


def test_a_store_of_another_shape_is_derived_again(ready: Desk) -> None:
    with ready.store.write() as connection:
        connection.execute("INSERT OR REPLACE INTO meta VALUES ('shape', '0')")
        connection.execute("UPDATE record SET body = '{}' WHERE type = 'calibration'")
    assert bring_up_to_date(ready.store)
    assert ready.get("calibration", "curve")["checks"] == []
    assert not bring_up_to_date(ready.store)


def test_the_server_opens_it_so(ready: Desk, tmp_path: Path) -> None:
    with ready.store.write() as connection:
        connection.execute("DELETE FROM meta WHERE key = 'shape'")
        connection.execute("DELETE FROM record WHERE type = 'calibration'")
    app = create_app(ready.store.folder, fast_passwords=True)
    store = app.extensions["weirbook"].store
    assert get(store.read(), "calibration", "curve") is not None
    assert app.test_client().get("/api/state").get_json()["epoch"] == state_name(store)
    store.close()


def test_a_run_that_was_in_force_stays_so_under_a_later_rule(ready: Desk) -> None:
    """A setting that asks for a second source from now on does not undo the runs before it."""
    d = ready.device
    ready.tell(devices.sample(d, "s", CODES[0]), devices.planned(d, "r", CODES[0]))
    asked = {"settings": {"second_source_required": True}, "reason": "from now on"}
    assert ready.held(d.make("settings.changed", "programme", asked)) == [None]
    assert ready.held(devices.planned(d, "r2", CODES[0])) == ["wrong_plan"]
    with ready.store.write() as connection:
        connection.execute("DELETE FROM meta WHERE key = 'shape'")
    bring_up_to_date(ready.store)
    assert ready.get("run", "r")["state"] == "planned"
