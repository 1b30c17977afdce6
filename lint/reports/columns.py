"""How many columns of a terminal a text takes, and text broken into lines of so many.

Signs of East Asian scripts and emoji take two columns, marks over a letter none: Unicode Standard Annex 11 (East Asian
Width), whose wide (W) and full-width (F) signs are those of two columns.
"""

from __future__ import annotations

import textwrap
from collections.abc import Iterator
from functools import lru_cache
from typing import Final

_AS_EMOJI: Final = "\ufe0f"
"""Makes an emoji, of two columns, of the sign before it: Unicode Technical Standard 51."""


def columns(text: str) -> int:
    """The columns that a text takes."""
    return len(text) if text.isascii() else sum(map(_columns_of, text))


@lru_cache(maxsize=4096)
def _columns_of(sign: str) -> int:
    # Loaded here alone: most texts hold ASCII only.
    from unicodedata import category, east_asian_width

    if sign == _AS_EMOJI:
        return 1
    if category(sign) in ("Mn", "Me", "Cf"):
        return 0
    return 2 if east_asian_width(sign) in "WF" else 1


def wrapped(text: str, most: int) -> list[str]:
    """The text in lines of at most so many columns, broken at spaces and inside what is longer than a line."""
    if columns(text) == len(text):
        return textwrap.wrap(text, most, break_on_hyphens=False)
    lines: list[str] = []
    line, taken = "", 0
    for word in (piece for long in text.split(" ") if long for piece in _pieces(long, most)):
        size = columns(word)
        if line and taken + 1 + size <= most:
            line, taken = f"{line} {word}", taken + 1 + size
        else:
            lines += [line] if line else []
            line, taken = word, size
    return [*lines, line] if line else lines


def _pieces(word: str, most: int) -> Iterator[str]:
    """A word in pieces that fit a line; a mark stays with its letter."""
    piece, taken = "", 0
    for sign in word:
        size = _columns_of(sign)
        if piece and taken + size > most:
            yield piece
            piece, taken = "", 0
        piece += sign
        taken += size
    yield piece
