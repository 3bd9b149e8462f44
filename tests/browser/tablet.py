"""What the tests of the client share: starting a programme, registering points, asking the device's store."""

from __future__ import annotations

from typing import Any

from playwright.sync_api import Page, expect

PERSON = {"name": "Mara Lindqvist", "sign_in": "mara", "password": "correct horse battery"}
PROGRAMME = {"name": "Ridge Valley", "laboratory": "Ridge Valley laboratory", "zone": "America/Chicago"}

_STATE_ALL = """async (made) => {
  const { newId, stateAll } = await import("/static/parts/journal.js");
  const ids = {};
  const about = (name) => (ids[name] ??= name.startsWith("=") ? name.slice(1) : newId());
  const named = /"\\$([a-z0-9]+)"/gu;
  const fill = (body) => JSON.parse(JSON.stringify(body).replace(named, (_, name) => `"${about(name)}"`));
  await stateAll(made.map(([kind, subject, body]) => ({ kind, about: about(subject), body: fill(body) })));
  return ids;
}"""


def begin(page: Page, url: str) -> None:
    """Start a programme from the first page, as its first administrator does."""
    page.goto(url)
    page.get_by_role("button", name="Start my own programme").click()
    page.get_by_label("Programme (the authority)").fill(PROGRAMME["name"])
    page.get_by_label("Laboratory").fill(PROGRAMME["laboratory"])
    page.get_by_label("Time zone").fill(PROGRAMME["zone"])
    page.get_by_label("Your name").fill(PERSON["name"])
    page.get_by_label("Sign-in name").fill(PERSON["sign_in"])
    page.get_by_label("Password", exact=True).fill(PERSON["password"])
    page.get_by_role("button", name="Start", exact=True).click()
    expect(page.get_by_role("heading", name="Points")).to_be_visible()


def sign_in(page: Page, url: str) -> None:
    """Sign in on a device that knows nothing yet."""
    page.goto(f"{url}/sign-in")
    page.get_by_label("Sign-in name").fill(PERSON["sign_in"])
    page.get_by_label("Password").fill(PERSON["password"])
    page.get_by_role("button", name="Sign in", exact=True).click()
    expect(page.get_by_role("heading", name="Points")).to_be_visible()


def state_all(page: Page, made: list[tuple[str, str, dict[str, Any]]]) -> dict[str, str]:
    """State things on the device; ``$name`` in a body is the id made for the thing of that name."""
    ids: dict[str, str] = page.evaluate(_STATE_ALL, made)
    return ids


def register_point(page: Page) -> str:
    """Register a discharger with one point and its limit; return the point's id."""
    firm = {"name": "Hollin Vale Creamery", "sector": "dairy", "address": ""}
    point = {"discharger": "$d", "name": "Outlet B", "access": "Behind the cold store"}
    point |= {"hazards": ["traffic", "gases"], "sample_kind": "grab", "flow_device": None}
    limit = {"basis": "daily_maximum", "value": {"text": "1500", "unit": "mg/L"}}
    limit |= {"from": "2026-01-01", "source": "Permit 12"}
    made = [("discharger.registered", "d", firm), ("point.registered", "p", point), ("limit.set", "p", limit)]
    return state_all(page, made)["p"]


def outbox(page: Page) -> list[dict[str, Any]]:
    """Return the device's own entries as its store has them, oldest first."""
    rows: list[dict[str, Any]] = page.evaluate(
        """async () => {
          const { begin } = await import("/static/parts/db.js");
          return (await begin("outbox")).store.getAll();
        }"""
    )
    return rows


def settled(page: Page) -> None:
    """Wait until the page is served by its worker and nothing waits to be sent."""
    page.wait_for_function("() => navigator.serviceWorker.controller !== null")
    expect(page.get_by_text("Everything is on the server.")).to_be_attached(timeout=15000)


def take_sample(page: Page, point: str) -> str:
    """Take a sample through the form with a code drawn by the tablet; return the code."""
    page.goto(page.url.split("/field")[0].split("/bench")[0] + f"/field/point/{point}/take")
    page.get_by_role("button", name="No printed label").click()
    code = page.get_by_label("Bottle").input_value()
    page.get_by_label("Conductivity", exact=True).fill("1,9")
    page.get_by_label("On ice").check()
    page.get_by_role("button", name="Save the sample").click()
    expect(page.get_by_text("Saved on this tablet")).to_be_visible()
    return code
