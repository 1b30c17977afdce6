"""The command line: arguments in, exit status out; the one place that touches clock, terminal and process."""

from __future__ import annotations

import argparse
import atexit
import gc
import io
import os
import sys

from tidegate.lint.version import VERSION

TYPE_CHECKING = False  # as type checkers know it; the module of that name takes longer to load than a version to tell
if TYPE_CHECKING:
    from collections.abc import Sequence
    from typing import Any, Final, NoReturn

    from tidegate.lint.commands.guarded_stream import GuardedStream
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

_TOLD_AT_ONCE: Final = (["--version"], ["--help"], ["-h"])
"""What leaves nothing to put in order when it is stopped."""
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
        from tidegate.lint.reports.plain_text import plain

        said = plain(f"{self.prog}: {_in_words(message)}")
        self.exit(2, f"{said}\n{self.prog} --help shows what can be said\n")

    def _print_message(self, message: str, file: Any = None) -> None:
        """Write help, version or complaint; that it cannot be written is not kept quiet, as argparse itself does."""
        stream = file or sys.stderr
        if stream is not None:
            try:
                stream.write(message)
            except OSError as error:
                raise _UnwrittenError(error) from error


class _UnwrittenError(Exception):
    """Help, version or complaint cannot be written."""

    def __init__(self, error: OSError) -> None:
        self.error = error
        super().__init__(error)


def _in_words(message: str) -> str:
    """What argparse complains about; where it is a choice, the same whatever Python says, with the nearest one."""
    import re

    choice = re.fullmatch(r"argument (.+?): invalid choice: '(.*)' \(choose from (.*)\)", message, re.DOTALL)
    if choice is None:
        return message
    from difflib import get_close_matches

    argument, found, listed = choice.groups()
    choices = [each.strip("' ") for each in listed.split(",")]
    near = get_close_matches(found, choices, 1)
    hint = f"did you mean {near[0]}? " if near else ""
    return f"{argument}: no such choice (found {found!r}); {hint}choices: {', '.join(choices)}"


class _AsWritten(argparse.RawDescriptionHelpFormatter):
    """Help with its line breaks kept, as wide as argparse would have it, but without the module it loads for that."""

    def __init__(self, prog: str) -> None:
        try:
            columns = int(os.environ.get("COLUMNS", "")) or os.get_terminal_size().columns
        except (ValueError, OSError):
            columns = 0
        super().__init__(prog, width=(columns or 80) - 2)


class _Named:
    """A command of which only the name is known: what is told of all of them at once needs no more."""

    def __init__(self, **about: Any) -> None:
        self._about = about

    def parse_known_args(self, given: list[str], namespace: argparse.Namespace) -> Any:
        """Parse after all, where an option of no command stands before the name of one."""
        return _Parser(**self._about).parse_known_args(given, namespace)


def parser(*, with_options: bool = True) -> argparse.ArgumentParser:
    """The parser of the whole command line; without the options of the commands, it is quickly made."""
    top = _Parser(
        prog="tidegate", description=_ABOUT, epilog=_FIRST_STEPS, allow_abbrev=False, formatter_class=_AsWritten
    )
    top.add_argument("--version", action="version", version=f"tidegate {VERSION}")
    commands = top.add_subparsers(prog=top.prog, dest="command", metavar="COMMAND", required=True, parser_class=_Parser)
    for name, about in _COMMANDS.items():
        sub = commands.add_parser(name, help=about, description=_sentence(about), allow_abbrev=False)
        if with_options:
            _module(name).configure(sub)
    return top


def _parsed(given: list[str]) -> argparse.Namespace:
    """The options of the command that is given; the others are not even declared."""
    name = given[0] if given else ""
    if name not in _COMMANDS:
        return parser(with_options=False).parse_args(given)
    command = _Parser(prog=f"tidegate {name}", description=_sentence(_COMMANDS[name]), allow_abbrev=False)
    _module(name).configure(command)
    return command.parse_args(given[1:], argparse.Namespace(command=name))


def _sentence(about: str) -> str:
    return f"{about[0].upper()}{about[1:]}."


