"""Where something stands, in a file and in the data; what is wrong there."""

from __future__ import annotations

import re
from collections.abc import Sequence, Set
from typing import Final, TypeAlias

import msgspec

from tidegate.lint.found import escaped, quoted
from tidegate.lint.limits import MOST_FAULTS

Step: TypeAlias = "str | int"
Path: TypeAlias = "tuple[Step, ...]"

_PLAIN_STEP: Final = re.compile(r"[A-Za-z0-9_-]{1,64}", re.ASCII)


class Place(msgspec.Struct, frozen=True, order=True):
    """A position in a file: line and column count from 1, columns in code points; 0 where only the file is meant."""

    file: str
    line: int = 0
    column: int = 0

    def __str__(self) -> str:
        name = escaped(self.file)
        return f"{name}:{self.line}:{self.column}" if self.line else name


class Fault(msgspec.Struct, frozen=True, order=True):
    """One thing that keeps a file from being read: where, what is wrong (with what was found), what would be right."""

    place: Place
    path: str
    problem: str
    advice: str

    def __str__(self) -> str:
        path = f"{self.path}: " if self.path else ""
        return f"{self.place}: {path}{self.problem}; {self.advice}"

    def lies_in(self, paths: Set[str]) -> bool:
        """Whether it is about the value at one of these paths, or about something inside it."""
        if self.path in paths:
            return self.path != ""
        return any(self.path[: step.start()] in paths for step in re.finditer(r"[.\[]", self.path))


class DescriptionError(Exception):
    """A description cannot be used; carries the faults found, sorted by place, as far as so many are told."""

    def __init__(self, faults: Sequence[Fault]) -> None:
        told = sorted(set(faults))
        if len(told) > MOST_FAULTS:
            more = Fault(Place(told[0].place.file), "", f"more than {MOST_FAULTS} faults", "mend those above first")
            told = [*told[:MOST_FAULTS], more]
        self.faults = tuple(told)
        super().__init__("\n".join(map(str, self.faults)))


def dotted(path: Sequence[Step]) -> str:
    """A path as people write it: ``rails.avdd.rise.min``, ``waivers[2].until``; odd keys stand in quotes."""
    text = ""
    for step in path:
        if isinstance(step, int):
            text += f"[{step}]"
        else:
            word = step if _PLAIN_STEP.fullmatch(step) else quoted(step)
            text += f".{word}" if text else word
    return text


def steps(path: str) -> Path:
    """The steps of a path of plain keys: ``waivers[2].until`` as well as ``waivers.2.until``."""
    return tuple(int(step) if step.isdecimal() else step for step in re.findall(r"[^.\[\]]+", path))
