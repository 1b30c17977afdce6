"""``tidegate schema``: the JSON Schemas, for editors and for readers of the report."""

from __future__ import annotations

import argparse
from typing import Final

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import schema_text

WHICH: Final = ("description", "settings", "report", "comparison")
"""The schemas that come with the tool."""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument(
        "which", nargs="?", choices=WHICH, default="description",
        help="schema of a description (default), of a settings file, or of the JSON of review or of compare",
    )  # fmt: skip


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print a schema."""
    streams.out.fix_encoding()
    streams.out.write(schema_text(options.which))
    return Exit.KEPT
