"""Any bytes are an entry or are refused in words; every kind's first text is accepted for ever."""

from __future__ import annotations

import json
import uuid
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.errors import InputError
from app.journal import kinds
from app.journal.entry import Entry, parse, reopen
from app.journal.identity import uuid7
from tests.tools import devices

GOLDEN = Path(__file__).with_name("golden")
JSON = st.recursive(
    st.none() | st.booleans() | st.floats(allow_nan=True) | st.integers() | st.text(),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(max_size=12), inner, max_size=6),
    max_leaves=12,
)


def good() -> dict[str, Any]:
    """Return an entry that is complete."""
    entry: dict[str, Any] = json.loads(devices.Device("p").make("lot.made", "x", {"a": 1}))
    return entry


@given(st.binary(max_size=200))
def test_any_bytes_are_an_entry_or_refused(raw: bytes) -> None:
    try:
        assert isinstance(parse(raw), Entry)
    except InputError as error:
        assert error.fields


@given(st.sampled_from(sorted(good())), JSON)
def test_any_change_of_one_field_is_an_entry_or_refused_by_its_name(name: str, value: Any) -> None:
    try:
        entry = parse(json.dumps(good() | {name: value}).encode())
    except InputError as error:
        assert any(path.split(".")[0] in (name, "entry") for path in error.fields)
    else:
        assert reopen(entry.raw) == entry


@pytest.mark.parametrize("name", sorted(good()))
def test_a_missing_field_is_named(name: str) -> None:
    entry = good()
    del entry[name]
    with pytest.raises(InputError) as caught:
        parse(json.dumps(entry).encode())
    assert set(caught.value.fields) == {name}


def test_an_unknown_field_is_named() -> None:
    with pytest.raises(InputError) as caught:
        parse(json.dumps(good() | {"colour": 1}).encode())
    assert set(caught.value.fields) == {"colour"}


def golden_body(kind: str) -> dict[str, Any]:
    """Return the body of a kind's newest golden text."""
    text = (GOLDEN / f"{kind}.{kinds.table()[kind].version}.json").read_text(encoding="utf-8")
    body: dict[str, Any] = json.loads(text)["body"]
    return body


@settings(max_examples=700)
@given(kind=st.sampled_from(sorted(kinds.table())), data=st.data())
def test_any_body_is_taken_or_refused_in_words(kind: str, data: st.DataObject) -> None:
    """A good body with some fields lost, changed to anything, or joined by others."""
    body = golden_body(kind)
    for name in data.draw(st.sets(st.sampled_from(sorted(body)))) if body else ():
        if data.draw(st.booleans()):
            del body[name]
        else:
            body[name] = data.draw(JSON)
    body |= data.draw(st.dictionaries(st.text(max_size=12), JSON, max_size=2))
    try:
        kinds.check(kind, body)
    except InputError as error:
        assert error.fields
        assert error.message


def test_every_kind_has_a_golden_text_of_each_version() -> None:
    held = {tuple(path.stem.rsplit(".", 1)) for path in GOLDEN.glob("*.json")}
    wanted = {
        (name, str(version)) for name, kind in kinds.table().items() for version in range(1, kind.version + 1)
    }
    assert held == wanted


@pytest.mark.parametrize("path", sorted(GOLDEN.glob("*.json")), ids=lambda path: path.stem)
def test_golden_texts_are_accepted_for_ever(path: Path) -> None:
    """F50: an entry of any released version is read by upcasting; its bytes stay as they are."""
    entry = parse(path.read_bytes())
    kinds.check(entry.kind, kinds.newest(entry.kind, entry.version, entry.body))


def test_old_bodies_pass_every_upcaster_on_their_way(monkeypatch: pytest.MonkeyPatch) -> None:
    moon = kinds.Kind("a.b", 3, frozenset(), kinds.Body())
    monkeypatch.setattr(kinds, "_kinds", kinds.table() | {"a.b": moon})
    monkeypatch.setattr(
        kinds, "_upcasters", {("a.b", 1): lambda b: b | {"two": 1}, ("a.b", 2): lambda b: b | {"three": 1}}
    )
    assert kinds.newest("a.b", 1, {}) == {"two": 1, "three": 1}
    assert kinds.newest("a.b", 3, {}) == {}


@given(st.lists(st.integers(min_value=0, max_value=2**48 - 1), min_size=1, max_size=30))
def test_ids_are_unique_whatever_the_clock_does(times: list[int]) -> None:
    """F46."""
    made = [uuid7(ms) for ms in times for _ in range(3)]
    assert len(set(made)) == len(made)
    for text, ms in zip(made, [t for t in times for _ in range(3)], strict=True):
        one = uuid.UUID(text)
        assert (one.version, one.variant) == (7, uuid.RFC_4122)
        assert one.int >> 80 == ms
