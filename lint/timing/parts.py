"""The elements of a description as the timing sees them: numbers with both ends, and names of what they lean on."""

from __future__ import annotations

from collections.abc import Iterator
from math import inf
from typing import Any, Final, Literal, NamedTuple

import msgspec


class Bounds(NamedTuple):
    """A quantity between two ends.

    An end that is not exactly known stands at one corner of what is known of it: at the sure corner as far out as it
    may lie (0, or infinity, where nothing is known), at the best corner as far in, so that the ends may even cross.
    Sets of times that are worked out at the best corner lie inside those of every completion of the description, sets
    at the sure corner around them (directed intervals; E. Kaucher, Computing Supplement 2, 33-49, 1980).
    """

    least: float
    most: float


NOTHING = Bounds(0.0, 0.0)
"""No time at all: of what the description says there is none."""

NOT_NAMED: Final = ""
"""Stands for an element that is not named: what is so of it is not known."""


class Lacks(msgspec.Struct):
    """The facts of one element that are missing."""

    whole: list[str] = []
    """Names and words: without these the element may be one thing or another."""
    least: list[str] = []
    """Least values that are not exactly known."""
    most: list[str] = []
    """Greatest values that are not exactly known."""
    own: list[str] = []
    """What matters where the element itself is judged: how long a load takes to be ready, from where a net is read."""


class RailPart(msgspec.Struct, frozen=True):
    """A rail."""

    id: str
    after: str | None
    made_by: str | None
    delay: Bounds


class DomainPart(msgspec.Struct, frozen=True):
    """A domain; the names of what switches it, none where it is always on."""

    id: str
    rail: str
    switched_by: tuple[str, ...]


class SourcePart(msgspec.Struct, frozen=True):
    """A reference or a bias."""

    id: str
    rail: str
    domain: str
    needs: tuple[str, ...]
    works_from: Bounds
    settling: Bounds
    starts_itself: bool
    """Whether a start-up circuit starts it, so that a loop of bias through it does not keep it down."""


class ComparatorPart(msgspec.Struct, frozen=True):
    """A detector."""

    id: str
    rail: str
    domain: str
    watches: str
    needs: tuple[str, ...]
    armed_by: tuple[str, ...]
    over: bool
    works_from: Bounds
    rising: Bounds
    falling: Bounds
    """The level below which it asserts again; for a pulse, the one below which it is ready for the next."""
    filter: Bounds
    """How long a crossing must last to be seen: surely ignored, surely seen; a sample may miss what is shorter than
    its period."""
    delay: Bounds
    pulse: Bounds
    undecided: Literal["asserts", "releases", "undefined"]


class StagePart(msgspec.Struct, frozen=True):
    """An output stage."""

    id: str
    rail: str
    domain: str
    needs: tuple[str, ...]
    driven_by: tuple[str, ...]
    all_agree: bool
    works_from: Bounds
    hold: Literal["asserts", "releases", "none"]
    latches: bool
    power_up: Literal["asserts", "releases", "undefined"]
    delay: Bounds
    release_delay: Bounds
    discharge_s: float
    """How long reset must be asserted for the release delay to begin anew; infinite where nothing discharges it."""


class ResetPart(msgspec.Struct, frozen=True):
    """A reset net."""

    id: str
    driven_by: tuple[str, ...]
    all_agree: bool
    guards: tuple[str, ...]
    rail: str
    reads_from_v: float
    """Supply of its receivers below which none of them tells released from asserted."""


class LoadPart(msgspec.Struct, frozen=True):
    """A guarded load."""

    id: str
    works: tuple[tuple[str, Bounds], ...]
    """Each rail it needs, with the supply between which it surely works."""
    domain: str | None
    needs: tuple[str, ...]
    ready: Bounds
    resets: tuple[str, ...]
    may_work: tuple[tuple[str, Bounds], ...] = ()
    """The same, with the supply between which it may work; empty where both ends are exactly known."""
    may_have_more_resets: bool = False
    """Whether a net that does not say what it guards may reset it, too."""


TimedPart = RailPart | DomainPart | SourcePart | ComparatorPart | StagePart | ResetPart | LoadPart


def bounds_of(part: TimedPart) -> Iterator[tuple[str, Bounds]]:
    """Every quantity of a part, by its name."""
    for name in part.__struct_fields__:
        value = getattr(part, name)
        if isinstance(value, Bounds):
            yield name, value


def times_of(part: TimedPart) -> Iterator[Bounds]:
    """Every time of a part, levels left out."""
    return (value for name, value in bounds_of(part) if name not in _LEVELS)


_LEVELS: Final = ("works_from", "rising", "falling")


def exact_ends(sure: TimedPart, best: TimedPart) -> TimedPart:
    """A part with those ends that are the same at both corners, which are known; the others lie where none can be."""
    changes: dict[str, Any] = {
        name: Bounds(end.least if end.least == inner.least else -inf, end.most if end.most == inner.most else inf)
        for name, end, inner in _both(sure, best)
        if end != inner
    }
    if isinstance(sure, LoadPart) and isinstance(best, LoadPart):
        changes["works"] = tuple(
            (rail, Bounds(works.least if works.least == inner.least else inf, works.most))
            for (rail, works), (_, inner) in zip(sure.works, best.works, strict=True)
        )
    return msgspec.structs.replace(sure, **changes) if changes else sure


def with_lone_spread(sure: TimedPart, best: TimedPart) -> TimedPart:
    """A part at the best corner, but for each least end that is not known where the greatest is: that is as far out."""
    changes = {
        name: Bounds(end.least, inner.most)
        for name, end, inner in _both(sure, best)
        if end.most == inner.most and end.least != inner.least
    }
    return msgspec.structs.replace(best, **changes) if changes else best


def _both(sure: TimedPart, best: TimedPart) -> Iterator[tuple[str, Bounds, Bounds]]:
    """Every quantity of a part at both corners."""
    return ((name, end, getattr(best, name)) for name, end in bounds_of(sure))
