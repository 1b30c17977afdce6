"""``tidegate margins``: the margin ledger, need, have and margin of every judgement with a number, least first.

Margins are ranked by their sure end; of what is open the best end is shown, as what is known so far.  On request the
account of each number is shown.
"""

from __future__ import annotations

import argparse
from collections.abc import Sequence
from difflib import get_close_matches
from typing import TYPE_CHECKING

from tidegate.lint.batch import Request, judge_file
from tidegate.lint.commands.judged_on import add_day
from tidegate.lint.commands.streams import Exit, Streams
from tidegate.lint.judgement import Kind
from tidegate.lint.reports.plain_text import plain

if TYPE_CHECKING:
    from tidegate.lint.engine import Review
    from tidegate.lint.reports.ledger import Entry


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    add = parser.add_argument
    add("file", metavar="FILE", help="description (YAML or JSON)")
    add("--element", metavar="ID", help="only the judgements about one element")
    add("--family", metavar="NAME", help="only the judgements of one family of rules, such as hysteresis")
    add("--rule", metavar="ID", help="only the judgements of one rule, such as trip_window/nuisance")
    add("--account", action="store_true", help="in text, show how each number is made up, term by term")
    add("--as", dest="form", choices=("terminal", "json"), default="terminal", help="form of the ledger")
    add("--settings", metavar="FILE", help="settings, in place of the nearest tidegate.settings.yaml")
    add("--pack", action="append", default=[], metavar="FILE", help="Python file with rules of your own")
    add_day(parser)


def run(options: argparse.Namespace, streams: Streams) -> int:
    """Print the ledger; the exit status is 1 where a number shown misses its limit and weighs enough."""
    from tidegate.lint.reports.ledger import entries

    request = Request(options.today or streams.today, streams.families, options.settings, tuple(options.pack))
    judged = judge_file(options.file, request)
    for fault in judged.faults:
        streams.say(str(fault))
    review = judged.review
    if review is None or _wrong_name(review, options, streams):
        return Exit.UNUSABLE
    found = entries(review.judgements, element=options.element, family=options.family, rule=options.rule)
    if options.form == "json":
        streams.out.fix_encoding()
    streams.out.write(_json(review, found) if options.form == "json" else _text(review, found, options, streams))
    for failed in review.faults:
        streams.say(f"{options.file}: {failed.rule} on {failed.subject} failed itself: {failed.error}")
    if review.faults:
        return Exit.RULE_FAULT
    findings = {id(judgement) for judgement in review.findings(review.settings.fail_at, review.settings.also)}
    return Exit.FINDINGS if any(id(entry.judgement) in findings for entry in found) else Exit.KEPT


def _wrong_name(review: Review, options: argparse.Namespace, streams: Streams) -> bool:
    """Whether an element, a family or a rule is named that is not there; then it is said."""
    rules = dict.fromkeys(judgement.rule for judgement in review.judgements)
    families = dict.fromkeys(rule.partition("/")[0] for rule in rules)
    for noun, name, known in (
        ("element", options.element, review.graph.elements), ("family of rules", options.family, families),
        ("rule", options.rule, rules),
    ):  # fmt: skip
        if name is not None and name not in known:
            near = get_close_matches(name, known, 1)
            hint = f"did you mean {near[0]}?" if near else f"known: {', '.join(list(known)[:12])}"
            streams.say(f"{options.file}: no {noun} is called {name!r}; {hint}")
            return True
    return False


def _text(review: Review, found: Sequence[Entry], options: argparse.Namespace, streams: Streams) -> str:
    from tidegate.lint.reports.account_text import account_lines
    from tidegate.lint.reports.columns import wrapped
    from tidegate.lint.reports.detector_margins import detector_margins, table_lines
    from tidegate.lint.reports.ledger import histogram, ledger_lines
    from tidegate.lint.reports.order import verdict

    description = review.loaded.description
    name = description.subsystem or "unnamed subsystem"
    title = f"{name}, revision {description.revision}" if description.revision else name
    open_ones = review.counts.get(Kind.OPEN, 0)
    numbers = f"{len(found)} {'number' if len(found) == 1 else 'numbers'}"
    said = f"{verdict(review)}: {numbers} of {len(review.judgements)} judgements, {open_ones} open"
    lines = [plain(title), *wrapped(said, max(streams.width, 24))]
    chosen = options.family is None and options.rule is None
    detectors = table_lines(detector_margins(review, options.element), width=streams.width) if chosen else []
    lines += ["", *detectors] if detectors else []
    if not found:
        lines.append("no judgement has a number")
    elif options.account:
        for entry in found:
            lines += ["", *account_lines(review, entry.judgement, width=streams.width)]
    else:
        lines += [
            *([""] if detectors else []),
            histogram(found, unicode=_takes_blocks(streams)),
            "",
            *ledger_lines(found, width=streams.width),
        ]
    return "\n".join(lines) + "\n"


def _takes_blocks(streams: Streams) -> bool:
    """Whether the output can hold block characters."""
    try:
        "▁█".encode(getattr(streams.out, "encoding", None) or "utf-8")
    except UnicodeEncodeError:
        return False
    return True


def _json(review: Review, found: Sequence[Entry]) -> str:
    """The report's own form, with the judgements that have a number, least slack first."""
    import msgspec

    from tidegate.lint.reports.json_report import json_text, review_entry

    chosen = msgspec.structs.replace(review, judgements=tuple(entry.judgement for entry in found))
    # Verdict and counts are those of all judgements: what is left out of the ledger may still be open.
    entry = review_entry(review) | {"judgements": review_entry(chosen)["judgements"]}
    settings = review.settings
    return json_text([entry], settings=settings.shown, fail_at=settings.fail_at.value)
