"""The house keeps its own rules: short files, a bare top level, no addresses, pure sums, all documented."""

from __future__ import annotations

import ast
import re
import subprocess
import tomllib
from pathlib import Path

import pytest

from app import verbs

ROOT = Path(__file__).resolve().parents[1]
LONGEST_FILE = 400
LONGEST_FUNCTION = 40

# A longer file needs its reason here, in one line.
LONG_FILES: dict[str, str] = {}

TOP_LEVEL = {"app", "seed_scenarios", "static", "tests"} | {
    "DEVELOPERS.md",
    "LICENSE",
    "Makefile",
    "README.md",
    "pyproject.toml",
}
PURE = ("chemistry", "compliance", "forecast", "safety")
IMPURE_MODULES = {"io", "logging", "os", "pathlib", "random", "secrets", "sys", "time", "uuid"}
IMPURE_CALLS = {"open", "input", "print", "eval", "exec"}
CLOCKS = {"now", "today", "utcnow"}

# Written in two halves, so that this file does not hold what it looks for.
ADDRESSES = [
    re.compile(head + tail, re.IGNORECASE)
    for head, tail in [
        (r"registry\.", r"(npmjs|yarnpkg)"),
        (r"files\.python", r"hosted"),
        (r"pypi\.", r"(org|python)"),
        (r"deb\.", r"debian"),
        (r"--(extra-)?index", r"-url"),
        (r'"resol', r'ved"\s*:'),
        (r"(?<![\w.])/(root|home|work)", r"/\w"),
    ]
]


def tracked() -> list[Path]:
    """Return the project's own files: what git has, or would have after `git add`."""
    command = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    if done.returncode:
        pytest.skip("this is no git checkout: which files belong to the project cannot be told")
    return [ROOT / line for line in sorted(set(done.stdout.splitlines())) if (ROOT / line).is_file()]


def name(path: Path) -> str:
    """Return a file's name as a person would write it."""
    return path.relative_to(ROOT).as_posix()


def test_no_file_is_too_long_to_read_in_one_sitting() -> None:
    lengths = {
        name(path): len(path.read_text("utf-8").splitlines())
        for path in tracked()
        if path.suffix in {".css", ".js", ".py", ".typ"}
    }
    too_long = {file: lines for file, lines in lengths.items() if lines > LONGEST_FILE}
    assert too_long.keys() == LONG_FILES.keys()


def test_no_function_is_too_long_to_see_at_once() -> None:
    too_long = []
    for path in tracked():
        if path.suffix == ".py" and name(path).startswith(("app/", ".ci/")):
            for node in ast.walk(ast.parse(path.read_text("utf-8"))):
                if isinstance(node, ast.FunctionDef) and lines_of(node) > LONGEST_FUNCTION:
                    too_long.append(f"{name(path)}:{node.lineno} {node.name} has {lines_of(node)} lines")
    assert too_long == []


def lines_of(function: ast.FunctionDef) -> int:
    """Return the lines of a function's code, its docstring not counted."""
    first = function.body[1] if ast.get_docstring(function) and len(function.body) > 1 else function.body[0]
    return (function.end_lineno or 0) - first.lineno + 1


def test_the_top_level_holds_only_what_a_newcomer_expects() -> None:
    top = {path.relative_to(ROOT).parts[0] for path in tracked()}
    assert {part for part in top if not part.startswith(".")} - TOP_LEVEL == set()


def test_no_file_names_a_registry_or_a_machine() -> None:
    found = []
    for path in tracked():
        try:
            text = path.read_text("utf-8")
        except UnicodeDecodeError:
            continue
        for number, line in enumerate(text.splitlines(), 1):
            found += [f"{name(path)}:{number}" for address in ADDRESSES if address.search(line)]
    assert found == []


def impurities(source: str) -> list[str]:
    """Name what a module would take from the clock, the disk or chance."""
    found = []
    for node in ast.walk(ast.parse(source)):
        match node:
            case ast.Import(names=names):
                found += [each.name for each in names if each.name.split(".")[0] in IMPURE_MODULES]
            case ast.ImportFrom(module=str(module)) if module.split(".")[0] in IMPURE_MODULES:
                found.append(module)
            case ast.Call(func=ast.Name(id=called)) if called in IMPURE_CALLS:
                found.append(called)
            case ast.Call(func=ast.Attribute(attr=called)) if called in CLOCKS:
                found.append(called)
            case ast.Call(func=ast.Attribute(attr="default_rng"), args=[], keywords=[]):
                found.append("default_rng without a seed")
    return found


@pytest.mark.parametrize(
    ("source", "fault"),
    [
        ("import time", "time"),
        ("from pathlib import Path", "pathlib"),
        ("import os.path", "os.path"),
        ("open('x')", "open"),
        ("datetime.now()", "now"),
        ("datetime.date.today()", "today"),
        ("np.random.default_rng()", "default_rng without a seed"),
    ],
)
def test_an_impurity_would_be_found(source: str, fault: str) -> None:
    assert impurities(source) == [fault]


@pytest.mark.parametrize("package", PURE)
def test_the_sums_know_no_clock_no_file_and_no_chance(package: str) -> None:
    modules = sorted((ROOT / "app" / package).rglob("*.py"))
    assert modules, f"app/{package} holds no module"
    found = {name(path): impurities(path.read_text("utf-8")) for path in modules}
    assert {file: faults for file, faults in found.items() if faults} == {}


def documentation() -> str:
    """Return what a user and a developer can read about the project."""
    return "\n".join((ROOT / file).read_text("utf-8") for file in ("README.md", "DEVELOPERS.md"))


def test_every_verb_is_documented() -> None:
    text = documentation()
    assert [verb for verb in verbs.MODULES if f"`{verb}`" not in text] == []


def test_every_direct_dependency_is_named_with_its_reason() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    pins = [
        *project["dependencies"],
        *(pin for pins in project["optional-dependencies"].values() for pin in pins),
    ]
    text = documentation().lower()
    assert [pin for pin in pins if pin.partition("==")[0].lower() not in text] == []
