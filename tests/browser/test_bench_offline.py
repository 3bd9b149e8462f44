"""The bench goes on without the server, from receipt to the last reading; the result comes afterwards."""

from __future__ import annotations

from collections.abc import Callable

from playwright.sync_api import BrowserContext, expect

from tests.browser import chromium, told
from tests.browser.server import Server
from tests.browser.test_offline import PATIENT_MS, open_field
from tests.browser.test_whole_path import CODE, close, digest, plan, read, receive
from tests.tools import devices


def test_a_run_is_done_with_the_server_dead(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    context = context_factory(**chromium.PHONE, base_url=server.url, timezone_id="America/Denver")
    person = told.set_up(context)
    told.push(context.request, [devices.sample(devices.Device(person), "sample-1", CODE)])
    page = context.new_page()
    open_field(page)
    page.goto("/bench")
    expect(page.get_by_text(CODE)).to_be_visible(timeout=PATIENT_MS)
    server.kill()

    page.goto("/emergency")
    expect(page.get_by_role("heading", name="In the eyes or on the skin")).to_be_visible()
    receive(page)
    plan(page)
    digest(page)
    read(page)
    expect(page.get_by_text("Calculated when the server is reached")).to_be_visible()
    expect(page.get_by_text("on this tablet only")).to_be_visible()
    server.start()
    page.reload()
    close(page)
    expect(page.get_by_text("on this tablet only")).to_have_count(0, timeout=PATIENT_MS)
