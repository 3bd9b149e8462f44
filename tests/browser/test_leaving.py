"""Signing out with unsent entries, and what a tablet's file brings back."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

from playwright.sync_api import BrowserContext, expect

from tests.browser import chromium, tablet
from tests.browser.server import Server


def test_unsent_entries_are_discarded_only_with_a_file_and_a_typed_word(
    server: Server, context_factory: Callable[..., BrowserContext], tmp_path: Path
) -> None:
    """F61: signing out is refused; discarding takes a file and a typed word; the file comes back as held."""
    context = context_factory(**chromium.PHONE, base_url=server.url)
    page = context.new_page()
    tablet.begin(page, server.url)
    tablet.settled(page)
    context.route("**/api/push", lambda route: route.abort())
    point = tablet.register_point(page)
    made = [row["text"] for row in tablet.outbox(page)]
    page.goto("/settings")
    page.get_by_role("button", name="Sign out", exact=True).click()
    expect(
        page.get_by_text("3 entries are on this tablet only. Send them before you sign out")
    ).to_be_visible()
    page.get_by_text("Discard them and sign out").click()
    discard = page.get_by_role("button", name="3. Discard and sign out")
    page.get_by_label("2. Type DISCARD 3").fill("DISCARD 3")
    discard.click()
    expect(page.get_by_text("First save the entries as a file.")).to_be_visible()
    with page.expect_download() as saved:
        page.get_by_role("button", name="1. Save the entries as a file").click()
    saved.value.save_as(tmp_path / "tablet.json")
    page.get_by_label("2. Type DISCARD 3").fill("discard")
    discard.click()
    expect(page.get_by_text("Type DISCARD 3 exactly.")).to_be_visible()
    assert [row["text"] for row in tablet.outbox(page)] == made
    page.get_by_label("2. Type DISCARD 3").fill("DISCARD 3")
    discard.click()
    expect(page.get_by_role("heading", name="Sign in")).to_be_visible()
    assert tablet.outbox(page) == []
    assert json.loads((tmp_path / "tablet.json").read_text("utf-8"))["entries"] == made

    context.unroute("**/api/push")
    tablet.sign_in(page, server.url)
    page.goto("/review/held")
    page.get_by_text("Take in a tablet's file").click()
    page.get_by_label("File of a tablet").set_input_files(tmp_path / "tablet.json")
    page.get_by_role("button", name="Take it in").click()
    expect(page.get_by_text("3 taken in and held; 0 were here already.")).to_be_visible()
    for kind in ("Discharger registered", "Point registered"):
        card = page.locator("section", has=page.get_by_role("heading", name=f"{kind}, held"))
        card.get_by_label("Reason").fill("the tablet broke")
        card.get_by_role("button", name="Bring it into force").click()
        expect(page.get_by_role("heading", name=f"{kind}, admitted")).to_be_visible(timeout=15000)
    page.goto(f"/field/point/{point}")
    expect(page.get_by_role("heading", name="Hollin Vale Creamery")).to_be_visible()
