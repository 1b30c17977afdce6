"""The outside world as a command sees it: where it writes, how wide that is, which day it is, and the rules."""

from __future__ import annotations

import datetime
import os
import shutil
from collections.abc import Callable, Sequence
from enum import IntEnum
from typing import TYPE_CHECKING, TextIO

import msgspec

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

    out: TextIO
    err: TextIO
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
        """Columns of the output; 80 where it has none of its own."""
        return shutil.get_terminal_size((80, 24)).columns

    def tell(self, faults: Sequence[Fault]) -> None:
        """Say on the error stream why a file cannot be used."""
        from tidegate.lint.reports.paint import painted
        from tidegate.lint.reports.terminal import fault_lines

        self.err.write(painted(fault_lines(faults), colour=False))

    def console(self) -> Console:
        """A console on the error stream, for progress: it takes text as it is, no markup, no emoji."""
        from rich.console import Console

        return Console(file=self.err, markup=False, emoji=False, highlight=False, soft_wrap=True)
