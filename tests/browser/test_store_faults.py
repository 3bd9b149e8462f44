"""The tablet's store under faults: a person is told, nothing typed is lost."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

from playwright.sync_api import BrowserContext, Page, expect

from tests.browser import chromium, tablet, told
from tests.browser.conftest import Profile
from tests.browser.server import Server
from tests.browser.watch import Watch
from tests.tools.devices import CODES

NOTE = "first line, “quoted”"
FILL_UP = """async () => {
  const db = await new Promise((found) => {
    const opening = indexedDB.open("junk", 1);
    opening.onupgradeneeded = () => opening.result.createObjectStore("junk", { autoIncrement: true });
    opening.onsuccess = () => found(opening.result);
  });
  const put = (size) => new Promise((found) => {
    const tx = db.transaction("junk", "readwrite");
    tx.objectStore("junk").put(crypto.getRandomValues(new Uint8Array(size)));
    tx.oncomplete = () => found(true);
    tx.onabort = () => found(false);
  });
  let count = 0;
  for (const size of [65536, 8192, 1024, 128, 16]) while (count < 400 && await put(size)) count += 1;
  db.close();
  return count;
}"""
TAKE = "/field/point/outlet-b/take"
NO_STORE = """Object.defineProperty(globalThis, "indexedDB", {
  value: { open() { throw new DOMException("no", "SecurityError"); } },
});"""
CLOSE_HANDLE = """async () => (await (await import("/static/parts/db.js")).open()).close()"""
BREAK_STORE = (
    "() => { IDBFactory.prototype.open = () => { throw new DOMException('gone', 'UnknownError'); }; }"
)
GRADE = """if (globalThis.StorageManager) {
  StorageManager.prototype.persist = StorageManager.prototype.persisted = async () => KEPT;
}"""
RAW_OPEN = """(version) => new Promise((found) => {
  const opening = indexedDB.open("weirbook", version);
  opening.onsuccess = () => { globalThis.raw = opening.result; found("open"); };
  opening.onblocked = () => found("blocked");
  opening.onerror = () => found(opening.error.name);
})"""
RAW_FIRST = """() => new Promise((found) => {
  const opening = indexedDB.open("weirbook", 1);
  opening.onupgradeneeded = () => {
    const db = opening.result;
    db.createObjectStore("records", { keyPath: ["type", "id"] }).createIndex("type", "type");
    db.createObjectStore("outbox", { keyPath: "n" });
    db.createObjectStore("drafts", { keyPath: "key" });
    const meta = db.createObjectStore("meta", { keyPath: "key" });
    meta.put({ key: "device", id: "d1", incarnation: "i1", made: "" });
    meta.put({ key: "last", n: 7, digest: "kept" });
  };
  opening.onsuccess = () => { globalThis.raw = opening.result; found(true); };
})"""
LAST = """() => new Promise((found) => {
  const opening = indexedDB.open("weirbook");
  opening.onsuccess = () => {
    const asked = opening.result.transaction("meta").objectStore("meta").get("last");
    asked.onsuccess = () => {
      opening.result.close();
      found([opening.result.version, asked.result]);
    };
  };
})"""


def _ready(context: BrowserContext) -> Page:
    """Open a tablet that knows the point and is served by its worker."""
    told.set_up(context)
    page = context.new_page()
    page.goto("/field")
    page.get_by_text("Hollin Vale Creamery").first.wait_for()
    page.wait_for_function("() => navigator.serviceWorker.controller !== null")
    return page


def _quota(page: Page, size: int | None) -> None:
    given = {"origin": page.evaluate("() => location.origin")} | ({"quotaSize": size} if size else {})
    page.context.new_cdp_session(page).send("Storage.overrideQuotaForOrigin", given)


def _count(page: Page) -> int:
    return len(tablet.outbox(page))


def _fill(page: Page, code: str) -> None:
    page.goto(TAKE)
    page.get_by_label("Bottle", exact=True).fill(code)
    page.get_by_label("Note").fill(NOTE)


def _save(page: Page) -> None:
    page.get_by_role("button", name="Save the sample").click()


def test_a_full_device_gives_its_reserve_to_an_entry_and_then_says_not_saved(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F02: the quota aborts after the request's success; not saved, the form intact, the count unchanged."""
    context = context_factory(**chromium.PHONE, base_url=server.url)
    first = context.new_page()
    first.goto("/static/icons/mark.svg")
    _quota(first, 6_000_000)  # before the store is first used: the browser remembers how much room there was
    page = _ready(context)
    page.wait_for_timeout(300)
    server.kill()
    _fill(page, CODES[5])
    page.evaluate(FILL_UP)
    _quota(page, page.evaluate("async () => (await navigator.storage.estimate()).usage"))
    _save(page)
    expect(page.get_by_text(f"Saved on this tablet: {CODES[5]}")).to_be_visible()
    _fill(page, CODES[6])
    page.evaluate(FILL_UP)
    _quota(page, 1)
    _save(page)
    expect(page.get_by_text("Not saved: this device has no room left.")).to_be_visible()
    expect(page.get_by_label("Note")).to_have_value(NOTE)
    assert _count(page) == 1
    _quota(page, None)
    _save(page)
    expect(page.get_by_text(f"Saved on this tablet: {CODES[6]}")).to_be_visible()
    assert _count(page) == 2
    server.start()


