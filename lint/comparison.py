"""Two reviews side by side: facts that changed, judgements that changed kind, margins that moved; the worst first."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from enum import IntEnum
from typing import Any, Final

import msgspec

from tidegate.lint.description.place import dotted
from tidegate.lint.engine import WEIGHT, Review
from tidegate.lint.judgement import Judgement, Kind, Level, Measure


class Harm(IntEnum):
    """How a change of a judgement is to be taken; the worst is the greatest."""

    BETTER = 0
    MARGIN_GREW = 1
    OTHER = 2
    MARGIN_SHRANK = 3
    WORSE = 4


class FactChange(msgspec.Struct, frozen=True):
    """A fact that was given, taken away or changed; None where it is not given."""

    path: str
    old: str | None
    new: str | None


class JudgementChange(msgspec.Struct, frozen=True):
    """What a rule says about an element, before and after; None where it says nothing."""

    rule: str
    subject: str
    old: Judgement | None
    new: Judgement | None
    harm: Harm

    @property
    def moved(self) -> float:
        """By how much of its need the margin moved; below zero it shrank."""
        if self.old is None or self.new is None or self.old.measure is None or self.new.measure is None:
            return 0.0
        old, new = self.old.measure, self.new.measure
        sure = _apart(old.share(old.sure_margin), new.share(new.sure_margin))
        return sure or _apart(old.share(old.best_margin), new.share(new.best_margin))


class Comparison(msgspec.Struct, frozen=True):
    """All that changed between two reviews."""

    facts: tuple[FactChange, ...]
    judgements: tuple[JudgementChange, ...]

    @property
    def got_worse(self) -> bool:
        """Whether anything needs somebody that did not before."""
        return any(change.harm is Harm.WORSE for change in self.judgements)


_RANK: Final = {Kind.PASS: 0, Kind.NOT_APPLICABLE: 0, Kind.REVIEW: 1, Kind.OPEN: 2, Kind.FAIL: 3}
_STILL: Final = 1e-9  # of the numbers: less is rounding, and no move


def compare(old: Review, new: Review) -> Comparison:
    """What changed from one review to the other."""
    before = {(judgement.rule, judgement.subject): judgement for judgement in old.judgements}
    after = {(judgement.rule, judgement.subject): judgement for judgement in new.judgements}
    changes = []
    for key in {**before, **after}:
        change = _change(*key, before.get(key), after.get(key))
        if change is not None:
            changes.append(change)
    changes.sort(key=lambda change: (-change.harm, -_now(change), change.moved))
    return Comparison(tuple(_facts(old.loaded.sources.data, new.loaded.sources.data)), tuple(changes))


def _change(rule: str, subject: str, old: Judgement | None, new: Judgement | None) -> JudgementChange | None:
    harm = _harm(old, new)
    return None if harm is None else JudgementChange(rule, subject, old, new, harm)


def _now(change: JudgementChange) -> int:
    """How much the judgement asks of somebody now, the level of a failure counted."""
    new = change.new
    return _rank(new) * 3 + (WEIGHT[new.level] if new is not None and new.kind is Kind.FAIL else 0)


def _harm(old: Judgement | None, new: Judgement | None) -> Harm | None:
    """None where nothing changed that a reader should know."""
    was, now = _rank(old), _rank(new)
    if now > was:
        return Harm.OTHER if _is_known_now(old, new) else Harm.WORSE
    if now < was:
        return Harm.BETTER
    if old is None or new is None:
        return None
    told_otherwise = old.kind is not new.kind or old.under != new.under or bool(old.waiver) != bool(new.waiver)
    if old.measure is None or new.measure is None or old.measure.dimension is not new.measure.dimension:
        said_otherwise = (old.measure, old.message) != (new.measure, new.message)
        return Harm.OTHER if told_otherwise or (said_otherwise and old.kind is not Kind.PASS) else None
    moved = _moved(old.measure, new.measure)
    if moved < 0.0 and _rank(new) == _RANK[Kind.FAIL]:
        return Harm.WORSE
    if told_otherwise:
        return Harm.OTHER
    if moved == 0.0:
        return None
    return Harm.MARGIN_GREW if moved > 0.0 else Harm.MARGIN_SHRANK


def _is_known_now(old: Judgement | None, new: Judgement | None) -> bool:
    """Whether a note asks for a look where nothing was known before: what is said honestly makes nothing worse."""
    if old is None or new is None:
        return False
    return old.kind is Kind.NOT_APPLICABLE and new.kind is Kind.REVIEW and new.level is Level.NOTE


def _moved(old: Measure, new: Measure) -> float:
    """By how much the margin moved, in the unit of both: its sure end, and where that stayed its best end.

    What rounding makes of it counts as nothing.
    """
    sizes = (abs(size) for size in (old.need, old.have, new.need, new.have) if math.isfinite(size))
    still = _STILL * max(sizes, default=0.0)
    sure = _apart(old.sure_margin, new.sure_margin)
    if abs(sure) > still:
        return sure
    best = _apart(old.best_margin, new.best_margin)
    return best if abs(best) > still else 0.0


def _apart(old: float, new: float) -> float:
    """How far apart two margins are; two without end are where they were."""
    return 0.0 if old == new else new - old


def _rank(judgement: Judgement | None) -> int:
    """How much a judgement asks of somebody; an accepted one asks nothing, one told under another is a failure."""
    if judgement is None or judgement.waiver:
        return 0
    return _RANK[Kind.FAIL if judgement.under else judgement.kind]


def _facts(old: Mapping[str, Any], new: Mapping[str, Any]) -> Iterator[FactChange]:
    before, after = dict(_flat(old, ())), dict(_flat(new, ()))
    for path in {**before, **after}:
        if before.get(path) != after.get(path):
            yield FactChange(path, before.get(path), after.get(path))


def _flat(node: Any, path: tuple[str | int, ...]) -> Iterator[tuple[str, str]]:
    """Every single fact with its path."""
    if isinstance(node, dict) and node:
        for key, child in node.items():
            yield from _flat(child, (*path, key))
    elif isinstance(node, list) and node:
        for index, child in enumerate(node):
            yield from _flat(child, (*path, index))
    else:
        yield dotted(path), _shown(node)


def _shown(node: Any) -> str:
    if isinstance(node, bool):
        return "true" if node else "false"
    return "none given" if node in ({}, []) else str(node)
