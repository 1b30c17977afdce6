"""What loading must keep: a description, or faults of the stated class alone, each with a place in a file."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Any, Final

import jsonschema_rs

from tests.fuzz.trouble import Trouble
from tidegate.lint.description.load import Loaded, description_schema, load
from tidegate.lint.description.place import DescriptionError, Fault
from tidegate.lint.description.yaml_nodes import PureParser

_OF_A_WHOLE_FILE: Final = re.compile(
    r"describes no element|the file is|more than \d+ MiB|cannot be read|holds more than waivers"
)
_UNFINISHED: Final = re.compile(r"\b(?:None|NaN|nan|Traceback|ValidationError|object at 0x)\b|<class|\{(?:sign|line)\}")


def loaded(file: Path, found: list[Trouble], *, both_parsers: bool = False) -> Loaded | tuple[Fault, ...]:
    """The description, or its faults; what is wrong with either goes to ``found``."""
    try:
        description = load(file, shown=file.name)
    except DescriptionError as error:
        check_faults(error.faults, file, found)
        if both_parsers:
            _same_with_the_pure_parser(file, error.faults, found)
        return error.faults
    if not _schema().is_valid(description.sources.data):
        found.append(Trouble("accepted", "load", "what the schema refuses was accepted in silence"))
    if both_parsers:
        _same_with_the_pure_parser(file, description, found)
    return description


@cache
def _schema() -> Any:
    return jsonschema_rs.validator_for(dict(description_schema()))


def check_faults(faults: Sequence[Fault], file: Path, found: list[Trouble]) -> None:
    """Faults say something, in one line that can be printed, of a place that is there."""
    given = "".join(each.read_bytes().decode("utf-8", "replace") for each in file.parent.glob("*.yaml"))
    if not faults:
        found.append(Trouble("no fault", "load", "refused without a fault"))
    for fault in faults:
        text = f"{fault}\n{fault!r}"
        unfinished = _UNFINISHED.search(_unquoted(str(fault)))
        if not fault.problem.strip() or not fault.advice.strip() or (unfinished and unfinished[0] not in given):
            found.append(Trouble("odd message", "load", f"{fault.problem[:40]}\n{text}"))
        if "\n" in str(fault) or not str(fault).isprintable():
            found.append(Trouble("unprintable message", "load", f"{fault.problem[:40]!r}\n{text}"))
        problem = _misplaced(fault, file)
        if problem:
            found.append(Trouble("misplaced fault", "load", f"{problem}: {fault.problem[:40]}\n{text}"))


def _unquoted(text: str) -> str:
    return re.sub(r"'(?:[^'\\]|\\.)*'|\"(?:[^\"\\]|\\.)*\"", "''", text)


def _misplaced(fault: Fault, file: Path) -> str:
    """Why a place lies in no file; empty where it lies in one."""
    place = fault.place
    target = file.parent / place.file
    if place.line == 0:
        return "" if _OF_A_WHOLE_FILE.search(fault.problem) else "no line"
    if not target.is_file():
        return f"no such file as {place.file}"
    text = target.read_bytes().removeprefix(b"\xef\xbb\xbf").decode("utf-8", "replace")
    lines = re.split("\r\n|[\n\r]", text)
    if place.line > len(lines):
        return f"line {place.line} of {len(lines)}"
    if not 1 <= place.column <= len(lines[place.line - 1]) + 1:
        return f"column {place.column} of {len(lines[place.line - 1])}"
    return ""


def _same_with_the_pure_parser(file: Path, said: Loaded | Sequence[Fault], found: list[Trouble]) -> None:
    """A machine without the C parser reads the same description, and finds the same faults."""
    try:
        other: Loaded | Sequence[Fault] = load(file, shown=file.name, parser=PureParser)
    except DescriptionError as error:
        other = error.faults
    if isinstance(said, Loaded) != isinstance(other, Loaded):
        found.append(Trouble("parsers disagree", "load", f"one of them refuses\n{said}\n{other}"[:1500]))
    elif isinstance(said, Loaded) and isinstance(other, Loaded):
        if said.sources.data != other.sources.data:
            found.append(Trouble("parsers disagree", "load", "on the data"))
    elif said != other:
        found.append(Trouble("parsers disagree", "load", f"on the faults\n{said}\n{other}"[:1500]))


def given_at(data: Mapping[str, Any], path: str) -> bool:
    """Whether a fact is given, named as judgements name it."""
    node: Any = data
    for step in re.findall(r"[^.\[\]]+", path):
        if isinstance(node, str) and step in ("min", "typ", "max"):
            return True
        if isinstance(node, dict) and step in node:
            node = node[step]
        elif isinstance(node, list) and step.isdecimal() and int(step) < len(node):
            node = node[int(step)]
        else:
            return False
    return node not in (None, [], {})
