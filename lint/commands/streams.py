"""The outside world as a command sees it: where it writes, how wide that is, which day it is, and the rules."""

from __future__ import annotations

import datetime
import os
from collections.abc import Callable, Sequence
from enum import IntEnum
from typing import TYPE_CHECKING

import msgspec

from tidegate.lint.commands.guarded_stream import GuardedStream
from tidegate.lint.reports.plain_text import plain

if TYPE_CHECKING:
    from rich.console import Console

    from tidegate.lint.description.place import Fault
    from tidegate.lint.rule import Rule


class Exit(IntEnum):
    """Exit statuses."""

    KEPT = 0
    FINDINGS = 1
    UNUSABLE = 2
    RULE_FAULT = 3


class Streams(msgspec.Struct, frozen=True):
    """Output, errors, the date and the rules; made by the command line, handed to every command."""

    out: GuardedStream
    err: GuardedStream
    today: datetime.date
    families: Callable[[], Sequence[Sequence[Rule]]]
    """The rules that come with the tool; a function, so that a command that needs none does not load them."""

    @property
    def colour(self) -> bool:
        """Whether the output takes colour: a terminal that is not dumb, unless the environment asks for none."""
        asked_for_none = os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb"
        return self.out.isatty() and not asked_for_none

    @property
    def width(self) -> int:
        """Columns of the terminal; 80 elsewhere, so that a report is the same wherever it is made."""
        if not self.out.isatty():
            return 80
        from shutil import get_terminal_size

        return get_terminal_size((80, 24)).columns

    def say(self, sentence: str) -> None:
        """Say something on the error stream, on a line of its own, with nothing in it that a terminal would obey."""
        self.err.write(f"{plain(sentence)}\n")

    def tell(self, faults: Sequence[Fault]) -> None:
        """Say on the error stream why a file cannot be used."""
        from tidegate.lint.reports.paint import painted
        from tidegate.lint.reports.terminal import fault_lines

        self.err.write(painted(fault_lines(faults), colour=False))

    def console(self) -> Console:
        """A console on the error stream, for progress: it takes text as it is, no markup, no emoji."""
        from rich.console import Console

        return Console(file=self.err.stream, markup=False, emoji=False, highlight=False, soft_wrap=True)
