"""The report for people at a terminal: readable at 80 columns, without colour, and in a pipe."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Final

from tidegate.lint.description.place import Fault
from tidegate.lint.engine import Review
from tidegate.lint.graph.edge import path_text
from tidegate.lint.judgement import Judgement, Kind, Level
from tidegate.lint.reports.columns import columns, wrapped
from tidegate.lint.reports.ladder import ladder_lines, ladders
from tidegate.lint.reports.order import CAUTION, by_element, described, missing_facts, verdict
from tidegate.lint.reports.paint import Line
from tidegate.lint.reports.plain_text import plain

MOST_WIDTH: Final = 110
"""Widest line: longer ones are hard to read."""

_LABEL: Final = 9  # columns in which fail, why, path and mend stand
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
    for subject, judgements in by_element(review.judgements):
        shown = [j for j in judgements if all_kinds or j.kind in (Kind.FAIL, Kind.REVIEW)]
        if shown:
            yield _blank()
            yield from _element_line(review, subject, width)
            for judgement in shown:
                yield from _judgement_lines(review, judgement, width)
    yield from _rule_faults(review, width)
    yield from _missing(review, width)
    for ladder in ladders(review.loaded.description, review.graph):
        yield _blank()
        yield from map(_plain_line, ladder_lines(ladder, width=width))
    yield _blank()
    yield from _table(review)
    yield _blank()
    yield from _wrapped("", CAUTION, width, indent=0, style="dim")


def _blank() -> Line:
    return Line((("", ""),))


def _plain_line(text: str, style: str = "") -> Line:
    return Line(((plain(text), style),))


def _two_ends(left: str, right: str, width: int, style: str) -> Iterator[Line]:
    """Text at both ends of the line; the right one below the left one where there is no room beside it."""
    left, right = plain(left), plain(right)
    gap = width - columns(left) - columns(right)
    if gap >= 2:
        yield Line(((left, style), (" " * gap, ""), (right, "dim")))
        return
    yield from _wrapped("", left, width, indent=0, style=style)
    yield Line((("  ", ""), (right, "dim")))


def _wrapped(label: str, text: str, width: int, *, indent: int, style: str = "") -> Iterator[Line]:
    """A label, and a text that keeps clear of it on every line."""
    room = max(width - indent - (_LABEL if label else 0), 24)
    margin = " " * indent
    for number, part in enumerate(wrapped(plain(text), room) or [""]):
        if not label:
            yield Line(((margin + part, style),))
        else:
            head = label.ljust(_LABEL) if number == 0 else " " * _LABEL
            yield Line(((margin + head, "dim"), (part, style)))


def _head(review: Review, width: int) -> Iterator[Line]:
    description = review.loaded.description
    name = description.subsystem or "unnamed subsystem"
    title = f"{name}, revision {description.revision}" if description.revision else name
    file = review.loaded.sources.files[0].name
    yield from _two_ends(title, file, width, "bold")
    if description.invented:
        yield from _wrapped("", "invented for an example; nothing real stands behind it", width, indent=0, style="dim")
    if review.settings.summary:
        yield from _wrapped("", f"settings: {review.settings.summary}", width, indent=0, style="dim")
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
    if len(said) + 3 + len(text) <= width:
        yield Line(((said, style), (f"   {text}", "")))
        return
    yield Line(((said, style),))
    yield from _wrapped("", text, width, indent=0)


def _count(number: int, one: str, many: str) -> str:
    return f"{number} {one if number == 1 else many}" if number else ""


def _element_line(review: Review, subject: str, width: int) -> Iterator[Line]:
    noun, place = described(review, subject)
    return _two_ends(f"{subject}, {noun}", f"{place.file}:{place.line}", width, "bold")


def _judgement_lines(review: Review, judgement: Judgement, width: int) -> Iterator[Line]:
    place = review.place(judgement)
    word = "waived" if judgement.waiver else _kind_word(judgement)
    style = "dim" if judgement.waiver else _STYLES[judgement.kind]
    room = max(width - 2 - _LABEL, 24)
    for number, part in enumerate(wrapped(plain(judgement.message), room)):
        head = word.ljust(_LABEL) if number == 0 else " " * _LABEL
        yield Line((("  " + head, style), (part, "")))
    margin = f"margin {judgement.measure.margin_text()}, " if judgement.measure else ""
    yield from _wrapped(" ", f"{margin}{judgement.rule}, {place}", width, indent=2, style="dim")
    if judgement.kind is not Kind.OPEN and judgement.why:
        yield from _wrapped("why", judgement.why, width, indent=2)
    if judgement.path and judgement.kind is not Kind.PASS:
        yield from _wrapped("path", path_text(judgement.path), width, indent=2)
    if judgement.mend:
        yield from _wrapped("mend", judgement.mend, width, indent=2)
    if judgement.waiver:
        yield from _wrapped("waiver", judgement.waiver, width, indent=2)


def _kind_word(judgement: Judgement) -> str:
    if judgement.kind is Kind.FAIL and judgement.level is not Level.ERROR:
        return judgement.level.value
    return {Kind.NOT_APPLICABLE: "n/a"}.get(judgement.kind, judgement.kind.value)


def _rule_faults(review: Review, width: int) -> Iterator[Line]:
    if review.faults:
        yield _blank()
        what = "rules that failed themselves: their judgements are missing"
        yield from _wrapped("", what, width, indent=0, style="bold red")
    for fault in review.faults:
        yield from _wrapped("fault", f"{fault.rule} on {fault.subject}: {fault.error}", width, indent=2)


def _missing(review: Review, width: int) -> Iterator[Line]:
    waiting = missing_facts(review)
    if waiting:
        yield _blank()
        yield from _wrapped("", "open: these facts are missing from the description", width, indent=0, style="bold")
    for fact, rules in waiting.items():
        yield from _wrapped("open", f"{fact}", width, indent=2, style="bold")
        yield from _wrapped(" ", f"for {', '.join(rules)}", width, indent=2, style="dim")
    unexplained = [j for j in review.judgements if j.kind is Kind.OPEN and not j.missing]
    for judgement in unexplained:
        yield from _wrapped("open", f"{judgement.subject}: {judgement.message}", width, indent=2)
        yield from _wrapped(" ", f"for {judgement.rule}, {review.place(judgement)}", width, indent=2, style="dim")


def _table(review: Review) -> Iterator[Line]:
    """How much was judged, family by family."""
    kinds = (Kind.PASS, Kind.FAIL, Kind.REVIEW, Kind.OPEN, Kind.NOT_APPLICABLE)
    words = ("pass", "fail", "review", "open", "n/a")
    families: dict[str, dict[Kind, int]] = {}
    for judgement in review.judgements:
        row = families.setdefault(judgement.rule.partition("/")[0], dict.fromkeys(kinds, 0))
        row[judgement.kind] += 1
    longest = max((len(family) for family in families), default=6)
    yield _plain_line("judged".ljust(longest + 2) + "".join(word.rjust(8) for word in words), "bold")
    for family, row in families.items():
        cells = "".join((str(row[kind]) if row[kind] else ".").rjust(8) for kind in kinds)
        yield _plain_line(family.replace("_", " ").ljust(longest + 2) + cells)
