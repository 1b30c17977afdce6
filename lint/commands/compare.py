"""``tidegate compare``: what changed between two revisions of a description."""

from __future__ import annotations

import argparse
import os
from typing import Final

from tidegate.lint.batch import Request, catalogue, pack_fault, settings_for
from tidegate.lint.commands.judged_on import add_day
from tidegate.lint.commands.revisions import Held, at_revision
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.comparison import compare
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import Review, review
from tidegate.lint.reports.comparison_report import Sides, json_lines, markdown_lines, terminal_lines
from tidegate.lint.rule import PackError
from tidegate.lint.settings import Settings

_FORMS: Final = {"terminal": terminal_lines, "markdown": markdown_lines, "json": json_lines}


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("old", metavar="OLD", help="description, or REVISION:PATH of one in a git repository")
    parser.add_argument("new", metavar="NEW", help="description, or REVISION:PATH")
    parser.add_argument("--as", dest="form", choices=tuple(_FORMS), default="terminal", help="form (default: terminal)")
    parser.add_argument("--settings", metavar="FILE", help="settings for both, in place of the nearest of NEW")
    parser.add_argument(
        "--pack", action="append", default=[], metavar="FILE", help="Python file with rules of your own"
    )
    add_day(parser)


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print what changed; the exit status is 1 if anything got worse."""
    settings = Settings()
    try:
        with at_revision(options.old) as held_old, at_revision(options.new) as held_new:
            request = _request(options, streams, held_new)
            settings = settings_for(held_new.file, request)
            rules = catalogue(request, settings)

            def judged(held: Held, shown: str) -> Review:
                return review(load(held.path, shown=shown), rules, today=request.today, settings=settings)

            old, new = judged(held_old, options.old), judged(held_new, options.new)
    except DescriptionError as error:
        for fault in error.faults:
            streams.say(str(fault))
        return Exit.UNUSABLE
    except PackError as error:
        streams.say(str(pack_fault(str(error), settings, options.new)))
        return Exit.UNUSABLE
    found = compare(old, new)
    sides = Sides(options.old, options.new, _as_named(new.settings, options))
    lines = _FORMS[options.form](found, sides, width=streams.width)
    if options.form != "terminal":
        streams.out.fix_encoding()
    streams.out.write("\n".join(lines) + "\n")
    for failed in dict.fromkeys((*old.faults, *new.faults)):
        streams.say(f"rule {failed.rule} failed on {failed.subject}: {failed.error}")
    if old.faults or new.faults:
        return Exit.RULE_FAULT
    return Exit.FINDINGS if found.got_worse else Exit.KEPT


def _as_named(settings: Settings, options: argparse.Namespace) -> Settings:
    """The settings under the names that the command line gives: no folder of this machine belongs in a report."""
    file = options.settings or settings.file
    return settings.with_changes(file=file, option_packs=tuple(options.pack))


def _request(options: argparse.Namespace, streams: Streams, new: Held) -> Request:
    """How both are judged: under the settings that belong to NEW, at its own revision."""
    settings, packs, today = options.settings, tuple(options.pack), options.today or streams.today
    if not new.unpacked:
        return Request(today, streams.families, settings, packs)
    return Request(
        today, streams.families, settings and os.path.abspath(settings),  # noqa: PTH100 - as it was named
        tuple(map(os.path.abspath, packs)), folder=str(new.folder), top=str(new.folder),
    )  # fmt: skip
