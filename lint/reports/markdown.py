"""The report for a change request: Markdown with the verdict, what fails, what is open, and the least margins."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Final

from tidegate.lint.description.place import Fault
from tidegate.lint.engine import Review
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.reports.markdown_text import code, code_in_table, escaped
from tidegate.lint.reports.order import CAUTION, by_element, closest_first, kind_word, missing_facts, verdict

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
    for subject, judgements in by_element(review.judgements):
        shown = [j for j in judgements if j.kind in (Kind.FAIL, Kind.REVIEW)]
        if not shown:
            continue
        yield ""
        yield f"**{escaped(subject)}**"
        yield ""
        for judgement in shown:
            yield from _finding(review, judgement)


def _finding(review: Review, judgement: Judgement) -> Iterator[str]:
    place = review.place(judgement)
    word = "waived" if judgement.waiver else kind_word(judgement.kind)
    margin = f", margin {judgement.measure.margin_text()}" if judgement.measure else ""
    yield f"- **{word}** {escaped(judgement.message)} ({code(judgement.rule)}, {code(str(place))}{escaped(margin)})"
    path = path_text(judgement.path)
    details = (("why", judgement.why), ("path", path), ("mend", judgement.mend), ("waiver", judgement.waiver))
    for label, text in details:
        if text:
            yield f"  - {label}: {escaped(text)}"


def _open(review: Review) -> Iterator[str]:
    waiting = missing_facts(review)
    if waiting:
        yield ""
        yield f"<details><summary>{len(waiting)} facts are missing from the description</summary>"
        yield ""
        for fact, rules in waiting.items():
            yield f"- {code(fact)} for {', '.join(map(code, rules))}"
        yield ""
        yield "</details>"


def _margins(review: Review) -> Iterator[str]:
    measured = closest_first(review.judgements)[:MOST_MARGINS]
    if measured:
        yield ""
        yield "| least margins | element | margin | have | need |"
        yield "| --- | --- | ---: | --- | --- |"
    for judgement in measured:
        assert judgement.measure is not None
        have, need = judgement.measure.texts()
        cells = (judgement.measure.margin_text(), have, f"{judgement.measure.relation} {need}")
        yield f"| {code_in_table(judgement.rule)} | {escaped(judgement.subject)} | {' | '.join(map(escaped, cells))} |"