def _module(name: str):  # type: ignore[no-untyped-def]
    """The module of a command; loaded when it is the one that runs."""
    from importlib import import_module

    return import_module(f"tidegate.lint.commands.{name}")


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns its exit status.

    Without arguments it is the program itself: it takes those of the process, and ends as signals tell it.
    """
    try:
        if arguments is not None:
            return _answer(list(arguments))
        if sys.argv[1:] in _TOLD_AT_ONCE:
            return _left_with(_answer(sys.argv[1:]))
        from tidegate.lint.commands.interruption import Stopped, heeded

        with heeded() as told:
            status = _answer(sys.argv[1:])
            if told.number is not None:  # foreign code has caught what was meant for all
                raise Stopped(told.number)
        return _left_with(status)
    except KeyboardInterrupt as stopped:
        from tidegate.lint.commands.guarded_stream import GuardedStream
        from tidegate.lint.commands.interruption import end_by, number_of, words

        number = number_of(stopped)
        err = GuardedStream(sys.stderr)
        err.write(f"tidegate: {words(number)}\n")
        err.flush()
        if arguments is None:
            end_by(number)
        return 128 + number  # as a shell tells a program that a signal ended


def _left_with(status: int) -> int:
    """End the process, everything being written; the system takes back at once what Python would give back bit by bit.

    Where anybody waits for Python's own way out, such as a thread or what measures the run, returns the status.
    """
    threads = sys.modules.get("threading")
    if not (atexit._ncallbacks() or sys.getprofile() or sys.gettrace() or (threads and threads.active_count() > 1)):
        os._exit(status)
    return status


def _answer(given: list[str]) -> int:
    """Run one command; what happens to the streams is said in a line at most."""
    from tidegate.lint.commands.guarded_stream import GuardedStream

    _keep_numbers_taken()
    out, err = GuardedStream(sys.stdout), GuardedStream(sys.stderr)
    status = _status(given, out, err)
    out.flush()
    if out.failure is not None:
        out.drop()
        if not isinstance(out.failure, BrokenPipeError):  # a reader that has gone, as `| head` does, has what it wanted
            err.write(f"tidegate: the output cannot be written ({out.failure.strerror})\n")
            status = max(status, 2)
    err.flush()
    if err.failure is not None:
        err.drop()
    return status


def _keep_numbers_taken() -> None:
    """No file may get the number of a standard stream that was closed before the start."""
    for stream in (sys.stdin, sys.stdout, sys.stderr):
        if stream is None:
            os.open(os.devnull, os.O_RDWR)


def _status(given: list[str], out: GuardedStream, err: GuardedStream) -> int:
    """The exit status of a command."""
    # A run makes many objects and hardly any garbage: the collector would only walk them, again and again.
    gc.set_threshold(_OBJECTS_BETWEEN_COLLECTIONS, 20, 100)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):  # a letter that the terminal cannot show is written as its number
            stream.reconfigure(errors="backslashreplace")
    try:
        return _run(_parsed(given), out, err)
    except SystemExit as left:  # the parser has said what there is to say
        return left.code if isinstance(left.code, int) else 0
    except _UnwrittenError as unwritten:
        out.failure = unwritten.error
        return 0 if isinstance(out.failure, BrokenPipeError) else 2
    except OSError as error:  # such as no room for what is kept until a report is whole
        from tidegate.lint.reports.plain_text import plain

        here = "the current folder" if isinstance(error, FileNotFoundError) else ""
        where = error.filename or here
        err.write(plain(f"tidegate: {where}{': ' if where else ''}{error.strerror}") + "\n")
        return 2


def _run(options: argparse.Namespace, out: GuardedStream, err: GuardedStream) -> int:
    import datetime

    from tidegate.lint.commands.streams import Streams

    return int(_module(options.command).run(options, Streams(out, err, datetime.date.today(), own_families)))


def own_families() -> Sequence[Sequence[Rule]]:
    """The rules that come with the tool: the one place that joins them to the engine."""
    from tidegate.rules.catalogue import FAMILIES

    return FAMILIES


if __name__ == "__main__":
    sys.exit(main())
