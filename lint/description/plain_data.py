"""A tree of YAML nodes as plain data, by rules of our own.

The traps of YAML 1.1 are faults with a place: ``off`` is no boolean, ``010`` no octal, ``1:30`` no number of seconds.
A value with a fault keeps its text in the data, so that one fault does not draw others after it.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Final, TypeAlias

import yaml

from tidegate.lint.description.place import DescriptionError, Fault, Path, Place, Step, dotted
from tidegate.lint.description.yaml_nodes import NOT_TEXT, UNTYPED, TooDeepError
from tidegate.lint.found import quoted, with_space
from tidegate.lint.limits import LARGEST_NUMBER, MOST_BYTES, MOST_DEPTH, MOST_EXPANDED, MOST_GROWTH, MOST_TEXT

Plain: TypeAlias = "dict[str, Plain] | list[Plain] | str | int | float | bool"

NULLS: Final = frozenset({"", "~", "null", "Null", "NULL"})
_BOOLEANS: Final = {"true": True, "false": False}
_SWITCH_WORDS: Final = frozenset(
    variant
    for word in ("y", "n", "yes", "no", "on", "off", "true", "false")
    for variant in (word, word.capitalize(), word.upper())
) - frozenset(_BOOLEANS)
_SPECIAL: Final = NULLS | _SWITCH_WORDS | frozenset(_BOOLEANS)

_INTEGER: Final = re.compile(r"[+-]?(?:0|[1-9][0-9]{0,15})", re.ASCII)
_FLOAT: Final = re.compile(r"[+-]?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?", re.ASCII)
_TRAP: Final = re.compile(
    r"[+-]?(?:0[0-7_]+|0b[01_]+|0o[0-7_]+|0x[0-9a-fA-F_]+|[0-9][0-9_]*(?::[0-5]?[0-9])+(?:\.[0-9_]*)?)", re.ASCII
)


class PlainFile:
    """The plain data of one file, the keys that have no value yet, and what is wrong with the file."""

    def __init__(self, name: str, root: yaml.MappingNode) -> None:
        """Read a tree of nodes.

        Raises: DescriptionError: where it is nested too deep, or its aliases stand for too much.
        """
        self.faults: list[Fault] = []
        self.spoiled: list[str] = []  # paths of values that are not what the author meant
        self.empty: list[Path] = []
        self.has_own_keys = False
        self._name = name
        self._path: list[Step] = []
        self._size = 0  # of the text so far in characters, aliases expanded
        self._seen: dict[int, tuple[Plain, int | None]] = {}
        if root.tag != UNTYPED:
            self._fault(root, None, f"a tag (found {_tag(root)})", "remove it")
        self._seen[id(root)] = ({}, None)
        self.data = self._mapping(root)
        own = root.end_mark.index - root.start_mark.index
        most = max(MOST_EXPANDED, min(MOST_GROWTH * own, MOST_BYTES))
        if self._size > most:
            problem = f"aliases (*) make {own} characters stand for more than {most}"
            raise DescriptionError([*self.faults, Fault(Place(name, 1, 1), "", problem, "write the values out")])

    def _mapping(self, node: yaml.MappingNode) -> dict[str, Plain]:
        """The data of a mapping; keys are text whatever they look like, empty values are left out as not given."""
        data: dict[str, Plain] = {}
        first: dict[str, yaml.Node] = {}
        for key_node, value_node in node.value:
            key = key_node.value
            if not (isinstance(key_node, yaml.ScalarNode) and key_node.tag == UNTYPED and key.isidentifier()):
                key = self._odd_key(key_node)
                if key is None:
                    continue
                if key != key_node.value:  # the value stands in the key
                    data[key] = key_node.value.partition(":")[2]
                    continue
                if key.startswith("x-"):
                    self.has_own_keys = True
            if key in first:
                line = first[key].start_mark.line + 1
                by_alias = key_node.start_mark.index < node.start_mark.index  # it stands where its anchor stands
                at = value_node if by_alias else key_node
                self._note(at, (*self._path, key), f"given twice (first in line {line})", "keep one of them")
                continue
            first[key] = key_node
            self._size += len(key)
            value = self._value(value_node, key)
            if value is None:
                self.empty.append((*self._path, key))
            else:
                data[key] = value
        return data

    def _odd_key(self, node: yaml.Node) -> str | None:
        """A key that is no plain word: its text, or the part that was meant as the key; None where it is none."""
        if not isinstance(node, yaml.ScalarNode) or node.tag != UNTYPED:
            self._fault(node, None, "a key that is no plain text", "write a name followed by a colon")
            return None
        text: str = node.value
        if node.style:
            return text if self._checked(node, text) == text else None
        if text == "<<":
            self._fault(node, None, "a merge key (<<)", "write the values out, or use include")
            return None
        if ":" in text and not text.startswith("x-"):
            word, _, value = text.partition(":")
            self._fault(node, word, f"no space after the colon (found {quoted(text)})", with_space(word, value))
            return word
        return text

    def _value(self, node: yaml.Node, step: Step) -> Plain | None:
        """The data of any node; None where nothing is given."""
        if isinstance(node, yaml.ScalarNode):
            text: str = node.value
            self._size += len(text) + 1
            if len(text) > MOST_TEXT:
                return self._too_long(node, step, text)
            if node.tag != UNTYPED:
                return self._tagged(node, step, text)
            if node.style:  # quoted, or a block of text
                return self._checked(node, text, step)
            return self._special(node, text, step) if text in _SPECIAL else self._number_or_text(node, text, step)
        seen = self._seen.get(id(node))
        if seen is not None:
            data, size = seen
            if size is None:
                self._fault(node, step, "an alias (*) inside what it stands for", "write the values out")
            self._size += size or 0
            return data
        if node.tag != UNTYPED:
            return self._tagged(node, step, {})
        before = self._size
        self._size += 1
        self._path.append(step)
        if len(self._path) > MOST_DEPTH:
            raise DescriptionError([TooDeepError(node.start_mark).fault(self._name)])
        self._seen[id(node)] = ("", None)
        data = self._mapping(node) if isinstance(node, yaml.MappingNode) else self._list(node)
        self._path.pop()
        self._seen[id(node)] = (data, self._size - before)
        return data

    def _list(self, node: yaml.Node) -> list[Plain]:
        data: list[Plain] = []
        for index, item in enumerate(node.value):
            value = self._value(item, index)
            if value is None:
                self._fault(item, index, "an empty entry of a list", "remove it or fill it in")
                value = ""
            data.append(value)
        return data

    def _special(self, node: yaml.Node, text: str, step: Step) -> Plain | None:
        """One of the words to which YAML 1.1 gives a meaning."""
        if text in _SWITCH_WORDS:
            problem = f"{text} is read as true or false by some and as a word by others"
            self._fault(node, step, problem, f'write true or false, or put it in quotes: "{text}"')
            return text
        return _BOOLEANS.get(text)

    def _number_or_text(self, node: yaml.Node, text: str, step: Step) -> Plain:
        if text[0] not in "+-0123456789":
            return text
        if _INTEGER.fullmatch(text):
            return int(text)
        if _TRAP.fullmatch(text):
            problem = f"{quoted(text)} is read as decimal by some, as octal, hexadecimal or base 60 by others"
            self._fault(node, step, problem, "write a decimal number, or put it in quotes")
            return text
        if _FLOAT.fullmatch(text):
            number = float(text)
            vanished = number == 0.0 and text.lower().partition("e")[0].strip("+-0.") != ""
            if abs(number) <= LARGEST_NUMBER and not vanished:
                return number
            size, better = ("small", "larger") if vanished else ("large", "smaller")
            self._fault(node, step, f"too {size} a number (found {quoted(text)})", f"write a {better} one")
        return text

    def _too_long(self, node: yaml.Node, step: Step, text: str) -> Plain:
        problem = f"a text of {len(text)} characters, where at most {MOST_TEXT} are read"
        self._fault(node, step, problem, "shorten it, or name the document that says it")
        return text[:1]

    def _tagged(self, node: yaml.Node, step: Step, data: Plain) -> Plain:
        self._fault(node, step, f"a tag (found {_tag(node)})", "remove it")
        return data

    def _checked(self, node: yaml.ScalarNode, text: str, step: Step | None = None) -> str:
        """A quoted text; only an escape in double quotes can bring in what the file itself may not hold."""
        found = NOT_TEXT.search(text) if node.style == '"' else None
        if found is None:
            return text
        self._fault(node, step, f"the character U+{ord(found[0]):04X} is not allowed in a text", "remove it")
        return NOT_TEXT.sub("", text)

    def _fault(self, node: yaml.Node, step: Step | None, problem: str, advice: str) -> None:
        path = self._path if step is None else (*self._path, step)
        self.spoiled.append(dotted(path))
        self._note(node, path, problem, advice)

    def _note(self, node: yaml.Node, path: Sequence[Step], problem: str, advice: str) -> None:
        place = Place(self._name, node.start_mark.line + 1, node.start_mark.column + 1)
        self.faults.append(Fault(place, dotted(path), problem, advice))


def _tag(node: yaml.Node) -> str:
    return quoted(node.tag.replace("tag:yaml.org,2002:", "!!"))
