"""The tablet: expected range, plans, split and what a reading would add, in a browser four times slowed."""

from __future__ import annotations

import statistics
import threading
from collections.abc import Iterator
from functools import partial
from http.server import SimpleHTTPRequestHandler, ThreadingHTTPServer
from pathlib import Path
from typing import Any

from playwright.sync_api import Page, sync_playwright

from app.forecast import Programme, posterior
from tests.bench.measure import Measure
from tests.bench.measure_forecast import history
from tests.browser import chromium

STATIC = Path(__file__).resolve().parents[2] / "static"
SLOWED, POINTS = 4, 60
TIMES = """async ({ packs, ranges, dilutions }) => {
  const { expected } = await import("/parts/forecast.js");
  const { plan, worthMeasuring } = await import("/parts/planning.js");
  const once = (pack) => {
    const began = performance.now();
    const now = { days: 20800, field: { ph: 7.3 }, activity: "production" };
    const predictive = expected(pack, now);
    const made = plan(predictive, ranges, dilutions, { chloride: 900, volume_ml: 250, decision_limit: 1500 });
    [0.05, 0.5, 0.95].forEach((p) => predictive.quantile(p));
    worthMeasuring(pack, now, made, ranges);
    return performance.now() - began;
  };
  return packs.map((pack) => [once(pack), once(pack), once(pack)].sort((a, b) => a - b)[1]);
}"""


class _Quiet(SimpleHTTPRequestHandler):
    """Serves files and says nothing."""

    def log_message(self, *_: Any) -> None:
        """Keep the table clean."""


def _given() -> dict[str, Any]:
    ranges = [
        {"name": "high", "low": 50, "high": 900, "chloride_limit": 1998, "reporting": 50, "mercury_mg": 33.8},
        {"name": "low", "low": 10, "high": 150, "chloride_limit": 1998, "reporting": 10, "mercury_mg": 33.8},
    ]
    packs = [
        posterior(Programme.default(), "dairy", history(200.0 + 50 * i)).to_json() for i in range(POINTS)
    ]
    return {"packs": packs, "ranges": ranges, "dilutions": [1, 2, 4, 5, 10, 20, 25, 50, 100]}


def _times(page: Page, url: str) -> list[float]:
    """Return the milliseconds of each point's plan, the middle of three."""
    page.goto(f"{url}/units.json")
    session = page.context.new_cdp_session(page)
    session.send("Emulation.setCPUThrottlingRate", {"rate": SLOWED})
    found: list[float] = page.evaluate(TIMES, _given())
    return found


def measures() -> Iterator[Measure]:
    """Time the plans of many points one after the other; without a Chromium say that none was."""
    browser = chromium.find()
    if browser is None:
        print("no Chromium: the tablet's plans were not timed")
        return
    server = ThreadingHTTPServer(("localhost", 0), partial(_Quiet, directory=str(STATIC)))
    threading.Thread(target=server.serve_forever, daemon=True).start()
    try:
        with sync_playwright() as play:
            page = play.chromium.launch(executable_path=browser, args=chromium.FLAGS).new_page()
            times = _times(page, f"http://localhost:{server.server_address[1]}")
    finally:
        server.shutdown()
    middle = statistics.median(times)
    yield Measure(f"tablet at {SLOWED}x: a plan, median of {POINTS}", middle, 10, "ms", more_is_better=False)
    late = sorted(times)[int(0.9 * POINTS)]
    yield Measure(f"tablet at {SLOWED}x: a plan, 9 in 10 of {POINTS}", late, 10, "ms", more_is_better=False)
