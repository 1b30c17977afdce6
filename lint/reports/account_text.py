"""The account of a number for people at a terminal: what there is and what is needed, term by term, and the margin."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Final

from tidegate.lint.engine import Review
from tidegate.lint.judgement import Judgement
from tidegate.lint.must_keep import must_keep
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.accounts import Side, line_text, sides, sign, source
from tidegate.lint.reports.columns import columns, wrapped
from tidegate.lint.reports.plain_text import plain
from tidegate.lint.reports.words import keep_text, margin_words

_LEAST_ROOM: Final = 24


def account_lines(review: Review, judgement: Judgement, *, width: int) -> Iterator[str]:
    """What was judged, each side of it term by term, and the margin."""
    measure = judgement.measure
    assert measure is not None
    word = "waived" if judgement.waiver else f"under {judgement.under}" if judgement.under else judgement.kind.value
    rule = review.rules.get(judgement.rule)
    title = f": {rule.title}" if rule is not None else ""
    yield from _wrapped(f"{judgement.subject}, {judgement.rule}, {word}{title}", width, indent=0)
    parts = sides(judgement)
    rows = [row for side in parts for row in _rows(side, measure.dimension)]
    widths = [max((columns(row[number]) for row in rows), default=0) for number in range(2)]
    names = min(widths[0], max(width - widths[1] - 8, _LEAST_ROOM))
    for side in parts:
        for row in _rows(side, measure.dimension):
            yield from _aligned(row, names, widths[1], width)
    yield from _wrapped(f"margin {margin_words(judgement)}", width, indent=2)
    kept = keep_text(judgement, must_keep(review, judgement), by_name=True)
    if kept:
        yield from _wrapped(kept, width, indent=2)
    if judgement.why:
        yield from _wrapped(judgement.why, width, indent=2)


def _rows(side: Side, dimension: Dimension) -> list[tuple[str, str, str]]:
    """A side as rows of name, value and source; its result last, where it is made of several terms."""
    rows = [
        (
            f"{' ' if number == 0 and line.value >= 0.0 else sign(line)} {line.name}",
            line_text(line, dimension),
            source(line),
        )
        for number, line in enumerate(side.lines)
    ]
    return [*rows, (f"{'=' if rows else ' '} {side.word}", side.text, "")]


def _aligned(row: Sequence[str], names: int, values: int, width: int) -> Iterator[str]:
    """A row; its source on the next line where there is no room beside it."""
    name, value, source = (plain(cell) for cell in row)
    *above, last = wrapped(name, names) or [""]
    yield from (f"  {line}" for line in above)
    line = f"  {last}{' ' * (names - columns(last))}  {value.rjust(values)}"
    if not source:
        yield line
    elif columns(line) + 2 + columns(source) <= width:
        yield f"{line}  {source}"
    else:
        yield line
        yield from _wrapped(source, width, indent=6)


def _wrapped(text: str, width: int, *, indent: int) -> Iterator[str]:
    return (f"{' ' * indent}{line}" for line in wrapped(plain(text), max(width - indent, _LEAST_ROOM)))
