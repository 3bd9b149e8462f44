"""Reading a certificate offline: what was attached comes out, what was changed is refused."""

from __future__ import annotations

import json
import zlib
from dataclasses import replace

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.documents import verify
from app.documents.certificate import render_certificate
from app.documents.data import certificate_json
from app.documents.verify import embedded_data, embedded_json, made_again
from app.errors import InputError
from tests.documents.example import BASE_URL, BELOW, EXAMPLE

PDF = render_certificate(EXAMPLE, BASE_URL)


@pytest.mark.parametrize("paper", ["a4", "letter"])
@pytest.mark.parametrize("data", [EXAMPLE, BELOW, replace(EXAMPLE, point="中 Łódź " * 500)])
def test_the_attached_bytes_come_out_as_they_went_in(data: object, paper: str) -> None:
    pdf = render_certificate(data, BASE_URL, paper)  # type: ignore[arg-type]
    assert embedded_json(pdf) == certificate_json(data)  # type: ignore[arg-type]
    assert embedded_data(pdf) == json.loads(certificate_json(data))  # type: ignore[arg-type]
    assert made_again(pdf, BASE_URL)


def test_a_page_that_says_something_else_is_not_made_again() -> None:
    """One byte of a page's packed content changed: the data are as they were, the file is not."""
    at = PDF.index(b"/Filter/FlateDecode", 1000)
    start = PDF.index(b"stream\n", at) + 40
    forged = PDF[:start] + bytes([PDF[start] ^ 1]) + PDF[start + 1 :]
    assert embedded_json(forged) == certificate_json(EXAMPLE)
    assert not made_again(forged, BASE_URL)
    assert not made_again(PDF, "https://other.example")


def test_something_appended_is_refused() -> None:
    """An incremental update (ISO 32000-1, 7.5.6) may change pages and keep the attachment."""
    start = int(PDF[PDF.rindex(b"startxref") :].split()[1])
    table = PDF[start : PDF.rindex(b"startxref")]
    update = table.replace(b"trailer\n<<", b"trailer\n<</Prev %d" % start)
    forged = PDF + b"\n" + update + b"startxref\n%d\n%%%%EOF" % (len(PDF) + 1)
    with pytest.raises(InputError, match="changed since"):
        embedded_json(forged)
    with pytest.raises(InputError, match="changed since"):
        embedded_json(PDF + b"\ntrailing words")


def with_data(content: bytes) -> bytes:
    """Return the file with other attached data of the same packed length."""
    start = PDF.index(b"/Type/EmbeddedFile")
    start = PDF.index(b"stream\n", start) + 7
    end = PDF.index(b"\nendstream", start)
    packed = zlib.compress(content, 9)
    assert len(packed) <= end - start
    return PDF[:start] + packed.ljust(end - start, b"\0") + PDF[end:]


def test_exchanged_or_damaged_data_are_refused() -> None:
    with pytest.raises(InputError):
        embedded_data(with_data(b'{"schema":"weirbook-certificate-1"}'))
    start = PDF.index(b"stream\n", PDF.index(b"/Type/EmbeddedFile")) + 7
    with pytest.raises(InputError, match="changed since"):
        embedded_json(PDF[:start] + b"\0\0\0\0" + PDF[start + 4 :])


def test_data_that_unpack_without_end_are_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(verify, "LARGEST", 1000)
    with pytest.raises(InputError, match="changed since") as refused:
        embedded_json(PDF)
    assert refused.value.fields["file"] == ["its attachment is damaged or too large"]


@pytest.mark.parametrize("file", [b"", b"%PDF-", b"hello", PDF[:-200], PDF[500:], b"x" + PDF])
def test_what_is_no_certificate_is_refused_in_words(file: bytes) -> None:
    with pytest.raises(InputError) as refused:
        embedded_json(file)
    assert refused.value.fields["file"]


@settings(max_examples=200)
@given(st.integers(0, len(PDF) - 1), st.binary(min_size=1, max_size=8))
def test_a_damaged_file_gives_the_data_or_a_refusal_never_a_traceback(at: int, noise: bytes) -> None:
    forged = PDF[:at] + noise + PDF[at + len(noise) :]
    try:
        found = embedded_json(forged)
    except InputError:
        return
    assert found == certificate_json(EXAMPLE)
