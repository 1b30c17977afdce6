"""The report for people at a terminal: readable at 80 columns, without colour, and in a pipe."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Final

from tidegate.lint.description.place import Fault
from tidegate.lint.engine import Review
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.reports.columns import wrapped
from tidegate.lint.reports.detector_margins import detector_margins, table_lines
from tidegate.lint.reports.gravity import TITLES, gravest_first, gravity, has_number
from tidegate.lint.reports.ladder import ladder_lines, ladders
from tidegate.lint.reports.open_lines import next_lines, open_lines
from tidegate.lint.reports.order import CAUTION, by_element, described, explained_by, verdict
from tidegate.lint.reports.paint import Line
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.reports.text_lines import LABEL, blank, plain_line, room, two_ends, wrapped_lines
from tidegate.lint.reports.words import judgements_text, margin_words

MOST_WIDTH: Final = 110
"""Widest line: longer ones are hard to read."""

_STYLES: Final = {
    Kind.FAIL: "bold red", Kind.REVIEW: "bold yellow", Kind.OPEN: "bold cyan", Kind.PASS: "green",
    Kind.NOT_APPLICABLE: "dim",
}  # fmt: skip


def fault_lines(faults: Sequence[Fault]) -> Iterator[Line]:
    """Why a file cannot be used: one line a fault."""
    for fault in faults:
        said = str(fault).removeprefix(f"{fault.place}: ")
        yield Line(((plain(f"{fault.place}: "), "bold"), (plain(said), "")))


def review_lines(review: Review, width: int, *, all_kinds: bool = False) -> Iterator[Line]:
    """The lines of the report; ``all_kinds`` shows what passes and what does not apply as well."""
    width = min(width, MOST_WIDTH)
    yield from _head(review, width)
    yield from _failures(review, width)
    yield from _rule_faults(review, width)
    yield from next_lines(review, width)
    yield from _detectors(review, width)
    yield from open_lines(review, width, all_kinds=all_kinds)
    if all_kinds:
        yield from _all_else(review, width)
    for ladder in ladders(review.loaded.description, review.graph):
        yield blank()
        yield from map(plain_line, ladder_lines(ladder, width=width))
    yield blank()
    yield from _table(review)
    yield blank()
    yield from wrapped_lines("", CAUTION, width, indent=0, style="dim")


def _failures(review: Review, width: int) -> Iterator[Line]:
    """What fails, the gravest first, then what a person must look at, then what is accepted."""
    failed = [one for one in review.judgements if one.kind is Kind.FAIL and not one.waiver]
    explained = explained_by(review.judgements)
    for grave, title in TITLES.items():
        group = [one for one in failed if gravity(one) is grave]
        yield from _block(review, group, title, width, explained)
    asked = [one for one in review.judgements if one.kind is Kind.REVIEW and not one.waiver]
    yield from _block(review, asked, "what a person must look at", width, explained)
    accepted = [one for one in review.judgements if one.waiver]
    yield from _block(review, accepted, "what is accepted", width, explained)


def _block(
    review: Review, judgements: Iterable[Judgement], title: str, width: int, explained: Mapping[int, list[Judgement]]
) -> Iterator[Line]:
    for number, judgement in enumerate(gravest_first(judgements)):
        yield blank()
        if number == 0:
            yield from wrapped_lines("", title, width, indent=0, style="bold")
        yield from _judgement_lines(review, judgement, width, f"{judgement.subject}: ")
        also = explained.get(id(judgement))
        if also:
            yield from wrapped_lines("also", f"explains {judgements_text(also)}", width, indent=2)


def _detectors(review: Review, width: int) -> Iterator[Line]:
    """The three margins of each detector."""
    for number, line in enumerate(table_lines(detector_margins(review), width=width)):
        if number == 0:
            yield blank()
        yield plain_line(line, "" if number else "bold")


def _all_else(review: Review, width: int) -> Iterator[Line]:
    """Element by element, everything that is not told above."""
    for subject, judgements in by_element(review.judgements):
        shown = [one for one in judgements if not _is_told(one)]
        if shown:
            yield blank()
            noun, place = described(review, subject)
            yield from two_ends(f"{subject}, {noun}", f"{place.file}:{place.line}", width, "bold")
        for judgement in shown:
            yield from _judgement_lines(review, judgement, width)


def _is_told(judgement: Judgement) -> bool:
    """Whether a judgement stands among the failures and questions, or among what is open with a number."""
    so_far = judgement.kind is Kind.OPEN and has_number(judgement)
    return judgement.kind in (Kind.FAIL, Kind.REVIEW) or bool(judgement.waiver) or so_far


def _head(review: Review, width: int) -> Iterator[Line]:
    description = review.loaded.description
    name = description.subsystem or "unnamed subsystem"
    title = f"{name}, revision {description.revision}" if description.revision else name
    file = review.loaded.sources.files[0].name
    yield from two_ends(title, file, width, "bold")
    if description.invented:
        yield from wrapped_lines(
            "", "invented for an example; nothing real stands behind it", width, indent=0, style="dim"
        )
    if review.settings.summary:
        yield from wrapped_lines("", f"settings: {review.settings.summary}", width, indent=0, style="dim")
    counts = review.counts
    words = [
        _count(counts.get(Kind.FAIL, 0), "failure", "failures"),
        _count(counts.get(Kind.REVIEW, 0), "question", "questions"),
        _count(counts.get(Kind.OPEN, 0), "open", "open"),
        _count(counts.get(Kind.PASS, 0), "pass", "passes"),
    ]
    accepted = sum(1 for judgement in review.judgements if judgement.waiver)
    said = verdict(review)
    style = "bold red" if said.startswith("NOT") else "bold green"
    text = ", ".join(word for word in words if word) or "nothing to judge"
    text += f" ({accepted} waived)" if accepted else ""
    explained = sum(1 for judgement in review.judgements if judgement.under)
    text += f"; {explained} more explained by these failures" if explained else ""
    if len(said) + 3 + len(text) <= width:
        yield Line(((said, style), (f"   {text}", "")))
        return
    yield Line(((said, style),))
    yield from wrapped_lines("", text, width, indent=0)


def _count(number: int, one: str, many: str) -> str:
    return f"{number} {one if number == 1 else many}" if number else ""


def _judgement_lines(review: Review, judgement: Judgement, width: int, before: str = "") -> Iterator[Line]:
    place = review.place(judgement)
    word = "waived" if judgement.waiver else _kind_word(judgement)
    style = "dim" if judgement.waiver else _STYLES[judgement.kind]
    for number, part in enumerate(wrapped(plain(before + judgement.message), room(width, 2))):
        head = word.ljust(LABEL) if number == 0 else " " * LABEL
        yield Line((("  " + head, style), (part, "")))
    margin = f"margin {margin_words(judgement)}, " if judgement.measure else ""
    yield from wrapped_lines(" ", f"{margin}{judgement.rule}, {place}", width, indent=2, style="dim")
    if judgement.kind is not Kind.OPEN and judgement.why:
        yield from wrapped_lines("why", judgement.why, width, indent=2)
    if judgement.path and judgement.kind is not Kind.PASS:
        yield from wrapped_lines("path", path_text(judgement.path), width, indent=2)
    if judgement.mend and not judgement.under:
        yield from wrapped_lines("mend", judgement.mend, width, indent=2)
    if judgement.waiver:
        yield from wrapped_lines("waiver", judgement.waiver, width, indent=2)


def _kind_word(judgement: Judgement) -> str:
    if judgement.kind is Kind.FAIL and judgement.level is not Level.ERROR:
        return judgement.level.value
    return {Kind.NOT_APPLICABLE: "n/a"}.get(judgement.kind, judgement.kind.value)


def _rule_faults(review: Review, width: int) -> Iterator[Line]:
    if review.faults:
        yield blank()
        what = "rules that failed themselves: their judgements are missing"
        yield from wrapped_lines("", what, width, indent=0, style="bold red")
    for fault in review.faults:
        yield from wrapped_lines("fault", f"{fault.rule} on {fault.subject}: {fault.error}", width, indent=2)


def _table(review: Review) -> Iterator[Line]:
    """How much was judged, family by family."""
    kinds = (Kind.PASS, Kind.FAIL, Kind.REVIEW, Kind.OPEN, Kind.NOT_APPLICABLE)
    words = ("pass", "fail", "review", "open", "n/a")
    families: dict[str, dict[Kind, int]] = {}
    for judgement in review.judgements:
        row = families.setdefault(judgement.rule.partition("/")[0], dict.fromkeys(kinds, 0))
        row[judgement.kind] += 1
    longest = max((len(family) for family in families), default=6)
    yield plain_line("judged".ljust(longest + 2) + "".join(word.rjust(8) for word in words), "bold")
    for family, row in families.items():
        cells = "".join((str(row[kind]) if row[kind] else ".").rjust(8) for kind in kinds)
        yield plain_line(family.replace("_", " ").ljust(longest + 2) + cells)
