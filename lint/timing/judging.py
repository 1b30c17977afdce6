"""A rule on timelines in one reading: at either corner of what is missing, and never sure of what was not tried."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Final

from msgspec.structs import replace

from tidegate.lint.case import Case
from tidegate.lint.judgement import Judgement, Kind
from tidegate.lint.timing.timeline import Gaps, Timelines, timelines

Judge = Callable[[Timelines], Judgement]

_MOST_TRIED: Final = 16
"""So many elements are tried one by one for whether it matters that a least end of theirs is missing."""
_MOST_PARTS: Final = 300
"""In a description of more elements, none is."""


def judged_in_time(case: Case, gaps: Gaps, judge: Judge) -> Judgement:
    """What a rule says of the timelines at the corner of the reading.

    At the sure corner what is missing may be anything, and where something that the supplies may do cannot be tried,
    nothing holds.  At the best corner what is missing harms nobody, and only what is tried for certain counts.  Least
    ends that are missing where the greatest is given are named only where it is open for want of them.
    """
    wide = timelines(case.description, case.graph)
    named = (*gaps.facts, *gaps.untried)
    case.reading.block(named)
    if case.at_best:
        return judge(wide.at_best)
    said = judge(wide)
    if not named:
        return _for_want_of_least_ends(case, gaps, judge, said) if gaps.lone else said
    if gaps.lone and said.kind is Kind.FAIL and _fails(judge, wide.lone_spread) and not _fails(judge, wide.at_best):
        case.reading.block(_that_matter(wide, gaps, judge))
    return _unsure(case, said) if gaps.untried else said


def _for_want_of_least_ends(case: Case, gaps: Gaps, judge: Judge, said: Judgement) -> Judgement:
    """What is said where nothing but least ends is missing."""
    if said.kind is not Kind.FAIL and said.measure is None:
        return said
    wide = timelines(case.description, case.graph)
    best = judge(wide.at_best)
    if said.kind is Kind.FAIL and best.kind is not Kind.FAIL:
        case.reading.block(_that_matter(wide, gaps, judge))
        return said
    ends = _margin(said), _margin(best)
    told = best if said.kind is Kind.FAIL else said
    if told.measure is None or ends[0] == ends[1]:
        return told
    return replace(told, measure=replace(told.measure, sure=min(ends), best=ends[1]), missing=gaps.lone)


def _fails(judge: Judge, lines: Timelines) -> bool:
    return judge(lines).kind is Kind.FAIL


def _margin(said: Judgement) -> float:
    """The margin; without end where there is no number."""
    if said.measure is None:
        return -math.inf if said.kind is Kind.FAIL else math.inf
    return said.measure.margin


def _that_matter(wide: Timelines, gaps: Gaps, judge: Judge) -> tuple[str, ...]:
    """The least ends that make a difference by themselves, as far as so many are tried; all of them where none does."""
    by_element: dict[str, list[str]] = {}
    for path in gaps.lone:
        by_element.setdefault(path.split(".")[1], []).append(path)
    if len(by_element) > _MOST_TRIED or len(wide.read.every) > _MOST_PARTS:
        return gaps.lone
    best = _margin(judge(wide.at_best))
    found = [
        path for element, paths in by_element.items() if _margin(judge(wide.spread_of(element))) < best
        for path in paths
    ]  # fmt: skip
    return tuple(found) or gaps.lone


def _unsure(case: Case, said: Judgement) -> Judgement:
    """What is said where something could not be tried: not known to hold, by no number."""
    if said.kind is Kind.FAIL:
        return replace(said, measure=None, account=(), limits=0)
    return case.fails("something that the supplies may do cannot be tried", mend="give what it is made from")
