"""Text for Markdown that stays text: in Markdown itself, and on the code hosts that look for names in it."""

from __future__ import annotations

import re
from typing import Final

from tidegate.lint.reports.plain_text import plain

_SYNTAX: Final = re.compile(r"[\\`*_\[\]<>|~&]")  # what Markdown, its tables and its HTML give a meaning
_REFERENCE: Final = re.compile(r"(?<=[@#!$%~&^:])(?=[\w\"'/])|(?<=www)(?=\.)|(?<=GH)(?=-)", re.IGNORECASE)
_APART: Final = "&#8203;"


def escaped(text: str) -> str:
    """Text that Markdown, and the code hosts that show it, take for nothing but text.

    A backslash keeps a sign from Markdown, but not from the host, which looks for @names, #numbers, :faces: and
    addresses in the finished page: there a space without width stands between the sign and what follows it.
    """
    pieces = []
    for piece in _REFERENCE.split(plain(text)):
        pieces.append(_SYNTAX.sub(r"\\\g<0>", piece))
    return _APART.join(pieces)


def code(text: str) -> str:
    """Text in code marks, whatever is in it; hosts look for nothing in there."""
    clean = plain(text) or " "
    longest = max((len(run) for run in re.findall("`+", clean)), default=0)
    marks = "`" * (longest + 1)
    space = " " if longest or clean != clean.strip() else ""
    return f"{marks}{space}{clean}{space}{marks}"


def code_in_table(text: str) -> str:
    """``code`` in a cell of a table, where a bar would end the cell."""
    return code(text).replace("|", "\\|")
