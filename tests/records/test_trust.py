"""The back-test is the server's own entry: made again when enough is new, the same after a rebuild."""

from __future__ import annotations

import json
from typing import Any

from app.journal import chain
from app.records.rebuild import rebuild
from tests.records.conftest import Desk
from tests.tools import devices


def _result(ready: Desk, i: int) -> str:
    body: dict[str, Any] = {"point": "outlet-b", "expanded_u": None, "field": {}, "activity": None}
    body |= {"collected_at": f"2029-{1 + i // 28:02d}-{1 + i % 28:02d}T08:00:00-07:00", "source": "book"}
    return ready.device.make(
        "result.recorded", f"old-{i}", body | {"cod": devices.measured(str(700 + 9 * i), "mg/L")}
    )


def _judged(ready: Desk) -> int:
    return len([1 for row in chain.rows(ready.store.read()) if json.loads(row.raw)["kind"] == "trust.judged"])


def test_trust_is_judged_with_enough_results_and_again_when_a_good_part_is_new(ready: Desk) -> None:
    assert set(ready.held(*[_result(ready, i) for i in range(9)])) == {None}
    assert _judged(ready) == 0
    ready.held(*[_result(ready, i) for i in range(9, 16)])
    assert _judged(ready) == 1
    ready.held(_result(ready, 16))
    assert _judged(ready) == 1
    whole, point = ready.get("trust", "programme"), ready.get("trust", "outlet-b")
    assert whole["forecast"]["n"] == point["forecast"]["n"] == 11
    assert point["forecast"]["right"] == 11
    assert point["words"][0].startswith("Right at the first digestion 11 times of 11")
    ready.held(*[_result(ready, i) for i in range(17, 30)])
    assert _judged(ready) == 2
    done = rebuild(ready.store)
    assert done.before == done.after


def test_other_dilutions_are_judged_anew_with_the_next_result(ready: Desk) -> None:
    ready.held(*[_result(ready, i) for i in range(12)])
    changed = {"settings": {"dilutions": [100.0]}, "reason": "trial"}
    assert ready.held(ready.device.make("settings.changed", "programme", changed)) == [None]
    ready.held(_result(ready, 12))
    assert _judged(ready) == 2
    assert ready.get("trust", "outlet-b")["forecast"]["right"] == 0
