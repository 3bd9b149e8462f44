"""Every screen: axe finds nothing, targets are large enough, nothing scrolls sideways, in every theme."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest
from playwright.sync_api import BrowserContext, Page

from tests.browser import chromium, told
from tests.browser.server import Server
from tests.browser.watch import Axe
from tests.tools.devices import CODES, Device, beside, study

RESULT = f"/review/result/run-1%3A{CODES[0]}"
SCREENS = (
    "/field",
    "/field/point/outlet-b",
    "/field/point/outlet-b/take",
    "/field/point/outlet-b/arrive",
    "/field/point/outlet-b/sampler",
    "/field/rounds",
    "/field/round/new",
    "/field/round/round-1",
    "/field/visit/visit-1",
    "/field/split/sample-1",
    "/field/meters",
    "/field/samples",
    "/field/hand-over",
    "/bench",
    "/bench/receive",
    "/bench/stores",
    "/bench/stores/recipe",
    "/bench/recipe/high",
    "/bench/waste",
    "/bench/instrument/block",
    "/bench/curve/curve",
    "/bench/stores/calibration",
    "/bench/plan",
    "/bench/run/run-1",
    "/bench/charts",
    "/bench/charts/ver:high:photometer",
    "/bench/measure",
    f"/bench/measure/{CODES[0]}",
    "/bench/studies",
    "/bench/studies/new",
    "/bench/study/study-1",
    "/review",
    "/review/point/outlet-b",
    "/review/point/outlet-b/limit",
    RESULT,
    "/review/register",
    "/review/people",
    "/review/devices",
    "/review/held",
    "/review/trust",
    "/review/trust/outlet-b",
    "/settings",
    "/waiting",
    "/emergency",
)

SMALL_TARGETS = """() => [...document.querySelectorAll('button, a.button, input, select, textarea')]
  .filter((e) => e.offsetParent !== null && e.type !== 'checkbox')
  .map((e) => [e.textContent.trim().slice(0, 30) || e.id, e.getBoundingClientRect()])
  .filter(([, r]) => r.height < LEAST - 0.5 || r.width < LEAST - 0.5)
  .map(([words, r]) => `${words}: ${Math.round(r.width)} x ${Math.round(r.height)}`)"""


def _signed_in(context: BrowserContext) -> Page:
    bench = Device(told.tell_everything(context))
    texts = [*study(bench), beside(bench, CODES[0], chloride="6000", nitrite="12")]
    assert {one["result"] for one in told.push(context.request, texts)} == {"stored"}
    page = context.new_page()
    page.goto("/field")
    page.get_by_text("Hollin Vale Creamery").first.wait_for()
    return page


def _settled(page: Page, path: str) -> None:
    page.evaluate(
        "(path) => { history.pushState(null, '', path); dispatchEvent(new Event('weirbook-moved')); }", path
    )
    page.locator("h1:visible").first.wait_for()
    page.wait_for_timeout(120)  # drafts and words come from the device's store


@pytest.mark.parametrize(
    ("size", "scheme"), [(chromium.PHONE, "light"), (chromium.PHONE, "dark"), (chromium.DESK, "light")]
)
def test_axe_finds_nothing_on_any_screen(
    server: Server,
    context_factory: Callable[..., BrowserContext],
    axe: Axe,
    size: dict[str, Any],
    scheme: str,
) -> None:
    page = _signed_in(context_factory(**size, base_url=server.url, color_scheme=scheme))
    found = {}
    for path in SCREENS:
        _settled(page, path)
        if faults := axe(page):
            found[path] = faults
    assert found == {}


@pytest.mark.parametrize(("gloves", "least"), [(False, 48), (True, 56)])
def test_every_target_is_large_enough_and_nothing_scrolls_sideways(
    server: Server, context_factory: Callable[..., BrowserContext], gloves: bool, least: int
) -> None:
    page = _signed_in(context_factory(**chromium.PHONE, base_url=server.url))
    if gloves:
        _settled(page, "/settings")
        page.get_by_label("Gloves").check()
    found = {}
    for path in SCREENS:
        _settled(page, path)
        small = page.evaluate(SMALL_TARGETS.replace("LEAST", str(least)))
        wide = page.evaluate("() => document.documentElement.scrollWidth > innerWidth + 1")
        if small or wide:
            found[path] = [*small, *(["scrolls sideways"] if wide else [])]
    assert found == {}


def test_sunlight_is_black_on_white(
    server: Server, context_factory: Callable[..., BrowserContext], axe: Axe
) -> None:
    page = _signed_in(context_factory(**chromium.PHONE, base_url=server.url))
    _settled(page, "/settings")
    page.get_by_role("radio", name="Sunlight").click()
    _settled(page, "/field/point/outlet-b")
    colours = page.evaluate(
        "() => [document.documentElement, document.body].map((e) => getComputedStyle(e))"
        ".map((style, i) => (i ? style.color : style.backgroundColor))"
    )
    assert colours == ["rgb(255, 255, 255)", "rgb(0, 0, 0)"]
    assert axe(page) == []