def test_a_dead_connection_is_replaced_once_and_then_the_entries_leave_as_a_file(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F05: the handle is reopened once; then a banner blocks, the form stays, a file is offered."""
    page = _ready(context_factory(**chromium.DESK, base_url=server.url))
    server.kill()
    _fill(page, CODES[5])
    page.evaluate(CLOSE_HANDLE)
    _save(page)
    expect(page.get_by_text(f"Saved on this tablet: {CODES[5]}")).to_be_visible()
    _fill(page, CODES[6])
    page.evaluate(CLOSE_HANDLE)
    page.evaluate(BREAK_STORE)
    _save(page)
    expect(page.get_by_role("alert").filter(has_text="Nothing can be saved.")).to_be_visible()
    expect(page.get_by_text("Saved on this tablet")).to_have_count(0)
    expect(page.get_by_label("Note")).to_have_value(NOTE)
    with page.expect_download() as saved:
        page.get_by_role("button", name="Save this tablet's entries as a file").click()
    file = json.loads(Path(saved.value.path()).read_text("utf-8"))
    assert [json.loads(text)["body"]["bottle"] for text in file["entries"]] == [CODES[5]]
    assert file["unsaved"]["sample:outlet-b"]["bottle"] == CODES[6]
    server.start()


def test_a_corrupt_store_is_no_silent_fresh_start(
    server: Server, profile_factory: Callable[..., Profile]
) -> None:
    """F06: the browser drops a corrupt store; the number kept outside it tells how many are at risk."""
    profile = profile_factory(**chromium.PHONE, base_url=server.url)
    context = profile.open().context
    page = _ready(context)
    person = told_name(page, "Photometer 1")
    tablet.settled(page)
    server.kill()
    told_name(page, "Photometer 2")
    profile.close()
    for file in profile.folder.glob("Default/IndexedDB/*.leveldb/*"):
        file.write_bytes(b"torn" * 64)
    server.start()
    page = profile.open()
    page.goto("/field")
    risk = page.get_by_role("alert").filter(
        has_text="It held entries up to number 2. The server has 1 of them; 1 is at risk"
    )
    expect(risk).to_be_visible()
    assert person != told_name(page, "Photometer 3")


def told_name(page: Page, name: str) -> str:
    """State an instrument on the tablet; return the incarnation that stated it."""
    tablet.state_all(page, [("instrument.added", "i", {"name": name, "what": "meter", "positions": None})])
    found: str = json.loads(tablet.outbox(page)[-1]["text"])["incarnation"]
    return found


def test_cleared_site_data_is_noticed(server: Server, context_factory: Callable[..., BrowserContext]) -> None:
    """F07: noticed at the start, a new incarnation; what the server has of the old one is told."""
    page = _ready(context_factory(**chromium.PHONE, base_url=server.url))
    before = told_name(page, "Photometer 1")
    tablet.settled(page)
    origin = page.evaluate("() => location.origin")
    kinds = "indexeddb,local_storage,cache_storage,service_workers"
    page.goto("/static/icons/mark.svg")
    page.context.new_cdp_session(page).send(
        "Storage.clearDataForOrigin", {"origin": origin, "storageTypes": kinds}
    )
    page.goto("/field")
    expect(
        page.get_by_text("It held entries up to number 1. The server has all of them; nothing is lost.")
    ).to_be_visible()
    page.get_by_role("button", name="I have read this").click()
    expect(page.get_by_text("came back empty")).to_have_count(0)
    assert told_name(page, "Photometer 2") != before
    assert json.loads(tablet.outbox(page)[-1]["text"])["n"] == 1


def test_the_grade_of_the_storage_sets_when_entries_are_old(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F08: lasting or best effort, in words; with the weaker grade unsent entries are called old sooner."""
    seen = {}
    for kept in (False, True):
        context = context_factory(**chromium.PHONE, base_url=server.url)
        context.add_init_script(GRADE.replace("KEPT", str(kept).lower()))
        page = context.new_page()
        if kept:
            tablet.sign_in(page, server.url)
        else:
            tablet.begin(page, server.url)
        page.route("**/api/push", lambda route: route.abort())
        context.route("**/api/push", lambda route: route.abort())
        told_name(page, "Photometer 1")
        page.clock.set_fixed_time(page.evaluate("() => Date.now() / 1000 + 2 * 3600"))
        page.goto("/settings")
        page.get_by_text("Unsent entries are called old after").wait_for()
        words = page.get_by_role("status").filter(has_text="1 entry on this tablet only").inner_text()
        seen[kept] = (
            page.get_by_text("Lasting:").count(),
            page.get_by_text("Best effort:").count(),
            "the oldest" in words,
        )
    assert seen == {False: (0, 1, True), True: (1, 0, False)}


def test_without_a_store_nothing_is_recorded_in_memory(
    server: Server, context_factory: Callable[..., BrowserContext], watch: Watch
) -> None:
    """F09: capture is disabled with the reason; there is no form whose entries would vanish."""
    context = context_factory(**chromium.PHONE, base_url=server.url)
    told.set_up(context)
    context.add_init_script(NO_STORE)
    page = context.new_page()
    page.goto(TAKE)
    words = "This browser does not let Weirbook keep anything (SecurityError). Nothing can be recorded here"
    expect(page.get_by_role("alert").filter(has_text=words)).to_be_visible()
    assert page.locator("input, textarea, form").count() == 0


TYPED = [
    {
        "Conductivity": "1e3",
        "Turbidity": "<0.5",
        "pH": "1.50",
        "Temperature of the water": "-0.0",
        "Chloride strip": "0012",
    },
    {"Temperature of the water": "1,5"},
    {"Conductivity": "9007199254740993"},
]


READ = {
    CODES[5]: ["read as 1\u202f000 ", "read as below 0.5 ", "read as 1.5 ", "read as 12 "],
    CODES[6]: ["read as 1.5 "],
    CODES[7]: ["read as 9\u202f007\u202f199\u202f254\u202f740\u202f992 "],
}


def test_numbers_stay_as_they_were_typed(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F10: typed texts pass the form, the sync and the file unchanged; how each was read stands beside it."""
    context = context_factory(**chromium.DESK, base_url=server.url)
    page = _ready(context)
    for code, typed in zip(CODES[5:], TYPED, strict=False):
        page.goto(TAKE)
        page.get_by_label("Bottle", exact=True).fill(code)
        for label, text in typed.items():
            page.get_by_label(label, exact=True).fill(text)
        for read in READ[code]:
            expect(page.get_by_text(read).first).to_be_visible()
        _save(page)
        expect(page.get_by_text(f"Saved on this tablet: {code}")).to_be_visible()
    expect(page.get_by_text("1 entry needs attention.")).to_be_visible(timeout=15000)  # no such conductivity
    page.goto("/settings")
    with page.expect_download() as saved:
        page.get_by_role("button", name="Save this tablet's entries as a file").click()
    file = json.loads(Path(saved.value.path()).read_text("utf-8"))
    there = context.request.get(
        f"/api/pull?epoch={context.request.get('/api/state').json()['epoch']}&after=0"
    ).json()
    synced = [one["body"]["field"] for one in there["records"] if one["type"] == "sample"]
    exported = [json.loads(text)["body"]["field"] for text in file["entries"]]
    held = [one["body"]["text"] for one in there["records"] if one["type"] == "held"]
    synced += [json.loads(text)["body"]["field"] for text in held]
    for fields, typed in [*zip(exported, TYPED, strict=True), *zip(synced, TYPED, strict=True)]:
        assert sorted(one["text"] for one in fields.values()) == sorted(typed.values())


def test_an_upgrade_of_the_store_waits_for_old_windows_and_is_whole_or_not_there(
    server: Server, context_factory: Callable[..., BrowserContext], watch: Watch
) -> None:
    """F53: a migration that is interrupted leaves the store of the build before, entries and all."""
    context = context_factory(**chromium.DESK, base_url=server.url, service_workers="block")
    told.start_programme(context.request)
    old = context.new_page()
    old.goto("/static/icons/mark.svg")
    assert old.evaluate(RAW_FIRST)
    old.evaluate("() => raw.close()")
    broken = context.new_page()
    broken.add_init_script(
        "const make = IDBDatabase.prototype.createObjectStore;"
        "IDBDatabase.prototype.createObjectStore = function (name, ...rest) {"
        " const made = make.call(this, name, ...rest);"
        " if (name === 'photos') throw new Error('torn'); return made; };"
    )
    broken.goto("/field")
    expect(broken.get_by_role("alert")).to_contain_text("does not let Weirbook keep anything")
    broken.close()
    assert old.evaluate(LAST) == [1, {"key": "last", "n": 7, "digest": "kept"}]
    watch.faults[:] = [
        fault for fault in watch.faults if "torn" not in fault and "event handler" not in fault
    ]
    page = context.new_page()
    page.goto("/field")
    page.get_by_role("heading", name="Points").first.wait_for()
    assert old.evaluate(LAST) == [2, {"key": "last", "n": 7, "digest": "kept"}]


def test_windows_of_two_builds_neither_hang_nor_keep_silent(
    server: Server, context_factory: Callable[..., BrowserContext]
) -> None:
    """F52: an old window that holds the store is named, and one that is outrun lets go and says so."""
    context = context_factory(**chromium.DESK, base_url=server.url, service_workers="block")
    told.start_programme(context.request)
    old = context.new_page()
    old.goto("/static/icons/mark.svg")
    assert old.evaluate(RAW_FIRST)
    page = context.new_page()
    page.goto("/settings")
    expect(page.get_by_role("alert")).to_contain_text("Another window still holds this tablet's store")
    old.evaluate("() => raw.close()")
    page.get_by_role("heading", name="Settings").wait_for()
    assert old.evaluate(RAW_OPEN, 99) == "open"
    expect(page.get_by_role("alert")).to_contain_text("newer Weirbook")
    page.reload()
    expect(page.get_by_role("alert")).to_contain_text("made by a newer Weirbook than this page")
