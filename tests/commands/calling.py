"""The command line called in this process: as its user meets it, without the time that Python takes to start."""

from __future__ import annotations

import contextlib
import io
import os
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from tidegate.lint.cli import main

ROOT = Path(__file__).resolve().parents[2]


@dataclass(frozen=True, slots=True)
class Done:
    """What came of a call."""

    returncode: int
    stdout: str
    stderr: str


class Terminal(io.StringIO):
    """What is shown on a terminal."""

    def isatty(self) -> bool:
        return True


def tidegate(*arguments: str, cwd: Path = ROOT, columns: int | None = None, colour: bool = False) -> Done:
    """Call the command line in a folder; where columns are given, the output is a terminal so wide."""
    out, err = io.StringIO() if columns is None else Terminal(), io.StringIO()
    changes = {"COLUMNS": str(columns or 80), "NO_COLOR": "" if colour else "1", "TERM": "xterm"}
    streams = contextlib.redirect_stdout(out), contextlib.redirect_stderr(err)
    with _environment(changes), contextlib.chdir(cwd), streams[0], streams[1]:
        status = main(arguments)
    return Done(status, out.getvalue(), err.getvalue())


@contextlib.contextmanager
def _environment(changes: dict[str, str]) -> Iterator[None]:
    before = {name: os.environ.get(name) for name in changes}
    os.environ.update(changes)
    try:
        yield
    finally:
        for name, value in before.items():
            os.environ.pop(name) if value is None else os.environ.update({name: value})
