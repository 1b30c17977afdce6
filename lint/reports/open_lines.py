"""What is open, for people at a terminal: what to find out next, and the margins that are known so far."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final

from tidegate.lint.engine import Review
from tidegate.lint.judgement import Kind
from tidegate.lint.must_keep import must_keep
from tidegate.lint.reports.gravity import gravest_first, has_number
from tidegate.lint.reports.open_words import limits_text, paths_text, rest_text, settles_text
from tidegate.lint.reports.paint import Line
from tidegate.lint.reports.questions import MOST_QUESTIONS, Question, questions, rest
from tidegate.lint.reports.text_lines import blank, wrapped_lines
from tidegate.lint.reports.words import keep_text

_INDENT: Final = 5


def next_lines(review: Review, width: int) -> Iterator[Line]:
    """The questions that settle most, and a line for each section with what else is missing."""
    found = questions(review)
    if not found:
        return
    yield blank()
    yield from wrapped_lines("", "what to find out next", width, indent=0, style="bold")
    for number, question in enumerate(found[:MOST_QUESTIONS], 1):
        yield from _question_lines(number, question, width)
    left = rest(found[MOST_QUESTIONS:])
    if left:
        yield from wrapped_lines("", "and of the rest", width, indent=2, style="dim")
    for one in left:
        yield from wrapped_lines("", rest_text(one), width, indent=2)


def _question_lines(number: int, question: Question, width: int) -> Iterator[Line]:
    first, *more = wrapped_lines("", question.what, width, indent=_INDENT, style="bold")
    (text, style), *_ = first.pieces
    yield Line(((f"{number:>3}  ", "dim"), (text[_INDENT:], style)))
    yield from more
    yield from wrapped_lines("settles", settles_text(question), width, indent=_INDENT)
    if limits := limits_text(question.limits):
        yield from wrapped_lines("keep", limits, width, indent=_INDENT)
    yield from wrapped_lines("write", paths_text(question), width, indent=_INDENT, style="dim")


def open_lines(review: Review, width: int, *, all_kinds: bool) -> Iterator[Line]:
    """The open judgements with a number, the gravest and nearest first; the others are counted."""
    waiting = [judgement for judgement in review.judgements if judgement.kind is Kind.OPEN]
    known = gravest_first(judgement for judgement in waiting if has_number(judgement))
    refused = [judgement for judgement in waiting if not judgement.missing and judgement.measure is None]
    if not waiting:
        return
    yield blank()
    yield from wrapped_lines("", "open, with the margin so far" if known else "open", width, indent=0, style="bold")
    for judgement in known:
        kept = keep_text(judgement, must_keep(review, judgement))
        text = f"{judgement.subject}: {judgement.message}{f': {kept}' if kept else ''}"
        yield from wrapped_lines("open", text, width, indent=2)
        yield from wrapped_lines(" ", f"{judgement.rule}, {review.place(judgement)}", width, indent=2, style="dim")
    for judgement in refused:
        yield from wrapped_lines("open", f"{judgement.subject}: {judgement.message}", width, indent=2)
        yield from wrapped_lines(" ", f"{judgement.rule}, {review.place(judgement)}", width, indent=2, style="dim")
    nothing = len(waiting) - len(known) - len(refused)
    if nothing:
        where = "listed below" if all_kinds else "--every lists them"
        more = "more " if known or refused else ""
        text = f"{nothing} {more}of which no number is known yet ({where})"
        yield from wrapped_lines("", text, width, indent=2, style="dim")
