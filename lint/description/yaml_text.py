"""One YAML file as plain data, with the place of everything in it.

PyYAML composes the nodes; what a scalar means is decided here, so that the traps of YAML 1.1 are errors with a place:
``off`` is no boolean, ``010`` no octal and ``1:30`` no number of seconds.  The C parser of PyYAML and the pure Python one
give the same result; where the text cannot be parsed, the pure one supplies the wording.
"""

from __future__ import annotations

import gc
import re
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import Any, Final, TypeAlias

import yaml

from tidegate.lint.description.place import DescriptionError, Fault, Place

MOST_BYTES: Final = 64 * 1024 * 1024
"""Largest file that is read."""
MOST_DEPTH: Final = 32
"""Deepest nesting of mappings and lists that is read."""
MOST_ALIAS_GROWTH: Final = 16
"""How many times larger than its own nodes a file may become when its aliases are expanded."""

Plain: TypeAlias = "dict[str, Plain] | list[Plain] | str | int | float | bool"
Step: TypeAlias = "str | int"

_CLOADER: Final = getattr(yaml, "CSafeLoader", None)
_STR: Final = "tag:yaml.org,2002:str"
_STANDARD: Final = "tag:yaml.org,2002:"
_KNOWN_TAGS: Final = frozenset({_STANDARD + "seq", _STANDARD + "map"})
_NULL: Final = frozenset({"", "~", "null", "Null", "NULL"})
_BOOLEANS: Final = {"true": True, "false": False}
_SWITCH_WORDS: Final = frozenset({"y", "n", "yes", "no", "on", "off", "true", "false"})
_INTEGER: Final = re.compile(r"[+-]?(?:0|[1-9][0-9]{0,15})", re.ASCII)
_FLOAT: Final = re.compile(r"[+-]?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][+-]?[0-9]{1,3})?", re.ASCII)
_TRAP: Final = re.compile(
    r"[+-]?(?:0[0-7_]+|0[xob][0-9a-fA-F_]+|[0-9][0-9_]*(?::[0-5]?[0-9])+(?:\.[0-9_]*)?)", re.ASCII
)
_NOT_TEXT: Final = re.compile("[^\\x09\\x0a\\x0d\\x20-\\x7e\\x85\\xa0-\\ud7ff\\ue000-\\ufffd\\U00010000-\\U0010ffff]")


class YamlFile:
    """A YAML file: its plain data, the place of every key and value, and the keys that have no value yet."""

    def __init__(
        self, name: str, root: yaml.Node | None, data: dict[str, Plain], empty: Sequence[tuple[Step, ...]] = ()
    ) -> None:
        self.name = name
        self.data = data
        self.empty = tuple(empty)
        self.root = root
        self._pairs: dict[int, dict[str, tuple[yaml.Node, yaml.Node]]] = {}

    def place(self, path: Sequence[Step], *, key: bool = False) -> Place | None:
        """Where the value (or the key) at a path stands; None if nothing stands there."""
        node, at = self.root, self.root
        for step in path:
            if isinstance(node, yaml.MappingNode):
                pair = self._pairs_of(node).get(str(step))
                if pair is None:
                    return None
                at, node = pair
            elif isinstance(node, yaml.SequenceNode) and isinstance(step, int) and step < len(node.value):
                at = node = node.value[step]
            else:
                return None
        chosen = at if key else node
        return self._at(chosen) if chosen is not None else Place(self.name, 1, 1)

    def _pairs_of(self, node: yaml.MappingNode) -> dict[str, tuple[yaml.Node, yaml.Node]]:
        pairs = self._pairs.get(id(node))
        if pairs is None:
            pairs = self._pairs[id(node)] = {key.value: (key, value) for key, value in node.value}
        return pairs

    def _at(self, node: yaml.Node) -> Place:
        return Place(self.name, node.start_mark.line + 1, node.start_mark.column + 1)


def read_yaml(name: str, content: bytes) -> YamlFile:
    """Read the content of one file; an empty file is an empty mapping.

    Raises: DescriptionError: with every fault of the text that can be told apart.
    """
    text = _decoded(name, content)
    root = _composed(name, text)
    if root is None:
        return YamlFile(name, None, {})
    faults: list[Fault] = []
    reader = _Reader(name, faults)
    if not isinstance(root, yaml.MappingNode):
        faults.append(Fault(Place(name, 1, 1), "", "the file holds no mapping", "start with a section, such as rails:"))
        raise DescriptionError(faults)
    data = reader.mapping(root, (), 1)
    if not faults and reader.expanded > max(1000, MOST_ALIAS_GROWTH * reader.own):
        problem = f"aliases expand {reader.own} values to {reader.expanded}"
        faults.append(Fault(Place(name, 1, 1), "", problem, "write the values out"))
    if faults:
        raise DescriptionError(faults)
    return YamlFile(name, root, data, reader.empty)


