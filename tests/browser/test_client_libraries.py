"""The five vendored modules load as they are, under the app's strictest script policy, and work together."""

from __future__ import annotations

import pytest
from playwright.sync_api import Page, Route, expect

from app.vendoring.modules import VENDOR
from tests.browser.watch import Watch

ORIGIN = "http://localhost:1"
HTML = "<!doctype html><html lang=en><title>t</title><script type=module src=/use.js></script></html>"
USE = """
import { html, render } from "./vendor/htm-preact.js";
import { useState } from "./vendor/hooks.js";
import { openDB } from "./vendor/idb.js";
const db = await openDB("try", 1, { upgrade(db) { db.createObjectStore("rows"); } });
await db.put("rows", 40, "start");
const start = await db.get("rows", "start");
function Counter() {
  const [n, set] = useState(start);
  return html`<button onClick=${() => set(n + 1)}>${n}</button>`;
}
render(html`<${Counter} />`, document.body);
"""


def answer(route: Route) -> None:
    """Stand for a server that gives the page, its script and the vendored files, and nothing else."""
    path = route.request.url.removeprefix(ORIGIN)
    headers = {"Content-Security-Policy": "default-src 'none'; script-src 'self'; img-src 'self'"}
    if path == "/":
        route.fulfill(body=HTML, headers=headers | {"Content-Type": "text/html"})
    elif path == "/use.js":
        route.fulfill(body=USE, headers={"Content-Type": "text/javascript"})
    elif path.startswith("/vendor/") and (VENDOR / path[8:]).is_file():
        route.fulfill(
            body=(VENDOR / path[8:]).read_text("utf-8"), headers={"Content-Type": "text/javascript"}
        )
    else:
        route.fulfill(status=404, body="")


def test_state_markup_and_database_work_together(page: Page, watch: Watch) -> None:
    if not VENDOR.is_dir():
        pytest.fail("static/vendor is missing: run `make install`.", pytrace=False)
    page.route(f"{ORIGIN}/**", answer)
    page.goto(f"{ORIGIN}/")
    button = page.get_by_role("button")
    expect(button).to_have_text("40")
    button.click()
    button.click()
    expect(button).to_have_text("42")
    assert watch.faults == []
