"""The command line: arguments in, exit status out; the one place that touches clock, terminal and process."""

from __future__ import annotations

import argparse
import gc
import io
import os
import sys
from collections.abc import Sequence
from typing import TYPE_CHECKING, Final, NoReturn

from tidegate.lint.version import VERSION

if TYPE_CHECKING:
    from tidegate.lint.rule import Rule

_COMMANDS: Final = {
    "review": "judge descriptions: the main job",
    "margins": "every judgement with a number, least margin first",
    "place": "where trip levels may lie, what limits them, and what buys room",
    "ramp": "timelines of start-up, power-down and dips, earliest and latest",
    "rules": "the catalogue of rules, or one rule in full",
    "draw": "one picture alone: ladder, timeline or graph",
    "trace": "what an element leans on, and what leans on it",
    "start": "write a starter description",
    "compare": "what changed between two revisions of a description",
    "schema": "the JSON Schema of a description, for editors",
    "completion": "the completion script of a shell",
}

_OBJECTS_BETWEEN_COLLECTIONS: Final = 200_000

_ABOUT: Final = """\
Design-rule linter for a chip's reset and supply-monitor subsystem.

A description of the subsystem (YAML) goes in; judgements with numbers come out.
"""

_FIRST_STEPS: Final = """\
first steps:
  tidegate start --rail avdd=1.8V --watch avdd=power-on,under > chip.yaml
  tidegate review chip.yaml
  tidegate rules hysteresis/covers_disturbance

exit status of review: 0 kept, 1 findings, 2 unusable input, 3 a rule that failed itself
"""


class _Parser(argparse.ArgumentParser):
    """Says what was meant where an argument is nearly right."""

    def error(self, message: str) -> NoReturn:
        hint = _nearest(message)
        self.exit(2, f"{self.prog}: {message}{hint}\n{self.prog} --help shows what can be said\n")


def _nearest(message: str) -> str:
    """A near command for one that is none."""
    if "invalid choice: '" not in message:
        return ""
    from difflib import get_close_matches

    word = message.split("invalid choice: '")[1].split("'", maxsplit=1)[0]
    near = get_close_matches(word, _COMMANDS, 1)
    return f"; did you mean {near[0]}?" if near else ""


def parser(only: str | None = None) -> argparse.ArgumentParser:
    """The parser of the command line; with ``only``, the options of one command are all that is declared."""
    top = _Parser(
        prog="tidegate", description=_ABOUT, epilog=_FIRST_STEPS, allow_abbrev=False,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )  # fmt: skip
    top.add_argument("--version", action="version", version=f"tidegate {VERSION}")
    commands = top.add_subparsers(dest="command", metavar="COMMAND", required=True, parser_class=_Parser)
    for name, about in _COMMANDS.items():
        sub = commands.add_parser(name, help=about, description=f"{about[0].upper()}{about[1:]}.", allow_abbrev=False)
        if only in (None, name):
            _module(name).configure(sub)
    return top


def _module(name: str):  # type: ignore[no-untyped-def]
    """The module of a command; loaded when it is the one that runs."""
    from importlib import import_module

    return import_module(f"tidegate.lint.commands.{name}")


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns its exit status."""
    given = list(sys.argv[1:] if arguments is None else arguments)
    only = next((word for word in given if not word.startswith("-")), None)
    options = parser(only if only in _COMMANDS else "").parse_args(given)
    # A run makes many objects and hardly any garbage: the collector would only walk them, again and again.
    gc.set_threshold(_OBJECTS_BETWEEN_COLLECTIONS, 20, 100)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):  # a letter that the terminal cannot show is written as its number
            stream.reconfigure(errors="backslashreplace")
    try:
        status = _run(options)
        sys.stdout.flush()
    except BrokenPipeError:  # the reader has gone, as `| head` does: what it took was right
        _drop_output()
        return 0
    except OSError as error:
        _drop_output()
        sys.stderr.write(f"tidegate: the output cannot be written ({error.strerror or error})\n")
        return 2
    except KeyboardInterrupt:
        return 130
    return status


def _drop_output() -> None:
    """Spare the interpreter its own flush at the end, which would fail again."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _run(options: argparse.Namespace) -> int:
    import datetime

    from tidegate.lint.commands.streams import Streams

    streams = Streams(sys.stdout, sys.stderr, datetime.date.today(), own_families)
    return int(_module(options.command).run(options, streams))


def own_families() -> Sequence[Sequence[Rule]]:
    """The rules that come with the tool: the one place that joins them to the engine."""
    from tidegate.rules.catalogue import FAMILIES

    return FAMILIES


if __name__ == "__main__":
    sys.exit(main())