def _decoded(name: str, content: bytes) -> str:
    if len(content) > MOST_BYTES:
        problem = f"the file has {len(content)} bytes"
        raise DescriptionError([Fault(Place(name), "", problem, f"at most {MOST_BYTES} are read")])
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line, column = _line_and_column(content[: error.start].decode("utf-8", "replace"))
        problem = f"byte 0x{content[error.start]:02x} is not UTF-8"
        raise DescriptionError([Fault(Place(name, line, column), "", problem, "save the file as UTF-8")]) from None
    found = _NOT_TEXT.search(text)
    if found:
        line, column = _line_and_column(text[: found.start()])
        problem = f"control character U+{ord(found[0]):04X}"
        raise DescriptionError([Fault(Place(name, line, column), "", problem, "remove it")])
    return text


def _line_and_column(before: str) -> tuple[int, int]:
    """Line and column, counted from 1, of what follows this text."""
    lines = re.split("\r\n|[\n\r\x85\u2028\u2029]", before)
    return len(lines), len(lines[-1]) + 1


@contextmanager
def _collector_off() -> Iterator[None]:
    """Composing makes many objects and no garbage: the collector would only walk them."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


def _composed(name: str, text: str) -> yaml.Node | None:
    try:
        with _collector_off():
            return _compose(text, _CLOADER or yaml.SafeLoader)
    except (yaml.YAMLError, RecursionError):
        pass
    # Said again by the parser whose wording does not depend on the installation.
    try:
        return _compose(text, yaml.SafeLoader)
    except RecursionError:
        raise DescriptionError([_too_deep(Place(name))]) from None
    except yaml.MarkedYAMLError as error:
        raise DescriptionError([_syntax_fault(name, error, text)]) from None
    except yaml.YAMLError as error:
        raise DescriptionError([Fault(Place(name), "", "the file is not YAML", str(error).splitlines()[0])]) from None


def _compose(text: str, loader_type: Any) -> yaml.Node | None:
    loader = loader_type(text)
    try:
        node: yaml.Node | None = loader.get_single_node()
        return node
    finally:
        loader.dispose()


def _too_deep(place: Place) -> Fault:
    return Fault(place, "", f"nested more than {MOST_DEPTH} levels deep", "a description needs far fewer")


# What the parser says, and what an engineer needs to hear.
_SYNTAX: Final = (
    ("expected a single document", "a second document begins here", "keep one description in a file; remove the ---"),
    (r"found character '\t'", "a tab", "indent with spaces"),
    ("mapping values are not allowed", "a colon where no key can stand", "indent it as a key, or quote the text"),
    ("found undefined alias", "an alias without its anchor", "write the value out"),
    ("second occurrence", "an anchor is set twice", "write the value out"),
    ("could not find expected ':'", "a key without its colon", "write key: value"),
    ("found unexpected end of stream", "a quoted text without its end", "close the quote"),
    ("did not find expected ',' or '}'", "a { without its }", "close it, with a comma between its entries"),
    ("expected ',' or '}'", "a { without its }", "close it, with a comma between its entries"),
    ("expected ',' or ']'", "a [ without its ]", "close it, with a comma between its entries"),
    ("found unknown escape character", "an unknown escape in a quoted text", "use single quotes"),
    ("cannot start any token", "a character that cannot begin a value", "put the value in quotes"),
    ("expected <block end>", "the indentation does not fit what stands above", "align it with its neighbours"),
    ("inconsistent", "the indentation does not fit what stands above", "align it with its neighbours"),
)


def _syntax_fault(name: str, error: yaml.MarkedYAMLError, text: str) -> Fault:
    mark = error.problem_mark or error.context_mark
    place = Place(name, mark.line + 1, mark.column + 1) if mark else Place(name)
    said = error.problem or error.context or ""
    line = text.splitlines()[mark.line] if mark and mark.line < len(text.splitlines()) else ""
    if "\t" in line[: len(line) - len(line.lstrip())]:
        return Fault(
            Place(name, place.line, line.index("\t") + 1), "", "a tab in the indentation", "indent with spaces"
        )
    for sign, problem, advice in _SYNTAX:
        if sign in said:
            return Fault(place, "", problem, advice)
    return Fault(place, "", "the text cannot be read as YAML here", said)


class _Reader:
    """Turns nodes into plain data and collects faults; counts values, own and with aliases expanded."""

    def __init__(self, name: str, faults: list[Fault]) -> None:
        self.name = name
        self.faults = faults
        self.own = 0
        self.expanded = 0
        self.empty: list[tuple[Step, ...]] = []
        self._seen: dict[int, tuple[Plain | None, int]] = {}

    def mapping(self, node: yaml.MappingNode, path: tuple[Step, ...], depth: int) -> dict[str, Plain]:
        """The data of a mapping; keys are text whatever they look like, empty values are left out as not given."""
        data: dict[str, Plain] = {}
        first: dict[str, yaml.Node] = {}
        for key_node, value_node in node.value:
            key = self._key(key_node, path)
            if key is None:
                continue
            if key in first:
                line = first[key].start_mark.line + 1
                self._fault(key_node, (*path, key), f"given twice (first in line {line})", "keep one of them")
                continue
            first[key] = key_node
            value = self.value(value_node, (*path, key), depth)
            if value is not None:
                data[key] = value
            elif isinstance(value_node, yaml.ScalarNode):
                self.empty.append((*path, key))
        return data

    def _key(self, node: yaml.Node, path: tuple[Step, ...]) -> str | None:
        if not isinstance(node, yaml.ScalarNode) or not node.tag.startswith(_STANDARD):
            self._fault(node, path, "a key that is no plain text", "write a name followed by a colon")
            return None
        if node.value == "<<" and not node.style:
            self._fault(node, path, "a merge key (<<)", "write the values out, or use include")
            return None
        text: str = node.value
        if not node.style and ":" in text:
            word = text.split(":", 1)[0]
            self._fault(node, (*path, word), f"no space after the colon (found {text!r})", f"write {word}: value")
            return None
        return text

    def value(self, node: yaml.Node, path: tuple[Step, ...], depth: int) -> Plain | None:
        """The data of any node; None where nothing is given."""
        seen = self._seen.get(id(node))
        if seen is not None:
            self.expanded += seen[1]
            if seen[1] == 0:
                self._fault(node, path, "an alias inside what it stands for", "write the values out")
            return seen[0]
        if isinstance(node, yaml.ScalarNode):
            self.own += 1
            self.expanded += 1
            return self._scalar(node, path)
        if depth > MOST_DEPTH:
            self.faults.append(_too_deep(self._place(node)))
            return None
        if node.tag not in _KNOWN_TAGS:
            self._fault(node, path, f"the tag {node.tag}", "remove it")
            return None
        self.own += 1
        before = self.expanded
        self.expanded += 1
        self._seen[id(node)] = (None, 0)
        data: Plain
        if isinstance(node, yaml.MappingNode):
            data = self.mapping(node, path, depth + 1)
        else:
            data = []
            for index, item in enumerate(node.value):
                value = self.value(item, (*path, index), depth + 1)
                if value is None and isinstance(item, yaml.ScalarNode) and item.value in _NULL:
                    self._fault(item, (*path, index), "an empty entry of a list", "remove it or fill it in")
                data.append("" if value is None else value)
        self._seen[id(node)] = (data, self.expanded - before)
        return data

    def _scalar(self, node: yaml.ScalarNode, path: tuple[Step, ...]) -> Plain | None:
        text: str = node.value
        if not node.tag.startswith(_STANDARD):
            self._fault(node, path, f"the tag {node.tag}", "remove it")
            return None
        if node.style:  # quoted, or a block of text
            return text
        if node.tag == _STR:
            return self._plain_text(node, text, path)
        if text in _NULL:
            return None
        if text in _BOOLEANS:
            return _BOOLEANS[text]
        if text.lower() in _SWITCH_WORDS:
            self._fault(node, path, f"{text} is read as true or false by some and as a word by others",
                        f'write true or false, or put it in quotes: "{text}"')  # fmt: skip
            return None
        if _INTEGER.fullmatch(text):
            return int(text)
        if _TRAP.fullmatch(text):
            problem = f"{text} is one number in YAML 1.1 and another to the reader"
            self._fault(node, path, problem, f'write it in decimal, or put it in quotes: "{text}"')
            return None
        if _FLOAT.fullmatch(text):
            return float(text)
        return text

    def _plain_text(self, node: yaml.ScalarNode, text: str, path: tuple[Step, ...]) -> Plain | None:
        """Text that YAML 1.1 takes for text: numbers such as 1e-6 are numbers all the same."""
        if text.lower() in {"y", "n"}:
            self._fault(node, path, f"{text} is read as true or false by some and as a word by others",
                        f'write true or false, or put it in quotes: "{text}"')  # fmt: skip
            return None
        return float(text) if _FLOAT.fullmatch(text) else text

    def _place(self, node: yaml.Node) -> Place:
        return Place(self.name, node.start_mark.line + 1, node.start_mark.column + 1)

    def _fault(self, node: yaml.Node, path: tuple[Step, ...], problem: str, advice: str) -> None:
        self.faults.append(Fault(self._place(node), dotted(path), problem, advice))


def dotted(path: Sequence[Step]) -> str:
    """A path as people write it: ``rails.avdd.rise.min``, ``waivers[2].until``."""
    text = ""
    for step in path:
        text += f"[{step}]" if isinstance(step, int) else f".{step}" if text else step
    return text
