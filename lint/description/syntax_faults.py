"""What the YAML parser cannot read, in words an engineer can act on."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from typing import Final

import msgspec
import yaml

from tidegate.lint.description.place import Fault, Place
from tidegate.lint.found import quoted, with_space
from tidegate.lint.limits import MOST_DEPTH


class _Saying(msgspec.Struct, frozen=True):
    """What the parser says (a pattern over its context and problem), and what an engineer needs to hear.

    ``{sign}`` stands for the first character that cannot be read, ``{line}`` for the line where the context begins.
    """

    said: str
    problem: str
    advice: str
    at_context: bool = False


_QUOTE_IT: Final = "put the text in quotes"

_SAYINGS: Final = (
    _Saying(r"single document", "a second document begins here", "keep one description in a file; remove the ---"),
    _Saying(r"document start", "text after the end of the description", "keep one description in a file; remove it"),
    _Saying(r"scanning a directive|YAML directive|duplicate tag handle|incompatible YAML", "a line that begins with %",
            "remove it"),
    _Saying(r"nesting depth", f"nested more than {MOST_DEPTH} levels deep", "a description needs far fewer"),
    _Saying(r"undefined alias", "an alias (*) of an anchor (&) that is not there", "write the value out"),
    _Saying(r"duplicate anchor", "an anchor (&) is set twice (first in line {line})", "give it another name"),
    _Saying(r"scanning an (alias|anchor)|(scanning|parsing) a tag|undefined tag", "a text cannot begin with {sign}",
            _QUOTE_IT, at_context=True),
    _Saying(r"scanning a block scalar", "nothing may follow > or | in its line", _QUOTE_IT, at_context=True),
    _Saying(r"quoted scalar found unexpected", "a quoted text without its end", "close the quote", at_context=True),
    _Saying(r"escape", "an unknown escape after a backslash", "write \\\\ for a backslash, or use single quotes"),
    _Saying(r"cannot start any token", "a text cannot begin with {sign}", _QUOTE_IT),
    _Saying(r"sequence entries are not allowed", "a list entry (-) in the line of its key", "begin it in a new line"),
    _Saying(r"mapping keys are not allowed", "a ? that cannot stand here", _QUOTE_IT),
    _Saying(r"flow mapping", "a comma or } is missing here, for the { in line {line}",
            "close it, with a comma between its entries"),
    _Saying(r"flow sequence", "a comma or ] is missing here, for the [ in line {line}",
            "close it, with a comma between its entries"),
    _Saying(r"parsing a flow node.*found ','", "a comma with nothing before it", "remove it"),
    _Saying(r"parsing a flow node.*found '[]}]'", "{sign} where something else is open", "close what was opened last"),
    _Saying(r"parsing a flow node", "a { or [ without its end", "close it"),
    _Saying(r"found '[],}]'", "{sign} without what it belongs to", "remove it, or " + _QUOTE_IT),
    _Saying(r"found ':'", "a colon without its key", "write key: value"),
    _Saying(r"but found '<scalar>'", "a text after the end of a value", "put the whole value in one pair of quotes"),
    _Saying(r"did not find expected key|but found '(<block mapping start>|<block sequence start>|-|\?|<block entry>)'",
            "the indentation does not fit the lines above", "align it with its neighbours"),
    _Saying(r"but found '([{[]|<anchor>|<alias>|<tag>)'", "{sign} after a value, or indented as no line above",
            "write one value for each key"),
)  # fmt: skip

_OTHERWISE: Final = _Saying("", "the text cannot be read as YAML from here on", "compare it with the lines above")


MOST_LINES_AT_ONCE: Final = 2000
"""Longer texts are not read again whole before parts of them are, in lines."""


def syntax_fault(name: str, error: yaml.YAMLError, text: str) -> Fault:
    """The fault of the file of this name whose text the pure Python parser refuses with this error."""
    mark = error.problem_mark or error.context_mark if isinstance(error, yaml.MarkedYAMLError) else None
    if mark is None or not isinstance(error, yaml.MarkedYAMLError):
        return Fault(Place(name), "", "the file is not YAML", "save it as text in UTF-8")
    lines = [*re.split("\r\n|[\n\r]", text), ""]
    merge = next((number for number, line in enumerate(lines) if re.match(r"(<{7}|>{7}) ", line)), None)
    if merge is not None:
        return Fault(Place(name, merge + 1, 1), "", "a mark of a merge that was not settled", "settle it")
    said = f"{error.context or ''} {error.problem or ''}"
    tab = _tab(mark, lines)
    if tab is not None:
        return Fault(Place(name, mark.line + 1, tab + 1), "", "a tab", "use spaces")
    if lines[mark.line].startswith("%"):
        return Fault(Place(name, mark.line + 1, 1), "", "a line that begins with %", "remove it")
    if "mapping values are not allowed" in said:
        return _odd_colon(name, mark, lines)
    if "expected ':'" in said and error.context_mark:
        return _no_key(name, error.context_mark.line, lines)
    saying = next((saying for saying in _SAYINGS if re.search(saying.said, said)), _OTHERWISE)
    context = error.context_mark or mark
    if saying.at_context:
        mark = context
    sign = quoted(lines[mark.line][mark.column : mark.column + 1])
    problem = saying.problem.replace("{sign}", sign).replace("{line}", str(context.line + 1))
    return Fault(Place(name, mark.line + 1, mark.column + 1), "", problem, saying.advice)


def earliest_line(error: Exception) -> int | None:
    """The line where the trouble begins, counted from 0; None where the error has no place."""
    marks = (getattr(error, "context_mark", None), getattr(error, "problem_mark", None))
    return min((mark.line for mark in marks if mark is not None), default=None)


def same_trouble(one: Exception, other: Exception) -> bool:
    """Whether two errors are alike as far as anchors go: a part of a text may lack the anchor of an alias in it."""
    return all((word in str(one)) == (word in str(other)) for word in ("undefined alias", "duplicate anchor"))


def parts_alone(text: str, line: int | None) -> Iterator[tuple[str, bool]]:
    """A long text with lines left empty that hardly bear on this line: all before its entry, then before its section.

    The lines that are kept stand where they stood, so that faults keep their places.
    Returns: each part, and whether it begins with a whole section.
    """
    lines = text.splitlines(keepends=True)
    if line is None or len(lines) < MOST_LINES_AT_ONCE:
        return
    line = min(line, len(lines) - 1)
    section = next((number for number in range(line, 0, -1) if _SECTION.match(lines[number])), 0)
    for entry in range(line, section, -1):
        if _ENTRY.match(lines[entry]):
            header = lines[section] if _SECTION.match(lines[section]) else "\n"
            yield "\n" * section + header + "\n" * (entry - section - 1) + "".join(lines[entry : line + _AFTER]), False
            break
    yield "\n" * section + "".join(lines[section : line + _AFTER]), True


_SECTION: Final = re.compile(r"[A-Za-z_][\w-]*:\s", re.ASCII)
_ENTRY: Final = re.compile(r" {1,8}[A-Za-z_][\w-]*:\s", re.ASCII)
_AFTER: Final = 1000
"""How many lines after the trouble are read again: it may only show a little later."""


def _tab(mark: yaml.Mark, lines: Sequence[str]) -> int | None:
    """The column of a tab in the indentation, or where the parser stopped."""
    line = lines[mark.line]
    indent = line[: len(line) - len(line.lstrip())]
    if "\t" in indent:
        return indent.index("\t")
    return mark.column if line[mark.column : mark.column + 1] == "\t" else None


def _odd_colon(name: str, mark: yaml.Mark, lines: Sequence[str]) -> Fault:
    """A colon where no key can stand: a second one in its line, or the line above is to blame."""
    place = Place(name, mark.line + 1, mark.column + 1)
    if re.search(r":\s", lines[mark.line][: mark.column]):
        return Fault(place, "", "a second colon in one line", "put the value in quotes, or begin a new line")
    above = mark.line - 1
    while above >= 0 and re.fullmatch(r"\s*(#.*)?", lines[above]):
        above -= 1
    if above >= 0 and not re.search(r":(\s|$)", lines[above]):
        return _no_key(name, above, lines)
    column = len(lines[mark.line]) - len(lines[mark.line].lstrip())
    problem = "a key that is indented too far, below a value"
    return Fault(Place(name, mark.line + 1, column + 1), "", problem, "align it with the key above")


def _no_key(name: str, number: int, lines: Sequence[str]) -> Fault:
    """A line that should have a key and has none."""
    text = lines[number].strip()
    place = Place(name, number + 1, len(lines[number]) - len(lines[number].lstrip()) + 1)
    key, colon, value = text.partition(":")
    if colon and value:
        return Fault(place, "", f"no space after the colon (found {quoted(text)})", with_space(key, value))
    return Fault(place, "", f"a line without a key and a colon (found {quoted(text)})", "write key: value")
