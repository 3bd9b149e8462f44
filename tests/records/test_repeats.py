"""After a tube that missed, the server states the next dilution beside the result, from all that is known."""

from __future__ import annotations

from typing import Any

from tests.records.conftest import Desk
from tests.tools import devices

CODE = devices.CODES[0]
OVER = ("0.011", "0.010", "0,012", "0.2015", "0.395", "0.396", "0.394")
BELOW = ("0.011", "0.010", "0,012", "0.2015", "0.012", "0.013", "0.012")


def _past(ready: Desk, cod: int, count: int = 20) -> None:
    texts = []
    for i in range(count):
        body: dict[str, Any] = {"point": "outlet-b", "expanded_u": None, "field": {}, "activity": None}
        body |= {
            "collected_at": f"2030-{1 + i // 2:02d}-{1 + 14 * (i % 2):02d}T08:00:00-07:00",
            "source": "book",
        }
        body["cod"] = devices.measured(str(round(cod * (0.8 + 0.4 * (i % 3) / 2))), "mg/L")
        texts.append(ready.device.make("result.recorded", f"old-{i}", body))
    assert set(ready.held(*texts)) == {None}


def _digest(ready: Desk, factor: float, readings: tuple[str, ...]) -> dict[str, Any]:
    d = ready.device
    given = [devices.sample(d, "sample-1", CODE), devices.received(d, CODE)]
    given += [devices.planned(d, "run-1", CODE, 5), *devices.heated(d, "run-1")]
    assert set(ready.held(*given, *devices.read(d, "run-1", readings))) == {None}
    return ready.get("result", f"run-1:{CODE}")


def test_over_range_the_next_dilution_comes_from_the_past_and_the_tube(ready: Desk) -> None:
    """Usually 9,000 mg/L; at 1:5 more than 4,500: 1:20 sees 400 to 18,000."""
    _past(ready, 9000)
    result = _digest(ready, 5, OVER)
    assert result["status"] == "over"
    following = result["next_dilution"]
    assert following["from"] == "forecast"
    assert 10 < following["dilution_factor"] <= 50
    assert following["p_in_range"] > 0.9
    assert following["steps"]
    assert "fall in range" in following["why"]


def test_below_range_the_next_dilution_is_a_smaller_one(ready: Desk) -> None:
    _past(ready, 300)
    result = _digest(ready, 20, BELOW)
    assert result["status"] == "below"
    assert result["next_dilution"]["from"] == "forecast"
    assert result["next_dilution"]["dilution_factor"] < 20


def test_a_point_without_a_past_rests_on_its_sector_and_the_tube(ready: Desk) -> None:
    following = _digest(ready, 5, OVER)["next_dilution"]
    assert following["from"] == "forecast"
    assert following["dilution_factor"] > 5


def test_a_good_result_has_no_next_dilution(ready: Desk) -> None:
    assert _digest(ready, 5, devices.READINGS)["next_dilution"] is None


def test_a_bottle_whose_sample_is_not_known_has_what_the_tube_alone_says(ready: Desk) -> None:
    d = ready.device
    given = [
        devices.received(d, CODE),
        devices.planned(d, "run-1", CODE, 5),
        *devices.heated(d, "run-1"),
    ]
    assert set(ready.held(*given, *devices.read(d, "run-1", OVER))) == {None}
    result = ready.get("result", f"run-1:{CODE}")
    following = result["next_dilution"]
    assert following["from"] == "tube"
    assert following["dilution_factor"] == result["advice"]["dilution_factor"] > 5
