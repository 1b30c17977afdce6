"""``tidegate schema``: the JSON Schemas, for editors and for readers of the report."""

from __future__ import annotations

import argparse

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import schema_text


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument(
        "which", nargs="?", choices=("description", "report"), default="description",
        help="schema of the description (default) or of the JSON report",
    )  # fmt: skip


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print a schema."""
    streams.out.write(schema_text(options.which))
    return Exit.KEPT
