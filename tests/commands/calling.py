"""The command line called in this process: as its user meets it, without the time that Python takes to start."""

from __future__ import annotations

import contextlib
import io
import os
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


def tidegate(*arguments: str, cwd: Path = ROOT, columns: int = 80) -> Done:
    """Call the command line in a folder, with output and errors that are no terminal."""
    out, err = io.StringIO(), io.StringIO()
    width = os.environ.get("COLUMNS")
    os.environ["COLUMNS"] = str(columns)
    try:
        with contextlib.chdir(cwd), contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
            try:
                status = main(arguments)
            except SystemExit as left:  # argparse leaves so where the arguments are wrong
                status = int(left.code or 0)
    finally:
        os.environ.pop("COLUMNS") if width is None else os.environ.update(COLUMNS=width)
    return Done(status, out.getvalue(), err.getvalue())
