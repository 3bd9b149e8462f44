"""The certificate's data: one text for the same data, and back again without loss."""

from __future__ import annotations

import hashlib
import json
from dataclasses import replace
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.documents.data import (
    CertificateData,
    Party,
    Replaces,
    certificate_from_json,
    certificate_json,
    data_digest,
)
from app.errors import InputError
from tests.documents.example import BELOW, EXAMPLE, OVER


@pytest.mark.parametrize(
    "data", [EXAMPLE, BELOW, OVER, replace(EXAMPLE, replaces=Replaces("2031-0001", "x"))]
)
def test_the_data_come_back_as_they_went(data: CertificateData) -> None:
    content = certificate_json(data)
    assert certificate_from_json(content) == data
    assert certificate_json(certificate_from_json(content)) == content


def test_the_bytes_are_canonical() -> None:
    """Keys in order, no spaces, characters as they are: written once more by hand."""
    content = certificate_json(replace(EXAMPLE, point="Łódź <&>"))
    again = json.dumps(
        json.loads(content), ensure_ascii=False, sort_keys=True, separators=(",", ":"), allow_nan=False
    )
    assert content == again.encode("utf-8")
    assert "Łódź <&>".encode() in content


def test_the_digest_is_that_of_the_bytes() -> None:
    assert data_digest(EXAMPLE) == hashlib.sha256(certificate_json(EXAMPLE)).hexdigest()
    assert data_digest(EXAMPLE) != data_digest(replace(EXAMPLE, point="elsewhere"))


@given(st.text(st.characters(exclude_categories=["Cs"])))
def test_any_name_survives(name: str) -> None:
    data = replace(EXAMPLE, discharger=Party(name))
    assert certificate_from_json(certificate_json(data)).discharger.name == name


def test_data_from_before_a_field_was_known_are_read() -> None:
    plain = json.loads(certificate_json(EXAMPLE))
    del plain["corrected"], plain["result"]["detection_limit"]
    found = certificate_from_json(json.dumps(plain).encode())
    assert (found.corrected, found.result.detection_limit) == (None, "")
    del plain["point"]
    with pytest.raises(InputError) as caught:
        certificate_from_json(json.dumps(plain).encode())
    assert caught.value.fields == {"point": ["is missing"]}


def test_a_number_that_is_none_is_refused() -> None:
    assert EXAMPLE.calibration is not None
    broken = replace(EXAMPLE, calibration=replace(EXAMPLE.calibration, coefficients=(float("nan"), 1.0)))
    with pytest.raises(InputError, match="cannot be written"):
        certificate_json(broken)


def test_half_a_character_is_refused() -> None:
    with pytest.raises(InputError, match="cannot be written"):
        certificate_json(replace(EXAMPLE, point="\ud800"))


def changed(path: str, value: Any) -> bytes:
    """Return the example's bytes with one place changed, or taken away by None."""
    plain = json.loads(certificate_json(EXAMPLE))
    *way, last = path.split(".")
    place = plain
    for step in way:
        place = place[int(step)] if step.isdigit() else place[step]
    if value is None:
        del place[last]
    else:
        place[last] = value
    return json.dumps(plain).encode()


@pytest.mark.parametrize(
    ("path", "value", "field"),
    [
        ("schema", "other-1", "schema"),
        ("result.status", "disagree", "result.status"),
        ("result.reported", 2210, "result.reported"),
        ("result.reported", None, "result.reported"),
        ("journal.position", "1842", "journal.position"),
        ("journal.position", True, "journal.position"),
        ("sample.extra", "x", "sample.extra"),
        ("tubes", "none", "tubes"),
        ("calibration.read", [1.0], "calibration.read"),
        ("calibration.standards.1.absorbance", ["0.038"], "calibration.standards.1.absorbance.0"),
    ],
)
def test_data_that_do_not_fit_are_refused_with_their_place(path: str, value: Any, field: str) -> None:
    with pytest.raises(InputError) as refused:
        certificate_from_json(changed(path, value))
    assert field in refused.value.fields


def test_all_wrong_places_are_named_at_once() -> None:
    plain = json.loads(certificate_json(EXAMPLE))
    plain["result"]["reported"], plain["tubes"][0]["position"] = 1, "2"
    with pytest.raises(InputError) as refused:
        certificate_from_json(json.dumps(plain).encode())
    assert set(refused.value.fields) == {"result.reported", "tubes.0.position"}


@pytest.mark.parametrize("content", [b"", b"\xff", b"[]", b"null", b'{"schema":"weirbook-certificate-1"}'])
def test_what_is_no_certificate_is_refused(content: bytes) -> None:
    with pytest.raises(InputError):
        certificate_from_json(content)
