"""``tidegate review``: judge descriptions."""

from __future__ import annotations

import argparse
from collections.abc import Sequence
from typing import Any

from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.description.load import load
from tidegate.lint.description.place import DescriptionError
from tidegate.lint.engine import WEIGHT, Catalogue, Review, review
from tidegate.lint.judgement import Kind, Level
from tidegate.lint.rule import Rule


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.add_argument("files", nargs="+", metavar="FILE", help="description to judge (YAML or JSON)")
    parser.add_argument(
        "--as", dest="form", choices=("terminal", "json"), default="terminal",
        help="form of the report (default: terminal)",
    )  # fmt: skip
    parser.add_argument(
        "--fail-at", choices=[level.value for level in Level], default=Level.WARNING.value, metavar="LEVEL",
        help="least level of a failure that makes the exit status 1: error, warning or note (default: warning)",
    )  # fmt: skip
    parser.add_argument(
        "--also", action="append", choices=("open", "review"), default=[], metavar="KIND",
        help="let judgements of this kind, open or review, make the exit status 1 too; may be given twice",
    )  # fmt: skip
    parser.add_argument(
        "--every", action="store_true", help="show every judgement in the terminal report, those that pass as well"
    )


def run(options: argparse.Namespace, streams: Streams, families: Sequence[Sequence[Rule]]) -> int:
    """Judge every file; the exit status is the worst of all."""
    catalogue = Catalogue(families)
    if options.form == "json":
        return _as_json(options, streams, catalogue)
    return _as_terminal(options, streams, catalogue)


def _as_terminal(options: argparse.Namespace, streams: Streams, catalogue: Catalogue) -> int:
    from tidegate.lint.reports.terminal import show_faults, show_review

    console = streams.console()
    status = Exit.KEPT
    for number, file in enumerate(options.files):
        if number:
            console.print()
        try:
            judged = review(load(file), catalogue, today=streams.today)
        except DescriptionError as error:
            show_faults(streams.console(error=True), error.faults)
            status = max(status, Exit.UNUSABLE)
            continue
        show_review(console, judged, all_kinds=options.every)
        status = max(status, _status(judged, options))
    return status


def _as_json(options: argparse.Namespace, streams: Streams, catalogue: Catalogue) -> int:
    from tidegate.lint.reports.json_report import json_text, review_entry, unusable_entry

    entries: list[dict[str, Any]] = []
    status = Exit.KEPT
    for file in options.files:
        try:
            judged = review(load(file), catalogue, today=streams.today)
        except DescriptionError as error:
            entries.append(unusable_entry(file, error.faults))
            status = max(status, Exit.UNUSABLE)
            continue
        entries.append(review_entry(judged))
        status = max(status, _status(judged, options))
    streams.out.write(json_text(entries, fail_at=options.fail_at))
    return status


def _status(judged: Review, options: argparse.Namespace) -> Exit:
    if judged.faults:
        return Exit.RULE_FAULT
    least = WEIGHT[Level(options.fail_at)]
    also = {Kind(kind) for kind in options.also}
    for judgement in judged.judgements:
        if judgement.waiver:
            continue
        failure = judgement.kind is Kind.FAIL and WEIGHT[judgement.level] >= least
        if failure or judgement.kind in also:
            return Exit.FINDINGS
    return Exit.KEPT
