"""Where the levels of a detector may lie, what limits each end, and how the levels of today keep their limits."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from typing import Final

import msgspec

from tidegate.lint.derived.levels.placing import AS_STATED, Answer, Place, Placing, Stated
from tidegate.lint.derived.levels.requirements import Due
from tidegate.lint.derived.levels.trip_levels import Which
from tidegate.lint.facts.reading import Corner


class Limit(msgspec.Struct, frozen=True):
    """What sets an end of an interval.

    Symbols:
        name           the requirement
        which          the level that it holds for
        limit_v     V  what the end of that level must keep
        error_v     V  how far the end of the level lies from its nominal there
        fact           the fact that the limit rests on most
        why            the numbers behind it
    """

    name: str
    which: Which
    limit_v: float
    error_v: float
    fact: str
    why: str


class Ends(msgspec.Struct, frozen=True):
    """How far the levels may be moved, in V, with all that is missing at one corner.

    Symbols:
        least_v, most_v  V  the ends, from where the levels stand; without end where nothing limits them
        below, above        what sets them; None where nothing does, or nothing is known that does
    """

    least_v: float
    most_v: float
    below: Limit | None
    above: Limit | None

    @property
    def room_v(self) -> float:
        """How far the levels can be moved, in V; below 0 by what is short."""
        return self.most_v - self.least_v if self.most_v != self.least_v else 0.0

    @property
    def middle_v(self) -> float:
        """The place that leaves the same room to either side, in V; without end where an end is."""
        return (self.least_v + self.most_v) / 2

    @property
    def is_empty(self) -> bool:
        """Whether no level keeps every limit."""
        return not self.least_v <= self.most_v


class Kept(msgspec.Struct, frozen=True):
    """How far the levels as they stand keep a requirement, in V, with all that is missing at either corner."""

    name: str
    sure_v: float
    best_v: float
    terms: tuple[str, ...]
    """What is not known of it, by term or fact."""

    @property
    def is_exact(self) -> bool:
        """Whether nothing is missing."""
        return not self.terms


class LevelPlacement(msgspec.Struct, frozen=True):
    """The answer for one detector.

    Symbols:
        stated  where the levels stand today
        best    the ends as far as is known: no level beyond them can keep every limit
        sure    the ends within which every limit is kept whatever is missing; the same where nothing is
        kept    how the levels of today keep each requirement; empty where there are none
        waits   the facts that are missing
    """

    stated: Stated
    best: Ends
    sure: Ends
    kept: tuple[Kept, ...]
    waits: tuple[str, ...]

    @property
    def is_exact(self) -> bool:
        """Whether nothing is missing."""
        return not self.waits

    @property
    def stands(self) -> bool | None:
        """Whether the levels of today keep every limit; None where there are none, or where what is missing decides."""
        return stands(self.kept)


ROUNDING_V: Final = 1e-12
"""What rounding leaves of a level at its limit."""


def stands(kept: Sequence[Kept]) -> bool | None:
    """Whether levels keep every requirement; None where there are none, or where what is missing decides."""
    if not kept or any(each.best_v < -ROUNDING_V for each in kept):
        return False if kept else None
    return True if all(each.sure_v >= -ROUNDING_V for each in kept) else None


def kept_by(placing: Placing) -> tuple[Kept, ...]:
    """How the levels as they stand keep each requirement; empty where there are none."""
    return tuple(_kept(placing, _today(placing))) if placing.stated.placed else ()


def place_levels(placing: Placing) -> LevelPlacement:
    """Solve the requirements for the levels, at both corners of what is missing."""
    today = _today(placing)
    waits = dict.fromkeys(placing.unsaid)
    for answer in today.values():
        waits.update(dict.fromkeys(answer.waits))
    best = _ends(placing, Corner.BEST, today)
    return LevelPlacement(
        stated=placing.stated,
        best=best,
        sure=_ends(placing, Corner.SURE, today) if waits else best,
        kept=tuple(_kept(placing, today)) if placing.stated.placed else (),
        waits=tuple(waits),
    )  # fmt: skip


def _today(placing: Placing) -> dict[tuple[str, Corner], Answer]:
    return {(due.name, corner): placing.margin(due, corner) for due in placing.dues for corner in Corner}


def _ends(placing: Placing, corner: Corner, today: dict[tuple[str, Corner], Answer]) -> Ends:
    least: tuple[float, Due | None] = (-math.inf, None)
    most: tuple[float, Due | None] = (math.inf, None)
    for due in placing.dues:
        if math.isinf(margin_v := today[due.name, corner].margin_v) and corner is Corner.BEST and margin_v > 0.0:
            continue
        limit_v = placing.limit_v(due, corner)
        if due.end == "least" and limit_v > least[0]:
            least = (limit_v, due)
        elif due.end == "most" and limit_v < most[0]:
            most = (limit_v, due)
    return Ends(least[0], most[0], _limit(placing, corner, *least), _limit(placing, corner, *most))


def _limit(placing: Placing, corner: Corner, shift_v: float, due: Due | None) -> Limit | None:
    """What sets an end; None where that is not known, or lies beyond every level."""
    if due is None:
        return None
    answer = placing.margin(due, corner, Place(shift_v) if math.isfinite(shift_v) else AS_STATED)
    found = answer.requirement
    if found is None:
        return None
    stated = placing.stated
    point_v = stated.falling_v if found.which == "falling" else stated.rising_v
    error_v = math.nan if point_v is None else abs(found.have.value - (point_v + shift_v))
    fact = found.need.lines[0].of or (found.bound.fact if found.bound is not None else "")
    if found.bound is not None:
        fact = found.bound.fact
    return Limit(found.name, found.which, found.need.value, error_v, fact, found.why)


def _kept(placing: Placing, today: dict[tuple[str, Corner], Answer]) -> Iterator[Kept]:
    for due in placing.dues:
        sure, best = today[due.name, Corner.SURE], today[due.name, Corner.BEST]
        if best.requirement is None and not best.waits:
            continue  # there is nothing of the sort to keep
        yield Kept(due.name, sure.margin_v, best.margin_v, _terms(best, sure))


def _terms(*answers: Answer) -> tuple[str, ...]:
    """What is not known, by term where the account has it, with the facts that no term names."""
    found: dict[str, None] = {}
    for answer in answers:
        lines = () if answer.requirement is None else (*answer.requirement.have.lines, *answer.requirement.need.lines)
        terms = [line for line in lines if line.waits]
        covered = {fact for line in terms for fact in line.waits}
        found.update(dict.fromkeys(line.name for line in terms))
        found.update(dict.fromkeys(fact for fact in answer.waits if fact not in covered))
    return tuple(found)
