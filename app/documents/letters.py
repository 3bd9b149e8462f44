"""What becomes of a person's text on paper: nothing missing, nothing that reads otherwise.

PDF/A forbids a glyph that is missing, rightly: a blank box in a name is a
misreading. A certificate must not fail over a name either. A character that
the bundled fonts lack is therefore shown as its Unicode code, e.g.
\u27e8U+4E2D\u27e9, while the attached data keep the name as it was written. The
same is done with control and direction-changing characters, which could make a
text read otherwise than it is.
"""

from __future__ import annotations

import re
import unicodedata
from typing import Any

NO_BREAK_SPACE = "\u00a0"
ZERO_WIDTH_SPACE = "\u200b"
LONGEST_WORD = 24
PIECE = 12

# Cc, Cf, Co, Cs, Cn: control, format (bidirectional overrides), private, lone surrogate, unassigned.
HIDDEN = "C"
SURELY_PRINTED = frozenset(map(chr, range(0x20, 0x180))) | frozenset(
    "\u2013\u2212\u202f\u2264\u2265\u27e8\u27e9\u200b\u00a0"
)


# Spaces that must not become a line break: after a sign, between a number and its unit.
_AFTER_SIGN = re.compile(r"(?<=[<>±=≤≥]) (?=\d)")
_BEFORE_UNIT = re.compile(r"(?<=\d) (?=(?:mg/L|mL|nm|°C|µS/cm|NTU|AU|h|min|kg|g)\b|%)")


def _code(character: str) -> str:
    return f"\u27e8U+{ord(character):04X}\u27e9"


def printable(text: str) -> str:
    """Return a person's text on one line, with hidden characters shown as codes.

    Parameters
    ----------
    text : str
        Any text.

    Returns
    -------
    str
        In normal form C; white space of any kind is one space, a word of more than
        24 characters may break, a number may not leave its sign or its unit.
    """
    flat = unicodedata.normalize("NFC", " ".join(text.split()))
    shown = "".join(_code(c) if unicodedata.category(c)[0] == HIDDEN else c for c in flat)
    words = " ".join(_breakable(word) for word in shown.split(" "))
    return _BEFORE_UNIT.sub(NO_BREAK_SPACE, _AFTER_SIGN.sub(NO_BREAK_SPACE, words))


def _breakable(word: str) -> str:
    """Allow a break in a long word, never between a letter and its marks."""
    if len(word) <= LONGEST_WORD:
        return word
    letters: list[str] = []
    for character in word:
        if letters and unicodedata.combining(character):
            letters[-1] += character
        else:
            letters.append(character)
    pieces = ["".join(letters[i : i + PIECE]) for i in range(0, len(letters), PIECE)]
    return ZERO_WIDTH_SPACE.join(pieces)


def held_together(text: str) -> str:
    """Return a number with its sign and unit so that no line break parts them."""
    return printable(text).replace(ZERO_WIDTH_SPACE, "").replace(" ", NO_BREAK_SPACE)


def without(value: Any, cannot: frozenset[str]) -> Any:
    """Return nested texts with the given characters shown as codes."""
    if isinstance(value, str):
        return "".join(_code(c) if c in cannot else c for c in value) if cannot else value
    if isinstance(value, dict):
        return {key: without(one, cannot) for key, one in value.items()}
    if isinstance(value, list | tuple):
        return [without(one, cannot) for one in value]
    return value


def characters(value: Any) -> frozenset[str]:
    """Return every character of nested texts."""
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list | tuple):
        return frozenset().union(*(characters(one) for one in value))
    return frozenset(value) if isinstance(value, str) else frozenset()


def missing_glyphs(diagnostic: str) -> frozenset[str]:
    """Return the characters that a typesetter's diagnostic says its fonts lack.

    ASCII is never among them: it belongs to the escapes of the diagnostic.
    """
    found: set[str] = set()
    for quoted in re.findall(r'the text `"((?:[^"\\]|\\.)*)"` could not be displayed', diagnostic):
        plain = re.sub(r"\\u\{([0-9a-f]+)\}", lambda m: chr(int(m[1], 16)), quoted)
        found |= {c for c in plain if ord(c) > 0x7F}
    return frozenset(found)
