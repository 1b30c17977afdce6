"""The elements of a description as the timing sees them: numbers with both ends, and names of what they lean on."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Final, Literal, NamedTuple

import msgspec


class Bounds(NamedTuple):
    """A quantity between two ends. Where an end is not given it is the one that no quantity passes: 0, or infinity."""

    least: float
    most: float


NOTHING = Bounds(0.0, 0.0)
"""No time at all: of what the description says there is none."""


class Lacks(msgspec.Struct):
    """The facts of one element that are missing."""

    whole: list[str] = []
    """Without these the element cannot be timed at all."""
    least: list[str] = []
    """Least values that stand at 0."""
    most: list[str] = []
    """Greatest values that stand at infinity."""
    ready: list[str] = []
    """Of a load, what its own readiness alone needs."""


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
    """Each rail it needs, with the supply between which it works."""
    domain: str | None
    needs: tuple[str, ...]
    ready: Bounds
    start: Bounds
    resets: tuple[str, ...]


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
