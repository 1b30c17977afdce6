"""The three margins of a detector, at a glance: it protects, it stays quiet in service, it comes back."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

import msgspec

from tidegate.lint.engine import Review
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.reports.columns import columns
from tidegate.lint.reports.plain_text import plain

THREE: Final = (
    ("protects", "trip_window/guarantee"), ("stays quiet", "trip_window/nuisance"),
    ("comes back", "trip_window/release"),
)  # fmt: skip
"""What each margin says, and the rule that gives it."""


class DetectorMargins(msgspec.Struct, frozen=True):
    """A detector with its three judgements, in the order of ``THREE``; None where a rule says nothing about it."""

    detector: str
    judgements: tuple[Judgement | None, ...]

    @property
    def texts(self) -> tuple[str, ...]:
        """The margins as far as they are known."""
        return tuple(_text(judgement) for judgement in self.judgements)


def _text(judgement: Judgement | None) -> str:
    if judgement is None or (judgement.measure is None and judgement.kind is not Kind.OPEN):
        return "-"
    return "not known" if judgement.measure is None else judgement.measure.margin_words(judgement.kind)


def detector_margins(review: Review, element: str | None = None) -> list[DetectorMargins]:
    """The detectors of which one of the three is judged, or the one that is named."""
    found = {(one.rule, one.subject): one for one in review.judgements}
    rows = [
        DetectorMargins(detector, tuple(found.get((rule, detector)) for _, rule in THREE))
        for detector in review.loaded.description.comparators
        if element in (None, detector)
    ]
    return [row for row in rows if set(row.texts) != {"-"}]


def table_lines(rows: Sequence[DetectorMargins], *, width: int) -> list[str]:
    """The margins as a table; as a list where there is no room for one."""
    if not rows:
        return []
    heads = [name for name, _ in THREE]
    cells = [(plain(row.detector), *row.texts) for row in rows]
    first = max(columns(row[0]) for row in [("detectors",), *cells])
    widths = [max(len(head), *(len(row[number]) for row in cells)) for number, head in enumerate(heads, 1)]
    if first + sum(widths) + 2 * len(widths) > width:
        return [line for row in cells for line in _listed(row, heads)]
    aligned = [("detectors", *heads), *cells]
    return [
        row[0] + " " * (first - columns(row[0]))
        + "".join(f"  {cell.rjust(size)}" for cell, size in zip(row[1:], widths, strict=True))
        for row in aligned
    ]  # fmt: skip


def _listed(row: Sequence[str], heads: Sequence[str]) -> list[str]:
    return [row[0], *(f"  {head.ljust(11)}  {cell}" for head, cell in zip(heads, row[1:], strict=True) if cell != "-")]
