"""The shell: one page for every screen, a worker that names its build, words without signing in."""

from __future__ import annotations

import json
import re
from pathlib import Path

from app.journal import kinds
from app.journal.units import STATIC
from app.web.shell import build_of, shell_files, words_text
from tests.web.conftest import Browser


def test_every_screen_is_the_one_shell(browser: Browser) -> None:
    shell = browser.get("/").get_data()
    for path in ("/field", "/field/point/x/take", "/bench/run/y", "/review", "/emergency"):
        assert browser.get(path).get_data() == shell


def test_the_worker_names_the_build_and_lists_every_file_of_the_client(browser: Browser) -> None:
    text = browser.get("/sw.js").text
    build = browser.get("/api/state").get_json()["build"]
    assert f'const BUILD = "{build}";' in text
    listed = json.loads(re.search(r"const SHELL = (\[.*?\]);", text).group(1))  # type: ignore[union-attr]
    assert listed[:2] == ["/", "/words.json"]
    for path in listed:
        answer = browser.get(path)
        assert answer.status_code == 200
        assert answer.headers["Content-Type"].split(";")[0] != "application/octet-stream"
    scripts = {f"/static/{path.relative_to(STATIC).as_posix()}" for path in STATIC.rglob("*.js")}
    assert scripts - {"/static/sw.js"} <= set(listed)


def test_another_file_makes_another_build(tmp_path: Path) -> None:
    (tmp_path / "a.js").write_text("1", encoding="utf-8")
    first = build_of(tmp_path)
    (tmp_path / "a.js").write_text("2", encoding="utf-8")
    assert build_of(tmp_path) != first
    assert shell_files(tmp_path) == ["/static/a.js"]


def test_nothing_is_inline_in_the_shell() -> None:
    page = (STATIC / "index.html").read_text(encoding="utf-8")
    assert not re.search(r"<script(?![^>]*src=)|<style|style=|\son\w+=", page)


def test_the_manifest_is_complete(browser: Browser) -> None:
    manifest = json.loads(browser.get("/manifest.webmanifest").text)
    assert {"id", "name", "short_name", "start_url", "scope", "display", "icons"} <= set(manifest)
    for icon in manifest["icons"]:
        assert browser.get(icon["src"]).status_code == 200


def test_the_words_of_safety_need_no_sign_in(browser: Browser) -> None:
    words = browser.get("/words.json").get_json()
    assert words["gates"][0]["id"] == "hood_on"
    assert words["emergency"]
    assert words["deferral"]


def test_published_recipes_come_with_their_source_and_can_be_adopted_where_the_method_states_all(
    browser: Browser,
) -> None:
    forms = browser.get("/words.json").get_json()["recipes"]
    assert all(form["source"] for form in forms)
    adopted = 0
    for form in forms:
        body = form | {"order": ["sample", "digestion solution", "acid reagent"]}
        if body["working_low"] and body["working_high"]:
            kinds.check("recipe.adopted", body)
            adopted += 1
    assert adopted >= 2


def test_health_says_little_and_readiness_tries_a_write(browser: Browser) -> None:
    assert browser.get("/healthz").get_json() == {"alive": True}
    assert browser.get("/readyz").get_json() == {"ready": True}


def test_no_script_writes_markup_or_evaluates_text() -> None:
    for path in STATIC.rglob("*.js"):
        if "vendor" in path.parts:
            continue
        text = path.read_text(encoding="utf-8")
        assert not re.search(
            r"innerHTML|insertAdjacentHTML|\beval\(|new Function|document\.write|console\.log", text
        ), path


def test_a_methods_own_chloride_limit_stands_in_the_source_that_is_adopted() -> None:
    """ISO 15705 states 1000 mg/L, less than its mercury(II) sulfate would mask at ten to one."""
    sources = {one["name"]: one["source"] for one in json.loads(words_text())["recipes"]}
    assert "at most 1000 mg/L of chloride" in sources["ISO 15705, high range"]
    assert "of chloride" not in sources["Standard Methods 5220 D, high range"]
