"""``tidegate completion``: the script that lets a shell complete commands and options."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import Final

from tidegate.lint.commands.streams import Exit, Streams

SCRIPTS: Final = Path(__file__).parents[1] / "completion"
SHELLS: Final = ("bash", "zsh", "tcsh")


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("shell", choices=SHELLS, help="shell to write the script for")


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print the script, which was written from the options by the tests' own recorder."""
    streams.out.fix_encoding()
    streams.out.write((SCRIPTS / f"tidegate.{options.shell}").read_text("utf-8"))
    return Exit.KEPT
