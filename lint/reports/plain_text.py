"""Text from a description or a file name, made safe to show: no control, format or direction characters."""

from __future__ import annotations

import re
from typing import Final

UNSAFE: Final = re.compile(
    "[\x00-\x1f\x7f-\x9f\xad\u034f\u061c\u115f\u1160\u17b4\u17b5\u180b-\u180f\u200b-\u200f\u2028-\u202e\u2060-\u206f"
    "\u3164\ufdd0-\ufdef\ufeff\uffa0\ufff0-\ufffb\ufffe\uffff\ud800-\udfff\U000110bd\U000110cd\U00013430-\U0001343f"
    "\U0001bca0-\U0001bca3\U0001d173-\U0001d17a\U000e0000-\U000e0fff"
    + "".join(f"{chr(plane + 0xFFFE)}{chr(plane + 0xFFFF)}" for plane in range(0x10000, 0x110000, 0x10000))
    + "]"
)
"""Controls, line separators, direction marks, halves of surrogate pairs, what is no character, and what has no look of
its own: Default_Ignorable_Code_Point of the Unicode Character Database less the variation selectors of the Basic
Multilingual Plane, which choose between two looks of the sign before them."""

MOST_MARKS: Final = 8
"""Most marks over or under one letter: more than any script piles up (common practice, no source)."""
_MARK_MAY_BE: Final = re.compile("[\u0300-\U000e01ef]{8}")


def plain(text: str) -> str:
    """The text with every character that could move a cursor or turn a line round written out as its number."""
    if text.isascii() and text.isprintable():
        return text
    safe = UNSAFE.sub(_numbered, text)
    return _thinned(safe) if _MARK_MAY_BE.search(safe) else safe


def _numbered(found: re.Match[str]) -> str:
    return f"\\u{ord(found[0]):04x}"


def _thinned(text: str) -> str:
    """The text with marks beyond the most that one letter carries written out: piled up they hide what stands above."""
    # Loaded here alone: few texts hold marks.
    from unicodedata import category

    signs, marks = [], 0
    for sign in text:
        marks = marks + 1 if category(sign) in ("Mn", "Me") else 0
        signs.append(sign if marks <= MOST_MARKS else f"\\u{ord(sign):04x}")
    return "".join(signs)
