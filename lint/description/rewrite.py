"""Writes values into a description and touches nothing else: comments, order, layout and line ends stay as they are.

A value is exchanged in the text itself, between the positions at which the parser found it.  What is written is read
again before it is handed on: all other data must be what they were.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from pathlib import Path as FilePath
from typing import Any, Final, NamedTuple

import yaml

from tidegate.lint.description.place import DescriptionError, Fault, Path, Place, dotted
from tidegate.lint.description.plain_data import Plain
from tidegate.lint.description.whole_file import write_whole
from tidegate.lint.description.yaml_nodes import UNTYPED, node_tree
from tidegate.lint.description.yaml_text import read_yaml

_BOM: Final = b"\xef\xbb\xbf"
_PLAIN_VALUE: Final = re.compile(r"[A-Za-z0-9.][A-Za-z0-9.%/^* -]*", re.ASCII)
_QUOTES: Final = ('"', "'")


def rewritten(name: str, content: bytes, values: Mapping[Path, str]) -> bytes:
    """The content of a file with other values at some paths.

    ``name`` is the name of the file in messages.
    Raises: DescriptionError: where a value is not a plain text on one line that stands for itself alone.
    """
    written = _Written(name, content)
    faults: list[Fault] = []
    edits: list[_Edit] = []
    for path, value in values.items():
        assert _PLAIN_VALUE.fullmatch(value), f"{value!r} is no plain value"
        try:
            edits.append(written.edit(path, value))
        except DescriptionError as error:
            faults += error.faults
    if faults:
        raise DescriptionError(faults)
    text = written.text
    for edit in sorted(edits, reverse=True):
        text = text[: edit.start] + edit.value + text[edit.end :]
    result = (_BOM if content.startswith(_BOM) else b"") + text.encode("utf-8")
    _check(name, content, result, values)
    return result


def replace_file(path: FilePath, content: bytes) -> None:
    """Put the content in place of a file at once: whoever reads it sees the old one or the new one, whole.

    Raises: OSError: where the folder or the file cannot be written; the old file is then as it was.
    """
    write_whole(path, [content], lasting=True)


class _Edit(NamedTuple):
    """From where to where the text changes, and to what."""

    start: int
    end: int
    value: str


class _Written:
    """A file as it is written: its text, and the nodes in it."""

    def __init__(self, name: str, content: bytes) -> None:
        self.name = name
        self.text = content.decode("utf-8-sig")
        self._root = node_tree(name, content)
        self._shared = _shared(self._root)

    def edit(self, path: Path, value: str) -> _Edit:
        """The change that puts a value at a path.

        Raises: DescriptionError: where there is no plain text at the path that stands for itself alone.
        """
        nodes = list(_way(self._root, path))
        if len(nodes) <= len(path):
            raise self._fault(nodes[-1] if nodes else None, path, "stands nowhere in the file", value)
        node = nodes[-1]
        if any(id(each) in self._shared for each in nodes):
            raise self._fault(node, path, "an alias (*) makes this value stand in several places", value)
        if not isinstance(node, yaml.ScalarNode):
            raise self._fault(node, path, "no single value", value)
        start, end = node.start_mark.index, node.end_mark.index
        written = self.text[start:end]
        if written == "" == node.value:  # a key without a value yet
            gap = "" if self.text[start - 1].isspace() else " "
            return _Edit(start, end, f"{gap}{value}")
        quote = node.style if node.style in _QUOTES else ""
        if node.tag != UNTYPED or written != f"{quote}{node.value}{quote}" or len(written.splitlines()) > 1:
            raise self._fault(node, path, "not written as plain text on one line", value)
        return _Edit(start, end, f"{quote}{value}{quote}")

    def _fault(self, node: yaml.Node | None, path: Path, problem: str, value: str) -> DescriptionError:
        place = (
            Place(self.name) if node is None else Place(self.name, node.start_mark.line + 1, node.start_mark.column + 1)
        )
        return DescriptionError([Fault(place, dotted(path), problem, f"write {value} there yourself")])


def _way(root: yaml.Node | None, path: Path) -> Iterator[yaml.Node]:
    """The nodes from the root along a path, as far as it can be followed."""
    node = root
    if node is not None:
        yield node
    for step in path:
        if isinstance(node, yaml.MappingNode):
            node = next((value for key, value in node.value if key.value == step), None)
        elif isinstance(node, yaml.SequenceNode) and isinstance(step, int) and step < len(node.value):
            node = node.value[step]
        else:
            return
        if node is None:
            return
        yield node


def _shared(root: yaml.Node | None) -> frozenset[int]:
    """The nodes that stand in more than one place, by their identity."""
    seen: set[int] = set()
    shared: set[int] = set()
    waiting = [] if root is None else [root]
    while waiting:
        node = waiting.pop()
        if id(node) in seen:
            shared.add(id(node))
            continue
        seen.add(id(node))
        if isinstance(node, yaml.MappingNode):
            waiting += [part for pair in node.value for part in pair]
        elif isinstance(node, yaml.SequenceNode):
            waiting += node.value
    return frozenset(shared)


def _check(name: str, before: bytes, after: bytes, values: Mapping[Path, str]) -> None:
    """Read both again: the values are there, and nothing else has changed."""
    expected, found = read_yaml(name, before).data, read_yaml(name, after).data
    for path, value in values.items():
        _put(expected, path, value)
    assert found == expected, f"{name}: rewriting would change more than {', '.join(map(dotted, values))}"


def _put(data: Plain, path: Path, value: str) -> None:
    *above, last = path
    for step in above:
        data = _inside(data)[step]
    _inside(data)[last] = value


def _inside(data: Plain) -> Any:
    assert isinstance(data, dict | list)
    return data
