"""How each rail comes and goes: the numbers its ramps are made of, at one corner of what is known of them."""

from __future__ import annotations

from typing import Final

import msgspec

from tidegate.lint.derived.supply.steepest_fall import SteepestFall, steepest_fall
from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.facts.reading import Better, Corner
from tidegate.lint.facts.view import Number
from tidegate.lint.facts.views.supply import RailFacts
from tidegate.lint.graph.dependency import Graph
from tidegate.lint.physics.domain import DomainError, require_positive
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.timing.ends import Ends
from tidegate.lint.timing.parts import Bounds

_INFINITE: Final = float("inf")
_ANY_TIME: Final = Bounds(0.0, _INFINITE)


class RampLacks(msgspec.Struct, frozen=True):
    """The facts without which a number of a ramp is not exactly known."""

    fast_rise: tuple[str, ...] = ()
    slow_rise: tuple[str, ...] = ()
    fast_fall: tuple[str, ...] = ()
    slow_fall: tuple[str, ...] = ()
    steepest: tuple[str, ...] = ()
    up: tuple[str, ...] = ()

    @property
    def rise(self) -> tuple[str, ...]:
        """Those of the way up."""
        return tuple(dict.fromkeys((*self.fast_rise, *self.slow_rise)))


NOTHING_LACKS: Final = RampLacks()


class RailRamp(msgspec.Struct, frozen=True):
    """A rail between 0 V and its nominal level: both times between those of the fastest and the slowest ramp.

    An end that is not exactly known stands at a corner; ``lacks`` says which.
    """

    nominal_v: float
    up: Bounds
    """The level from which on it is up: the least that it is guaranteed for."""
    rise: Bounds
    fall: Bounds
    """The way down to 0 V, when it is switched off."""
    steepest: SteepestFall
    """The way down out of service."""
    lacks: RampLacks = NOTHING_LACKS
    any_time: Bounds = _ANY_TIME
    """What a time of which nothing is known stands at."""

    @property
    def start_lacks(self) -> tuple[str, ...]:
        """What is missing of the ramps up."""
        return self.lacks.rise

    @property
    def up_v(self) -> float:
        """The level from which on it is surely up, in V."""
        return self.up.most

    @property
    def can_fall(self) -> bool:
        """Whether it falls at all, and it is known how steeply at the most."""
        return 0.0 < self.steepest.v_per_s < _INFINITE

    @property
    def can_dip(self) -> bool:
        """Whether it is known how steeply it falls and rises again."""
        return self.can_fall and not self.lacks.fast_rise

    @property
    def fastest_rise_v_per_s(self) -> float:
        """Slope of the fastest ramp up, in V/s."""
        return ramp_slope_v_per_s(rise_v=self.nominal_v, rise_s=self.rise.least)

    def at_pace(self, *, fast: bool) -> tuple[Bounds, Bounds]:
        """How long a rail that its maker makes takes up and down, where it does so as fast, or as slowly, as it may."""
        lacks = self.lacks
        rise_s, rise_lacks = (self.rise.least, lacks.fast_rise) if fast else (self.rise.most, lacks.slow_rise)
        fall_s, fall_lacks = (self.fall.least, lacks.fast_fall) if fast else (self.fall.most, lacks.slow_fall)
        rise = self.any_time if rise_lacks else Bounds(rise_s, rise_s)
        return rise, self.any_time if fall_lacks else Bounds(fall_s, fall_s)


class Ramps(msgspec.Struct):
    """The ramps of all rails that have a nominal level; the facts that the others lack, or numbers that cannot be."""

    by_rail: dict[str, RailRamp] = msgspec.field(default_factory=dict)
    lacks: dict[str, tuple[str, ...]] = msgspec.field(default_factory=dict)
    refused: dict[str, DomainError] = msgspec.field(default_factory=dict)

    @property
    def exact(self) -> bool:
        """Whether everything is known."""
        return not self.lacks and all(ramp.lacks == NOTHING_LACKS for ramp in self.by_rail.values())


def read_ramps(description: Description, graph: Graph, corner: Corner = Corner.SURE) -> Ramps:
    """The ramps of every rail."""
    found = Ramps()
    for rail in description.rails.values():
        ends = Ends(rail, description, graph, corner)
        facts = ends.case.of(rail)
        nominal_v, lacks = ends.read(facts.nominal.typical)
        if lacks:
            found.lacks[rail.id] = lacks
            continue
        try:
            require_positive(nominal_v=nominal_v)
            found.by_rail[rail.id] = _ramp(ends, rail, facts, nominal_v)
        except DomainError as error:
            found.refused[rail.id] = error
    return found


def _ramp(ends: Ends, rail: Rail, facts: RailFacts, nominal_v: float) -> RailRamp:
    up, without_up = ends.read(lambda: (facts.guaranteed.least(Better.MORE), facts.guaranteed.least(Better.LESS)))
    rise, fast_rise, slow_rise = _times(ends, facts.rise, "rise_s")
    fall, fast_fall, slow_fall = _times(ends, facts.fall, "fall_s")
    steepest, not_steepest = ends.read(lambda: steepest_fall(ends.case, rail))
    lacks = RampLacks(fast_rise, slow_rise, fast_fall, slow_fall, not_steepest, without_up)
    up_v = Bounds(*(min(max(level_v, 0.0), nominal_v) for level_v in up))
    any_time = Bounds(_INFINITE, 0.0) if ends.best else _ANY_TIME
    return RailRamp(nominal_v, up_v, rise, fall, steepest, NOTHING_LACKS if lacks == NOTHING_LACKS else lacks, any_time)


def _times(ends: Ends, fact: Number, name: str) -> tuple[Bounds, tuple[str, ...], tuple[str, ...]]:
    """The fastest and the slowest time, and what is missing of each.

    Raises: DomainError: where one that is given is 0 s.
    """
    given = fact.given
    for value_s in () if given is None else (given.least, given.most):
        if value_s is not None:
            require_positive(**{name: value_s})
    slowest_s, without_slowest = ends.read(lambda: fact.most(Better.LESS))
    fastest_s, without_fastest = ends.read(lambda: fact.least(Better.MORE))
    return Bounds(fastest_s, slowest_s), without_fastest, without_slowest
