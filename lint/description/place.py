"""Where something stands in a file, and what is wrong there."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, order=True)
class Place:
    """A position in a file: line and column count from 1, columns in code points; 0 where only the file is meant."""

    file: str
    line: int = 0
    column: int = 0

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}" if self.line else self.file


@dataclass(frozen=True, slots=True, order=True)
class Fault:
    """One thing that keeps a file from being read: where, what is wrong (with what was found), what would be right."""

    place: Place
    path: str
    problem: str
    advice: str

    def __str__(self) -> str:
        path = f"{self.path}: " if self.path else ""
        return f"{self.place}: {path}{self.problem}" + (f"; {self.advice}" if self.advice else "")


class DescriptionError(Exception):
    """A description cannot be used; carries every fault found, sorted by place."""

    def __init__(self, faults: list[Fault]) -> None:
        self.faults = tuple(sorted(set(faults)))
        super().__init__("\n".join(map(str, self.faults)))
