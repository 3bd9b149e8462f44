"""A tablet that is a copy, or was put back to an earlier state, goes on under another name."""

from __future__ import annotations

import json
import shutil
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, tablet
from tests.browser.server import ROOT, Server

_META = """async (given) => {
  const { begin } = await import("/static/parts/db.js");
  const tx = await begin("meta", given ? "readwrite" : "readonly");
  if (given) for (const row of given) await tx.store.put(row);
  const found = await Promise.all(["device", "last"].map((key) => tx.store.get(key)));
  await tx.done;
  return found;
}"""


def _meta(page: Page, put: list[dict[str, Any]] | None = None) -> list[dict[str, Any]]:
    found: list[dict[str, Any]] = page.evaluate(_META, put)
    return found


def _firm(page: Page, name: str) -> None:
    tablet.state_all(page, [("discharger.registered", "d", {"name": name, "sector": None, "address": ""})])


def _rows(page: Page) -> list[tuple[int, str, str]]:
    rows = tablet.outbox(page)
    return [
        (json.loads(row["text"])["n"], json.loads(row["text"])["incarnation"], row["state"]) for row in rows
    ]


def _firms(context: BrowserContext) -> set[str]:
    state = context.request.get("/api/state").json()
    pulled = context.request.get(f"/api/pull?epoch={state['epoch']}&after=0&limit=2000").json()
    return {one["body"]["name"] for one in pulled["records"] if one["type"] == "discharger"}


def test_a_store_put_back_to_an_earlier_state_takes_another_name(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F48: its numbers were used already; it begins with 1 under a new incarnation, and nothing is held."""
    context = context_factory(**chromium.PHONE, base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    _firm(page, "First Firm")
    tablet.settled(page)
    earlier = _meta(page)
    _firm(page, "Second Firm")
    tablet.settled(page)
    page.evaluate(
        """async (n) => {
      const { begin } = await import("/static/parts/db.js");
      const tx = await begin("outbox", "readwrite");
      await tx.store.delete(n);
      await tx.done;
    }""",
        len(tablet.outbox(page)),
    )
    _meta(page, earlier)
    page.reload()
    tablet.settled(page)
    until = time.monotonic() + 15
    while "before" not in _meta(page)[0] and time.monotonic() < until:
        page.wait_for_timeout(100)
    _firm(page, "Third Firm")
    tablet.settled(page)
    n, incarnation, state = _rows(page)[-1]
    assert (n, state) == (1, "server")
    assert incarnation != earlier[0]["incarnation"]
    assert _firms(context) == {"First Firm", "Second Firm", "Third Firm"}


def test_of_two_copies_both_streams_are_kept_and_one_takes_another_name(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F47: the same number with different content is held, the copy is told, and its next entry is taken."""
    first = context_factory(**chromium.PHONE, base_url=server.url)
    page = first.new_page()
    tablet.begin(page, server.url)
    _firm(page, "First Firm")
    tablet.settled(page)
    second = context_factory(**chromium.PHONE, base_url=server.url)
    copy = second.new_page()
    tablet.sign_in(copy, server.url)
    tablet.settled(copy)
    second.set_offline(True)
    _meta(copy, _meta(page))
    _firm(page, "Of the First")
    tablet.settled(page)
    _firm(copy, "Of the Copy")
    second.set_offline(False)
    copy.goto("/waiting")
    expect(copy.get_by_text("it may be a copy of another device")).to_be_visible(timeout=20000)
    _firm(copy, "Afterwards")
    expect(copy.get_by_role("listitem").filter(has_text="Afterwards")).to_contain_text(
        "on the server", timeout=20000
    )
    assert _rows(copy)[-1][0] == 1
    assert _firms(first) == {"First Firm", "Of the First", "Afterwards"}


def _care(*command: str) -> None:
    subprocess.run([sys.executable, "-m", "app", *command], check=True, capture_output=True, cwd=ROOT)


def test_after_a_restore_entries_of_every_name_of_a_tablet_are_offered_again(
    server: Server, context_factory: Callable[..., BrowserContext], tmp_path: Path
) -> None:
    """A position that was given twice, before and after the restore, never passes for the same entry."""
    context = context_factory(**chromium.PHONE, base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    tablet.settled(page)
    _care("backup", "--store", str(server.store), str(tmp_path / "copy.db"))
    _firm(page, "After the Copy")
    tablet.settled(page)
    device, last = _meta(page)
    renamed = device | {"incarnation": "another-name", "before": [device["incarnation"]]}
    _meta(page, [renamed, last | {"n": 0, "row": last.get("row", last["n"]), "digest": None}])
    context.set_offline(True)
    server.kill()
    shutil.rmtree(server.store)
    _care("restore", "--store", str(server.store), str(tmp_path / "copy.db"))
    server.start()
    other = context_factory(**chromium.PHONE, base_url=server.url).new_page()
    tablet.sign_in(other, server.url)
    for i in range(3):
        _firm(other, f"Of the Other {i}")
    tablet.settled(other)
    _care("backup", "--store", str(server.store), str(tmp_path / "later.db"))
    assert "After the Copy" not in _firms(other.context)
    context.set_offline(False)
    page.goto("/waiting")
    until = time.monotonic() + 25
    while "After the Copy" not in _firms(context) and time.monotonic() < until:
        page.wait_for_timeout(200)
    assert "After the Copy" in _firms(context)
