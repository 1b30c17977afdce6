"""Bytes to a tree of YAML nodes with their places.

What a scalar means is left open here: no node is given a type by the parser, so that none of the types of YAML 1.1 can
slip in.  The C parser of PyYAML and the pure Python one give the same tree; where a text cannot be parsed, the pure one
says why, because its wording does not depend on the installation.
"""

from __future__ import annotations

import re
from typing import Any, Final, Protocol

import yaml

from tidegate.lint.description.place import DescriptionError, Fault, Place
from tidegate.lint.limits import MOST_DEPTH

UNTYPED: Final = "?"
"""The tag of every node that the file gives none."""

# Neither text nor harmless: control characters, halves of surrogate pairs, line ends that editors do not count as
# such, marks of byte order inside the text.
NOT_TEXT: Final = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u2028\u2029\ud800-\udfff\ufeff\ufffe\uffff]")


class Parser(Protocol):
    """Composes the one document of a text."""

    def get_single_node(self) -> yaml.Node | None:
        """The root node; None where the text holds no document."""

    def dispose(self) -> None:
        """Break the rings between the parser and its parts."""


class _Untyped:
    """What both parsers ask about each node; the answers keep them from deciding anything."""

    def resolve(self, kind: Any, value: Any, implicit: Any) -> str:
        return UNTYPED

    def descend_resolver(self, parent: Any, index: Any) -> None:
        pass

    def ascend_resolver(self) -> None:
        pass


_next_event: Final[Any] = yaml.BaseLoader.peek_event
_scan_plain: Final[Any] = yaml.BaseLoader.scan_plain
_peek: Final[Any] = yaml.BaseLoader.peek


class PureParser(_Untyped, yaml.BaseLoader):
    """The pure Python parser; refuses deep nesting before it runs out of stack."""

    def __init__(self, text: str) -> None:
        super().__init__(text)
        self._depth = 0

    def compose_node(self, parent: yaml.Node | None, index: Any) -> yaml.Node | None:
        """Compose a node and what is below it."""
        if self._depth > MOST_DEPTH:
            event: Any = _next_event(self)
            if isinstance(event, yaml.CollectionStartEvent):
                raise TooDeepError(event.start_mark)
        self._depth += 1
        node = super().compose_node(parent, index)
        self._depth -= 1
        return node

    def scan_plain(self) -> Any:
        """Scan a text without quotes; a ? in it is part of it in flow style too, as it is to the C parser."""
        if not self.flow_level:
            return _scan_plain(self)
        peek = _peek
        shadow: Any = self  # by a method of its own, as long as this text lasts
        shadow.peek = lambda index=0: "x" if (sign := peek(self, index)) == "?" else sign
        try:
            return _scan_plain(self)
        finally:
            del shadow.peek


class TooDeepError(Exception):
    """A mapping or list lies deeper than any description needs."""

    def __init__(self, mark: Any) -> None:
        self.mark = mark
        super().__init__()

    def fault(self, name: str) -> Fault:
        """The fault of the file of this name."""
        place = Place(name, self.mark.line + 1, self.mark.column + 1)
        return Fault(place, "", f"nested more than {MOST_DEPTH} levels deep", "a description needs far fewer")


PARSER: type[Parser] = PureParser
"""The fastest parser there is."""
if yaml.__with_libyaml__:
    from yaml._yaml import CParser

    class FastParser(_Untyped, CParser):
        """The C parser."""

    PARSER = FastParser


def node_tree(name: str, content: bytes, parser: type[Parser] = PARSER) -> yaml.Node | None:
    """The root node of the content of a file; None where it holds no document.

    Raises: DescriptionError: where the content is no text, or no YAML.
    """
    text = _decoded(name, content)
    tabs = "\t" in text
    if tabs and text.lstrip().startswith("{"):
        text, tabs = text.replace("\t", " "), False  # JSON: its quoted texts hold no bare tab
    try:
        root = _composed(text, parser)
    except (yaml.YAMLError, TooDeepError) as error:
        root = _composed_or_explained(name, text, error)
    if tabs:
        # Loaded here alone: few files hold tabs.
        from tidegate.lint.description.tabs import tab_fault

        fault = tab_fault(name, text, root)
        if fault is not None:
            raise DescriptionError([fault])
    return root


_LONG: Final = 300_000
"""Texts longer than this, in characters, are not given whole to the pure Python parser."""


def _composed_or_explained(name: str, text: str, first: yaml.YAMLError | TooDeepError) -> yaml.Node | None:
    """What the pure Python parser makes of a text that a parser refused: a tree after all, or the fault.

    It is slow, so that of a long text it is given parts, as long as they lead to the same line; where no part does, the
    first parser has the last word.
    """
    from tidegate.lint.description.syntax_faults import earliest_line, parts_alone, same_trouble, syntax_fault

    line = earliest_line(first)
    early = "nesting depth" in str(first)  # what the slow parser meets early, too
    found: yaml.YAMLError | TooDeepError | None = None
    for part, whole_section in parts_alone(text, line):
        if len(part.lstrip("\n")) > _LONG and not early:
            continue
        try:
            _composed(part, PureParser)
        except TooDeepError as error:
            if whole_section:
                found = error
                break
        except yaml.YAMLError as error:
            if earliest_line(error) == line and same_trouble(error, first):
                found = error
                break
    if found is None:
        if len(text) > _LONG and not early:
            found = first
        else:
            try:
                return _composed(text, PureParser)
            except (yaml.YAMLError, TooDeepError) as error:
                found = error
    fault = found.fault(name) if isinstance(found, TooDeepError) else syntax_fault(name, found, text)
    raise DescriptionError([fault]) from None


def _composed(text: str, parser: type[Any]) -> yaml.Node | None:
    composer: Parser = parser(text)
    try:
        return composer.get_single_node()
    finally:
        composer.dispose()


def _decoded(name: str, content: bytes) -> str:
    content = content.removeprefix(b"\xef\xbb\xbf")
    try:
        text = content.decode()
    except UnicodeDecodeError as error:
        place = _place_after(name, content[: error.start].decode())
        problem = f"byte 0x{content[error.start]:02X} is not UTF-8"
        raise DescriptionError(
            [_no_text(name, content) or Fault(place, "", problem, "save the file as UTF-8")]
        ) from None
    found = NOT_TEXT.search(text)
    if found:
        place = _place_after(name, text[: found.start()])
        problem = f"the character U+{ord(found[0]):04X} is not allowed"
        raise DescriptionError([_no_text(name, content) or Fault(place, "", problem, "remove it")])
    return text


def _no_text(name: str, content: bytes) -> Fault | None:
    """What kind of file it is where it is no text at all, or one of another encoding."""
    empty = [byte == 0 for byte in content[:4]]
    other_widths = ([True, False, True, False], [False, True, False, True], [False, True, True, True])
    if content.startswith((b"\xff\xfe", b"\xfe\xff")) or empty in other_widths:
        return Fault(Place(name, 1, 1), "", "the file is UTF-16 or UTF-32", "save it as UTF-8")
    if sum(byte < 9 or 13 < byte < 27 for byte in content[:_LOOKED_AT]) >= _CONTROLS_OF_NO_TEXT:
        return Fault(Place(name), "", "the file is no text", "name a description in YAML or JSON")
    return None


_LOOKED_AT: Final = 1000
_CONTROLS_OF_NO_TEXT: Final = 3
"""How many control characters among so many bytes make a file one that is no text."""


def _place_after(name: str, before: str) -> Place:
    lines = re.split("\r\n|[\n\r]", before)
    return Place(name, len(lines), len(lines[-1]) + 1)
