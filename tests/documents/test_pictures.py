"""The README shows what the renderers draw."""

from __future__ import annotations

import pytest

from tests.documents.pictures import FOLDER, pictures


@pytest.mark.parametrize("name", sorted(pictures()))
def test_the_committed_picture_is_what_is_drawn_now(name: str) -> None:
    assert (FOLDER / name).read_text(encoding="utf-8") == pictures()[name]
