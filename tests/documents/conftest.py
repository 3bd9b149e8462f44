"""Tools from outside that read our documents back: a PDF is believed only by another program's word."""

from __future__ import annotations

import os
import re
import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path
from typing import Any

import page
import pytest

Poppler = Callable[..., str]
Faults = Callable[[bytes, Any], list[str]]

# page-validation 0.11.0 takes the last byte of a packed stream for part of the line end when it
# happens to be a carriage return. The length is then counted here, byte by byte, in its place.
MISCOUNTED = "STREAM-LENGTH-001"


@pytest.fixture
def poppler(tmp_path: Path) -> Poppler:
    """Return a function that runs one of poppler's tools on a PDF and gives its output.

    Without poppler-utils the test is skipped with this reason, and fails where
    the full set of tools is demanded.
    """
    if shutil.which("pdftotext") is None:
        words = "poppler-utils (pdftotext, pdfdetach) is not installed: documents are not read back"
        if os.environ.get("WEIRBOOK_BROWSER") == "required":
            pytest.fail(words, pytrace=False)
        pytest.skip(words)

    def run(tool: str, pdf: bytes, *options: str) -> str:
        file = tmp_path / "document.pdf"
        file.write_bytes(pdf)
        before, after = (options[:-1], options[-1:]) if options and options[-1] == "-" else (options, ())
        command = [tool, *before, str(file), *after]
        done = subprocess.run(command, cwd=tmp_path, capture_output=True, check=True)
        return done.stdout.decode("utf-8")

    return run


@pytest.fixture
def text_of(poppler: Poppler) -> Callable[[bytes], str]:
    """Return a function that reads a PDF's words back, in reading order, one space between them."""

    def read(pdf: bytes) -> str:
        return " ".join(poppler("pdftotext", pdf, "-raw", "-").replace("\u200b", "").split())

    return read


def wrong_lengths(pdf: bytes) -> list[str]:
    """Name each stream whose declared bytes are not followed by its end (ISO 32000-1, 7.3.8.1)."""
    start = re.search(rb"startxref\s+(\d+)", pdf)
    assert start
    places = [int(p) for p in re.findall(rb"(\d{10}) \d{5} n", pdf[int(start[1]) :])]
    assert places
    wrong = []
    for place in places:
        found = re.compile(rb"\d+ 0 obj\s*(<<.*?)stream\r?\n", re.S).match(pdf, place, place + 4096)
        if found:
            length = re.search(rb"/Length (\d+)", found[1])
            assert length
            end = found.end() + int(length[1])
            if not re.match(rb"\r?\nendstream", pdf[end : end + 12]):
                wrong.append(f"the stream at {place} is not {int(length[1])} bytes long")
    return wrong


@pytest.fixture
def faults(tmp_path: Path) -> Faults:
    """Return a function that names what a PDF lacks for a profile, e.g. "3a" or "ua1"."""

    def find(pdf: bytes, profile: Any) -> list[str]:
        file = tmp_path / "judged.pdf"
        file.write_bytes(pdf)
        failures = page.validate_pdf(str(file), profile=profile).failures
        kept = [str(f) for f in failures if MISCOUNTED not in f.rule_id]
        return kept + (wrong_lengths(pdf) if len(kept) < len(failures) else [])

    return find
