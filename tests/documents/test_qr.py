"""QR codes: the symbol of the content, with its quiet zone, in squares of one unit."""

from __future__ import annotations

import re

import segno

from app.documents.qr import qr_svg

CONTENT = "http://localhost:8700/verify/2031-0047#" + "ab12" * 16


def test_every_module_is_drawn_in_its_place_with_four_quiet_modules_around() -> None:
    """ISO/IEC 18004, 9.1: the quiet zone is four modules wide."""
    svg = qr_svg(CONTENT, "where it leads")
    drawn = {(int(x), int(y)) for x, y in re.findall(r"M(\d+) (\d+)h1v1h-1z", svg)}
    symbol = segno.make(CONTENT, error="m", micro=False, boost_error=False)
    dark = {(x + 4, y + 4) for y, row in enumerate(symbol.matrix) for x, bit in enumerate(row) if bit}
    assert drawn == dark
    side = len(symbol.matrix) + 8
    assert f'viewBox="0 0 {side} {side}"' in svg


def test_the_content_is_told_to_those_who_do_not_see_it() -> None:
    svg = qr_svg(CONTENT, "where it leads")
    assert "<title>where it leads</title>" in svg and f"<desc>{CONTENT}</desc>" in svg


def test_other_content_gives_another_symbol() -> None:
    assert qr_svg(CONTENT, "x") != qr_svg(CONTENT + "0", "x")
