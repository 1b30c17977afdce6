"""Tabs: part of a text in quotes, a block of text or a comment; anywhere else, YAML readers disagree about them."""

from __future__ import annotations

import re
from collections.abc import Iterator

import yaml

from tidegate.lint.description.place import Fault, Place

Span = tuple[tuple[int, int], tuple[int, int]]


def tab_fault(name: str, text: str, root: yaml.Node | None) -> Fault | None:
    """The first tab of a text that is no part of a value or comment; None where there is none."""
    texts: dict[int, list[Span]] = {}
    for span in _texts(root) if root is not None else ():
        for number in range(span[0][0], span[1][0] + 1):
            texts.setdefault(number, []).append(span)
    for number, line in enumerate(re.split("\r\n|[\n\r]", text)):
        inside = texts.get(number, [])
        comment = _comment(line, number, inside) if "\t" in line else 0
        for column in _tabs(line):
            if column < comment and not _within((number, column), inside):
                return Fault(Place(name, number + 1, column + 1), "", "a tab", "use spaces")
    return None


def _tabs(line: str) -> Iterator[int]:
    column = line.find("\t")
    while column >= 0:
        yield column
        column = line.find("\t", column + 1)


def _texts(root: yaml.Node) -> Iterator[Span]:
    """Where each text in quotes and each block of text begins and ends."""
    seen: set[int] = set()
    waiting = [root]
    while waiting:
        node = waiting.pop()
        if id(node) in seen:
            continue
        seen.add(id(node))
        if isinstance(node, yaml.MappingNode):
            waiting += [part for pair in node.value for part in pair]
        elif isinstance(node, yaml.SequenceNode):
            waiting += node.value
        elif isinstance(node, yaml.ScalarNode) and node.style:
            start, end = node.start_mark, node.end_mark
            begin = (start.line + 1, -1) if node.style in "|>" else (start.line, start.column)
            yield begin, (end.line, end.column)


def _within(place: tuple[int, int], spans: list[Span]) -> bool:
    return any(start < place < end for start, end in spans)


def _comment(line: str, number: int, spans: list[Span]) -> int:
    """The column where the comment of a line begins; beyond its end where it has none."""
    column = line.find("#")
    while column >= 0:
        if (column == 0 or line[column - 1] in " \t") and not _within((number, column), spans):
            return column
        column = line.find("#", column + 1)
    return len(line)
