"""The report for a change request: Markdown with the verdict, what fails, what to find out, and the least margins."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Final

from tidegate.lint.description.place import Fault
from tidegate.lint.engine import Review
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.must_keep import must_keep
from tidegate.lint.reports.accounts import line_text, sides, sign, source
from tidegate.lint.reports.gravity import TITLES, gravest_first, gravity, has_number, least_room_first
from tidegate.lint.reports.markdown_text import code, code_in_table, escaped
from tidegate.lint.reports.open_words import limits_text, paths_text, rest_text, settles_text
from tidegate.lint.reports.order import CAUTION, explained_by, kind_word, verdict
from tidegate.lint.reports.questions import MOST_QUESTIONS, questions, rest
from tidegate.lint.reports.words import judgements_text, keep_text, margin_words

MOST_MARGINS: Final = 8
"""How many of the least margins the report lists."""


def unusable_markdown(file: str, faults: Sequence[Fault]) -> str:
    """A file that cannot be used, with its faults."""
    lines = [f"### {escaped(file)}: cannot be used", ""]
    lines += [f"- {code(str(fault.place))} {escaped(_said(fault))}" for fault in faults]
    return "\n".join(lines) + "\n"


def _said(fault: Fault) -> str:
    return str(fault).removeprefix(f"{fault.place}: ")


def review_markdown(review: Review) -> str:
    """One description."""
    return "\n".join(_lines(review)) + "\n"


def _lines(review: Review) -> Iterator[str]:
    description = review.loaded.description
    name = description.subsystem or review.loaded.sources.files[0].name
    revision = f", revision {description.revision}" if description.revision else ""
    yield f"### {escaped(name + revision)}: {verdict(review)}"
    yield ""
    counts = review.counts
    said = ", ".join(f"{counts.get(kind, 0)} {kind_word(kind)}" for kind in Kind if counts.get(kind, 0))
    yield f"{code(review.loaded.sources.files[0].name)}: {said}{_waived(review)}."
    if review.settings.summary:
        yield ""
        yield f"Settings: {escaped(review.settings.summary)}."
    yield from _findings(review)
    yield from _next(review)
    yield from _open(review)
    yield from _margins(review)
    if review.faults:
        yield ""
    for fault in review.faults:
        yield f"- **rule fault** {code(fault.rule)} on {code(fault.subject)}: {escaped(fault.error)}"
    yield ""
    yield f"<sub>{escaped(CAUTION)}</sub>"


def _waived(review: Review) -> str:
    waived = sum(1 for judgement in review.judgements if judgement.waiver)
    return f" ({waived} waived)" if waived else ""


def _findings(review: Review) -> Iterator[str]:
    """What fails, the gravest first, then what a person must look at, then what is accepted."""
    explained = explained_by(review.judgements)
    live = [judgement for judgement in review.judgements if not judgement.waiver]
    for grave, title in TITLES.items():
        failed = [one for one in live if one.kind is Kind.FAIL and gravity(one) is grave]
        yield from _block(review, failed, title, explained)
    asked = [one for one in live if one.kind is Kind.REVIEW]
    yield from _block(review, asked, "what a person must look at", explained)
    yield from _block(review, [one for one in review.judgements if one.waiver], "what is accepted", explained)


def _block(
    review: Review, judgements: Sequence[Judgement], title: str, explained: Mapping[int, list[Judgement]]
) -> Iterator[str]:
    if judgements:
        yield ""
        yield f"**{title}**"
        yield ""
    for judgement in gravest_first(judgements):
        yield from _finding(review, judgement, explained.get(id(judgement), []))


def _finding(review: Review, judgement: Judgement, explained: Sequence[Judgement]) -> Iterator[str]:
    place = review.place(judgement)
    word = "waived" if judgement.waiver else kind_word(judgement.kind)
    margin = f", margin {margin_words(judgement)}" if judgement.measure else ""
    where = f"({code(judgement.rule)}, {code(str(place))}{escaped(margin)})"
    yield f"- **{word}** {escaped(judgement.subject)}: {escaped(judgement.message)} {where}"
    path = path_text(judgement.path)
    also = f"explains {judgements_text(explained)}" if explained else ""
    details = (
        ("why", judgement.why), ("path", path), ("mend", judgement.mend), ("waiver", judgement.waiver), ("also", also),
    )  # fmt: skip
    for label, text in details:
        if text:
            yield f"  - {label}: {escaped(text)}"
    yield from _account(judgement)


def _account(judgement: Judgement) -> Iterator[str]:
    """How a number is made up, folded, below the item it belongs to."""
    measure = judgement.measure
    if measure is None or not judgement.account:
        return
    yield ""
    yield "  <details><summary>account</summary>"
    yield ""
    yield "  | term | size | from |"
    yield "  | --- | ---: | --- |"
    for side in sides(judgement):
        for line in side.lines:
            of = code_in_table(source(line)) if source(line) else ""
            yield f"  | {escaped(f'{sign(line)} {line.name}')} | {escaped(line_text(line, measure.dimension))} | {of} |"
        yield f"  | = {escaped(side.word)} | {escaped(side.text)} | |"
    yield f"  | margin | {escaped(margin_words(judgement))} | |"
    yield ""
    yield "  </details>"
    yield ""


def _next(review: Review) -> Iterator[str]:
    """What to find out next."""
    found = questions(review)
    if not found:
        return
    yield ""
    yield "**what to find out next**"
    yield ""
    for number, question in enumerate(found[:MOST_QUESTIONS], 1):
        yield f"{number}. {escaped(question.what)}"
        yield f"   - settles: {escaped(settles_text(question))}"
        if limits := limits_text(question.limits):
            yield f"   - keep: {escaped(limits)}"
        yield f"   - write: {code(paths_text(question))}"
    left = rest(found[MOST_QUESTIONS:])
    if left:
        yield ""
        yield "<details><summary>what else is missing</summary>"
        yield ""
        for one in left:
            yield f"- {escaped(rest_text(one))}"
        yield ""
        yield "</details>"


def _open(review: Review) -> Iterator[str]:
    """What is open: with its number where there is one, and counted where there is none."""
    waiting = [judgement for judgement in review.judgements if judgement.kind is Kind.OPEN]
    known = gravest_first(judgement for judgement in waiting if has_number(judgement))
    refused = [judgement for judgement in waiting if judgement.measure is None and not judgement.missing]
    nothing = len(waiting) - len(known) - len(refused)
    if not waiting:
        return
    yield ""
    yield f"<details><summary>{len(waiting)} open, {len(known)} with a margin so far</summary>"
    yield ""
    for judgement in [*known, *refused]:
        kept = keep_text(judgement, must_keep(review, judgement))
        text = f"{judgement.subject}: {judgement.message}{f': {kept}' if kept else ''}"
        yield f"- {escaped(text)} ({code(judgement.rule)}, {code(str(review.place(judgement)))})"
        yield from _account(judgement)
    if nothing:
        yield f"- of {nothing} {'more ' if known or refused else ''}no number is known yet"
    yield ""
    yield "</details>"


def _margins(review: Review) -> Iterator[str]:
    measured = least_room_first(review.judgements)[:MOST_MARGINS]
    if measured:
        yield ""
        yield "| least margins | element | margin | have | need |"
        yield "| --- | --- | ---: | --- | --- |"
    for judgement in measured:
        assert judgement.measure is not None
        cells = (margin_words(judgement), judgement.measure.texts()[0], judgement.measure.limit_text())
        rule = f"{code_in_table(judgement.rule)}{_under(judgement)}"
        yield f"| {rule} | {escaped(judgement.subject)} | {' | '.join(map(escaped, cells))} |"


def _under(judgement: Judgement) -> str:
    """Of a failure that another one explains, that one."""
    return f" under {code_in_table(judgement.under)}" if judgement.under else ""
