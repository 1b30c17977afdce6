"""How each rail comes and goes: the numbers its ramps are made of."""

from __future__ import annotations

from collections.abc import Mapping

import msgspec

from tidegate.lint.description.model.description import Description
from tidegate.lint.description.model.supply import Rail
from tidegate.lint.physics.domain import DomainError, require_positive
from tidegate.lint.physics.ramp import ramp_slope_v_per_s
from tidegate.lint.quantity import Span
from tidegate.lint.timing.parts import Bounds

_INFINITE = float("inf")


class RailRamp(msgspec.Struct, frozen=True):
    """A rail between 0 V and its nominal level: both times between those of the fastest and the slowest ramp.

    An end that is not given stands where none can pass it; ``start_lacks`` and ``fall_lacks`` say which.
    """

    nominal_v: float
    up_v: float
    """From here on it is up: the least level it is guaranteed for, else the least delivered, else nominal."""
    rise: Bounds
    fall: Bounds
    limited_by: str
    """What bounds the fastest fall, in words."""
    start_lacks: tuple[str, ...] = ()
    fast_fall_lacks: tuple[str, ...] = ()
    slow_fall_lacks: tuple[str, ...] = ()

    @property
    def fastest_rise_v_per_s(self) -> float:
        """Slope of the fastest ramp up, in V/s."""
        return ramp_slope_v_per_s(rise_v=self.nominal_v, rise_s=self.rise.least)

    @property
    def fastest_fall_v_per_s(self) -> float:
        """Slope of the fastest way down, in V/s."""
        return ramp_slope_v_per_s(rise_v=self.nominal_v, rise_s=self.fall.least)


class Ramps(msgspec.Struct):
    """The ramps of all rails that have a nominal level; the facts that the others lack, or numbers that cannot be."""

    by_rail: dict[str, RailRamp] = msgspec.field(default_factory=dict)
    lacks: dict[str, tuple[str, ...]] = msgspec.field(default_factory=dict)
    refused: dict[str, DomainError] = msgspec.field(default_factory=dict)


def read_ramps(description: Description) -> Ramps:
    """The ramps of every rail."""
    found = Ramps()
    drawn = _drawn_a(description)
    for rail in description.rails.values():
        nominal_v = rail.nominal.middle if rail.nominal is not None else None
        if nominal_v is None:
            found.lacks[rail.id] = (rail.fact("nominal" if rail.nominal is None else "nominal.typ"),)
            continue
        try:
            require_positive(nominal_v=nominal_v)
            rise, lacks = _bounds(rail, rail.rise, "rise")
            fall, fast, slow, limited_by = _fall(rail, nominal_v, drawn.get(rail.id))
        except DomainError as error:
            found.refused[rail.id] = error
            continue
        found.by_rail[rail.id] = RailRamp(nominal_v, _up_v(rail, nominal_v), rise, fall, limited_by, lacks, fast, slow)
    return found


def _up_v(rail: Rail, nominal_v: float) -> float:
    for span in (rail.guaranteed, rail.delivered):
        if span is not None and span.least is not None:
            return min(span.least, nominal_v)
    return nominal_v


def _bounds(rail: Rail, span: Span | None, fact: str) -> tuple[Bounds, tuple[str, ...]]:
    if span is None:
        return Bounds(0.0, _INFINITE), (rail.fact(fact),)
    lacks = []
    if not _given(rise_s=span.least):
        lacks.append(rail.fact(f"{fact}.min"))
    if not _given(rise_s=span.most):
        lacks.append(rail.fact(f"{fact}.max"))
    return Bounds(span.least or 0.0, span.most or _INFINITE), tuple(lacks)


def _given(**time: float | None) -> bool:
    """Whether a time is given.

    Raises: DomainError: where it is 0 s.
    """
    for name, value_s in time.items():
        if value_s is not None:
            require_positive(**{name: value_s})
    return None not in time.values()


def _fall(rail: Rail, nominal_v: float, drawn_a: float | None) -> tuple[Bounds, tuple[str, ...], tuple[str, ...], str]:
    """The way down: the fastest one as stated, or where nothing is, as steep as a collapse in service.

    A hold-up capacitance that feeds a known current makes it no faster than C V / I.
    """
    least_s, most_s = (rail.fall.least, rail.fall.most) if rail.fall is not None else (None, None)
    limited_by = "its fastest fall"
    if not least_s and rail.collapse is not None and rail.collapse.most:
        least_s = nominal_v / rail.collapse.most
        limited_by = "its collapse"
    held_up_f = rail.hold_up.least if rail.hold_up is not None else None
    if held_up_f is not None and drawn_a is not None and drawn_a > 0.0:
        held_up_s = held_up_f * nominal_v / drawn_a
        if not least_s or held_up_s > least_s:
            least_s, limited_by = held_up_s, "its hold-up"
    fast = () if _given(fall_s=least_s) else (rail.fact("fall" if rail.fall is None else "fall.min"),)
    slow = () if _given(fall_s=most_s) else (rail.fact("fall" if rail.fall is None else "fall.max"),)
    least_s = least_s or 0.0
    return Bounds(least_s, max(most_s or _INFINITE, least_s)), fast, slow, limited_by


def _drawn_a(description: Description) -> Mapping[str, float]:
    """The greatest current that all loads of a rail draw together, of rails where each of them says it, in A."""
    drawn: dict[str, float] = {}
    unknown: set[str] = set()
    for load in description.loads.values():
        most_a = load.consumes.most if load.consumes is not None else None
        for need in load.needs:
            if most_a is None:
                unknown.add(need.rail)
            else:
                drawn[need.rail] = drawn.get(need.rail, 0.0) + most_a
    return {rail: most_a for rail, most_a in drawn.items() if rail not in unknown}
