"""What changed between two revisions, for a terminal, a change request and a machine."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, Final

import msgspec

from tidegate.lint.comparison import Comparison, FactChange, Harm, JudgementChange
from tidegate.lint.judgement import Judgement
from tidegate.lint.reports.columns import wrapped
from tidegate.lint.reports.json_form import json_form
from tidegate.lint.reports.json_report import margin_entry, settings_entry
from tidegate.lint.reports.markdown_text import code, code_in_table, escaped
from tidegate.lint.reports.order import kind_word
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.reports.words import margin_words
from tidegate.lint.settings import Settings
from tidegate.lint.version import VERSION

_TITLES: Final = {
    Harm.WORSE: "worse",
    Harm.MARGIN_SHRANK: "smaller margins",
    Harm.OTHER: "changed",
    Harm.MARGIN_GREW: "larger margins",
    Harm.BETTER: "better",
}


COMPARISON_SCHEMA: Final = "urn:tidegate:comparison:2"
"""The version of the form for machines (``schema/comparison.schema.json``)."""


class Sides(msgspec.Struct, frozen=True):
    """What was compared, and under which settings both were judged."""

    old: str
    new: str
    settings: Settings


def _kind(judgement: Judgement | None) -> str:
    if judgement is None:
        return "not there"
    if judgement.under:
        return f"explained by {judgement.under}"
    return f"{kind_word(judgement.kind)}, waived" if judgement.waiver else kind_word(judgement.kind)


def _margin(judgement: Judgement | None) -> str:
    return margin_words(judgement) if judgement is not None else ""


def _said(change: JudgementChange) -> str:
    """The change in a few words: kinds where they differ, margins where there are some."""
    old, new = _kind(change.old), _kind(change.new)
    kinds = old if old == new else f"{old} -> {new}"
    margins = " -> ".join(part for part in (_margin(change.old), _margin(change.new)) if part)
    return f"{kinds}, margin {margins}" if margins else kinds


def _fact(change: FactChange) -> str:
    old = "not given" if change.old is None else change.old
    new = "not given" if change.new is None else change.new
    return f"{old} -> {new}"


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def _verdict(found: Comparison) -> str:
    if found.got_worse:
        return "WORSE"
    return "NOTHING CHANGED" if not found.judgements and not found.facts else "NOTHING GOT WORSE"


def terminal_lines(found: Comparison, sides: Sides, *, width: int) -> Iterator[str]:
    """For people at a terminal."""
    yield plain(f"{sides.old} -> {sides.new}")
    if sides.settings.summary:
        yield from wrapped(plain(f"settings: {sides.settings.summary}"), max(width, 24))
    facts, judgements = _count(len(found.facts), "fact"), _count(len(found.judgements), "judgement")
    yield f"{_verdict(found)}   {facts} and {judgements} changed"
    for harm, title in _TITLES.items():
        changes = [change for change in found.judgements if change.harm is harm]
        if changes:
            yield ""
            yield title
        for change in changes:
            yield from _block(f"{change.subject}, {change.rule}", _said(change), width)
            if harm is Harm.WORSE and change.new is not None:
                yield from _block("", change.new.message, width)
                if change.new.mend:
                    yield from _block("", f"mend: {change.new.mend}", width)
    if found.facts:
        yield ""
        yield "facts"
    for fact in found.facts:
        yield from _block(fact.path, _fact(fact), width)


def _block(head: str, text: str, width: int) -> Iterator[str]:
    if head:
        yield f"  {plain(head)}"
    yield from (f"      {line}" for line in wrapped(plain(text), max(width - 6, 24)))


def markdown_lines(found: Comparison, sides: Sides, *, width: int) -> Iterator[str]:
    """For a change request."""
    yield f"### {code(sides.old)} to {code(sides.new)}: {_verdict(found)}"
    if sides.settings.summary:
        yield ""
        yield f"Settings: {escaped(sides.settings.summary)}."
    for harm, title in _TITLES.items():
        changes = [change for change in found.judgements if change.harm is harm]
        if not changes:
            continue
        yield ""
        yield f"**{title}**"
        yield ""
        yield "| element | rule | change |"
        yield "| --- | --- | --- |"
        for change in changes:
            said = _said(change)
            if harm is Harm.WORSE and change.new is not None:
                said += f": {change.new.message}" + (f"; mend: {change.new.mend}" if change.new.mend else "")
            yield f"| {escaped(change.subject)} | {code_in_table(change.rule)} | {escaped(said)} |"
    if found.facts:
        yield ""
        yield f"<details><summary>{_count(len(found.facts), 'fact')} changed</summary>"
        yield ""
        for fact in found.facts:
            yield f"- {code(fact.path)}: {escaped(_fact(fact))}"
        yield ""
        yield "</details>"


def json_lines(found: Comparison, sides: Sides, *, width: int) -> Iterator[str]:
    """For machines."""
    report = {
        "schema": COMPARISON_SCHEMA,
        "tool": {"name": "tidegate", "version": VERSION},
        "old": sides.old,
        "new": sides.new,
        "settings": settings_entry(sides.settings),
        "got_worse": found.got_worse,
        "judgements": [_entry(change) for change in found.judgements],
        "facts": [{"path": fact.path, "old": fact.old, "new": fact.new} for fact in found.facts],
    }
    yield json_form(report)


def _entry(change: JudgementChange) -> dict[str, Any]:
    return {
        "rule": change.rule,
        "subject": change.subject,
        "harm": _TITLES[change.harm],
        "old": _side(change.old),
        "new": _side(change.new),
    }


def _side(judgement: Judgement | None) -> dict[str, Any] | None:
    if judgement is None:
        return None
    return {
        "kind": judgement.kind.value,
        "level": judgement.level.value,
        "waived": bool(judgement.waiver),
        "margin": margin_entry(judgement.measure),
        "message": judgement.message,
        "mend": judgement.mend,
    }
