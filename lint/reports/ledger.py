"""The margin ledger: every judgement with a number, least first in terms that can be compared."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence
from typing import Final

import msgspec

from tidegate.lint.judgement import Judgement, Kind, Measure
from tidegate.lint.reports.gravity import least_room_first, missed, told_share
from tidegate.lint.reports.plain_text import plain

_BLOCKS: Final = "▁▂▃▄▅▆▇█"
_ASCII_BLOCKS: Final = ".:-=+*#@"
_BINS: Final = ((0.0, "below 0"), (0.01, "1 %"), (0.03, "3 %"), (0.1, "10 %"), (0.3, "30 %"), (1.0, "100 %"))
"""Upper ends of the classes of relative slack; the first holds what is below 0, another one what is above the last."""

_LESS: Final = 1e-12


class Entry(msgspec.Struct, frozen=True):
    """A judgement with its measure, and the sure end of the margin as a share of what is needed."""

    judgement: Judgement
    measure: Measure
    slack: float


def entries(
    judgements: Iterable[Judgement], *, element: str | None = None, family: str | None = None, rule: str | None = None
) -> list[Entry]:
    """The judgements that have a number, those that miss their limit first, then by the sure end of their margin.

    Of one element, of one family or of one rule, where these are named.
    """
    chosen = (
        judgement
        for judgement in judgements
        if element in (None, judgement.subject)
        and family in (None, judgement.rule.partition("/")[0])
        and rule in (None, judgement.rule)
    )
    found = []
    for judgement in least_room_first(chosen):
        measure = judgement.measure
        assert measure is not None
        found.append(Entry(judgement, measure, measure.share(measure.sure_margin)))
    return found


def histogram(found: Sequence[Entry], *, unicode: bool) -> str:
    """How many judgements have how much slack for sure, in one line; those of which nothing is sure are not counted."""
    counts = [0] * (len(_BINS) + 1)
    for entry in found:
        if entry.judgement.kind is not Kind.OPEN or math.isfinite(entry.slack):
            counts[_bin(entry.slack)] += 1
    blocks, most = (_BLOCKS if unicode else _ASCII_BLOCKS), max(counts)
    words = [f"{'' if number == 0 else '<'}{word}" for number, (_, word) in enumerate(_BINS)] + ["more"]
    cells = []
    for word, count in zip(words, counts, strict=True):
        bar = blocks[math.ceil(count / most * len(blocks)) - 1] if count else ""
        cells.append(f"{word.replace(' ', '')} {bar}{count}")
    return f"slack  {'  '.join(cells)}".replace("below0", "<0")


def _bin(slack: float) -> int:
    """The class of a slack; what is exactly 0 is kept, and stands in the class above."""
    if slack < -_LESS:
        return 0
    return next((number for number, (end, _) in enumerate(_BINS) if number and slack < end), len(_BINS))


def ledger_lines(found: Sequence[Entry], *, width: int) -> Iterator[str]:
    """A line for each judgement, its rule on the next one where there is no room."""
    rows = [_cells(entry) for entry in found]
    heads = ("slack", "margin", "have", "need")
    widths = [max(len(head), *(len(row[i]) for row in rows)) for i, head in enumerate(heads)] if rows else []
    if rows:
        yield _aligned(heads, widths, "of")
    groups = {_group(entry.judgement) for entry in found}
    told = "" if len(groups) > 1 else next(iter(groups), "")
    for entry, row in zip(found, rows, strict=True):
        judgement = entry.judgement
        if _group(judgement) != told:
            told = _group(judgement)
            yield f"{told}:"
        mark = _mark(judgement)
        of = f"{judgement.subject} {judgement.rule}{f' ({mark})' if mark else ''}"
        line = _aligned(row, widths, plain(of))
        if len(line) <= width:
            yield line
        else:
            yield _aligned(row, widths, plain(judgement.subject))
            rule = plain(of.partition(" ")[2])
            yield " " * min(sum(widths) + 2 * len(widths), max(width - len(rule), 2)) + rule


def _group(judgement: Judgement) -> str:
    """What a margin stands among."""
    if missed(judgement):
        return "short of the limit"
    return "open, by what is known so far" if judgement.kind is Kind.OPEN else "kept, by what is sure"


def _aligned(cells: Sequence[str], widths: Sequence[int], last: str) -> str:
    slack, margin, have, need = (
        cell.rjust(size) if number < 3 else cell.ljust(size)
        for number, (cell, size) in enumerate(zip(cells, widths, strict=True))
    )
    return f"{slack}  {margin}  {have}  {need}  {last}".rstrip()


def _mark(judgement: Judgement) -> str:
    """What a reader should know of a judgement beside its number."""
    if judgement.waiver:
        return "waived"
    if judgement.under:
        return f"under {judgement.under}"
    return "review" if judgement.kind is Kind.REVIEW else ""


def _cells(entry: Entry) -> tuple[str, str, str, str]:
    measure = entry.measure
    have, _ = measure.texts()
    return (
        percent(told_share(entry.judgement), known=measure.is_exact),
        measure.margin_words(entry.judgement.kind),
        have,
        measure.limit_text(),
    )


def percent(slack: float, *, known: bool) -> str:
    """A share of the need, short; one without end is not known, or has none."""
    if math.isinf(slack):
        return "not known" if not known else "no end" if slack > 0 else "-no end"
    percent = 100.0 * slack
    if abs(percent) >= 999.5:
        return f"{'-' if percent < 0 else '+'}>999 %"
    digits = 0 if abs(percent) >= 99.5 else 1
    return f"{percent:+.{digits}f} %".replace("-0.0 %", "-<0.1 %" if percent < 0 else "+0.0 %")
