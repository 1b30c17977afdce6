"""Lines of a text report: labelled, wrapped to the width, and clear of what would move a cursor."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

from tidegate.lint.reports.columns import columns, wrapped
from tidegate.lint.reports.paint import Line
from tidegate.lint.reports.plain_text import plain

LABEL: Final = 9
"""Columns in which fail, why, path and mend stand."""
_LEAST_ROOM: Final = 24


def blank() -> Line:
    """An empty line."""
    return Line((("", ""),))


def plain_line(text: str, style: str = "") -> Line:
    """A line as it is."""
    return Line(((plain(text), style),))


def room(width: int, indent: int) -> int:
    """How many columns a labelled text has."""
    return max(width - indent - LABEL, _LEAST_ROOM)


def wrapped_lines(label: str, text: str, width: int, *, indent: int, style: str = "") -> Iterator[Line]:
    """A label, and a text that keeps clear of it on every line."""
    most = room(width, indent) if label else max(width - indent, _LEAST_ROOM)
    margin = " " * indent
    for number, part in enumerate(wrapped(plain(text), most) or [""]):
        if not label:
            yield Line(((margin + part, style),))
        else:
            head = label.ljust(LABEL) if number == 0 else " " * LABEL
            yield Line(((margin + head, "dim"), (part, style)))


def two_ends(left: str, right: str, width: int, style: str) -> Iterator[Line]:
    """Text at both ends of the line; the right one below the left one where there is no room beside it."""
    left, right = plain(left), plain(right)
    gap = width - columns(left) - columns(right)
    if gap >= 2:
        yield Line(((left, style), (" " * gap, ""), (right, "dim")))
        return
    yield from wrapped_lines("", left, width, indent=0, style=style)
    yield Line((("  ", ""), (right, "dim")))
