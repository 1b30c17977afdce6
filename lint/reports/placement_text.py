"""Where trip levels may lie, for people: one block of text a detector, at 80 columns, ready to be pasted."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Sequence
from typing import Final

from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.levels.detector_placement import DetectorPlacement
from tidegate.lint.derived.levels.guarded_loads import Bound
from tidegate.lint.derived.levels.level_placement import LevelPlacement
from tidegate.lint.derived.levels.placement_facts import PlacementFacts, spread_of
from tidegate.lint.physics.placement import Limit, Requirement, Side
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.columns import columns, wrapped
from tidegate.lint.reports.plain_text import plain

WIDTH: Final = 80
FEW_LEVERS: Final = 3
"""How many levers are shown of each detector where there are several."""

_LABEL: Final = 11
_V: Final = Dimension.VOLTAGE
_HELD: Final = "\xa0"  # a space at which no line is broken
_NUMBER_AND_UNIT: Final = re.compile(r"(?<=[0-9]) (?=[A-Za-z%])")
_GRID: Final = 10_000  # levels are shown in tenths of a millivolt
_MOST_ON_GRID_V: Final = 1e9  # no float tells tenths of a millivolt apart much above
_NOUNS: Final = {"power_on": "power-on", "under_voltage": "under-voltage", "over_voltage": "over-voltage"}


def placement_lines(placed: DetectorPlacement, place: str, *, most_levers: int) -> Iterator[str]:
    """The block of one detector."""
    comparator = placed.comparator
    title = f"{comparator.id}, {_NOUNS[comparator.role]} detector of {comparator.watches}"
    place = plain(place)
    yield f"{title}{' ' * max(2, WIDTH - len(title) - columns(place))}{place}"
    found = placed.found
    if isinstance(found, Unknown):
        yield from row("open", found.text())
        return
    yield from _levels(found)
    for label, limit in (("lowest by", found.below), ("highest by", found.above)):
        yield from row(label, f"{limit.by.value}: {limit_text(found.facts, limit)}")
    yield from row("hysteresis", _hysteresis(placed, found))
    if found.margins_v:
        yield from row("margins", ", ".join(f"{by.value} {signed(v)}" for by, v in found.margins_v.items()))
    if placed.usable:
        yield from row("codes", _codes(placed))
    yield from _levers(placed, most_levers)


def row(label: str, text: str) -> Iterator[str]:
    """A label, and a text that keeps clear of it on every line; a number stays with its unit."""
    together = _NUMBER_AND_UNIT.sub(_HELD, plain(text))
    lines = wrapped(together, WIDTH - 2 - _LABEL) or [""]
    for number, line in enumerate(lines):
        yield f"  {label if number == 0 else '':<{_LABEL}}{line}".replace(_HELD, " ")


def _levels(found: LevelPlacement) -> Iterator[str]:
    """Both intervals, and where the levels stand today."""
    levels, falling = found.facts.levels, found.falling
    if falling.short_v > 0.0:
        yield from row("no place", f"{millivolts(falling.short_v)} short")
    for label, apart_v, today_v in (
        ("falling", 0.0, levels.falling_v), ("rising", levels.hysteresis_v, levels.rising_v)
    ):  # fmt: skip
        least_v, most_v = falling.least_v + apart_v, falling.most_v + apart_v
        if falling.short_v > 0.0:
            text = f"at least {up_text(least_v)}, and at most {down_text(most_v)}"
        else:
            text = f"{up_text(least_v)} to {down_text(most_v)}"
            text += f", room {millivolts(found.room_v)}" if label == "falling" else ""
        yield from row(label, f"{text}; {_today(today_v, least_v, most_v, ranged=levels.ranged)}")


def _today(today_v: float | None, least_v: float, most_v: float, *, ranged: bool) -> str:
    if today_v is None:
        return "not placed yet"
    said = f"today {show(today_v, _V, digits=5)}{', mid-range' if ranged else ''}"
    if today_v < least_v - 1e-12:
        return f"{said}, {millivolts(least_v - today_v)} too low"
    if today_v > most_v + 1e-12:
        return f"{said}, {millivolts(today_v - most_v)} too high"
    return said


def limit_text(facts: PlacementFacts, limit: Limit) -> str:
    """The numbers behind a limit, and the fact it rests on."""
    error_v = _error_v(facts, limit)
    parts = [*_limit_parts(facts, limit), f"error of the {limit.level.value} level {millivolts(error_v)}"]
    return f"{'; '.join(parts)} ({limit_fact(facts, limit)})"


def limit_fact(facts: PlacementFacts, limit: Limit) -> str:
    """The fact that a limit rests on most."""
    return _bound(facts, limit).fact


def _bound(facts: PlacementFacts, limit: Limit) -> Bound:
    if limit.by is Requirement.GUARANTEE:
        return facts.bounds[0]
    return facts.under_voltage[0] if limit.by is Requirement.BEFORE_UNDER_VOLTAGE else facts.delivered


def _error_v(facts: PlacementFacts, limit: Limit) -> float:
    spread = spread_of(facts, limit.level)
    least = limit.side is Side.LEAST
    nominal_v = (spread.lowest_nominal_v if least else spread.highest_nominal_v)(limit.nominal_v)
    return abs(nominal_v - limit.nominal_v)


def _limit_parts(facts: PlacementFacts, limit: Limit) -> Iterator[str]:
    bound, over = _bound(facts, limit), facts.role == "over_voltage"
    level = show(bound.level_v, _V)
    if limit.by is Requirement.GUARANTEE:
        of_rail = bound.element == facts.delivered.element
        verb = "is signed off" if of_rail else "works"
        yield f"{bound.element} {verb} {'up to' if over else 'from'} {level}"
        if facts.response is not None:
            moves = "rises" if over else "falls"
            answer = show(facts.response.time_s, Dimension.DURATION)
            yield f"{facts.delivered.element} {moves} {millivolts(facts.response.moved_v)} in {answer}"
        else:
            yield "worst corner against worst corner"
        return
    if limit.by is Requirement.BEFORE_UNDER_VOLTAGE:
        yield f"{bound.element} releases from {level}"
        return
    yield f"{bound.element} is delivered {'up to' if over else 'from'} {level}"
    if limit.by is not Requirement.RELEASE:
        yield f"half the ripple {millivolts(facts.ripple_v / 2)}"
    if limit.by is Requirement.QUIET and not over:
        yield f"load step {millivolts(facts.load_step_a * facts.source_ohm)}"


def _hysteresis(placed: DetectorPlacement, found: LevelPlacement) -> str:
    text = f"{millivolts(found.facts.levels.hysteresis_v)} nominal; "
    least = placed.least_hysteresis_v
    if isinstance(least, Unknown):
        text += f"least needed {least.text()}; "
    else:
        text += f"{millivolts(least)} or more needed, "
    largest_v = found.largest_hysteresis_v
    return text + (f"{millivolts(largest_v)} at most fit" if largest_v >= 0.0 else "not even none fits")


def _codes(placed: DetectorPlacement) -> str:
    usable = [code for code, holds in placed.usable.items() if holds]
    ships = placed.comparator.ships_with
    text = f"{', '.join(usable) or 'none'} usable of {', '.join(placed.usable)}"
    return f"{text}; ships with {ships}" if ships else text


def _levers(placed: DetectorPlacement, most: int) -> Iterator[str]:
    for number, lever in enumerate(placed.levers[:most]):
        change = f", {lever.change}" if lever.change else ""
        label = "buys room" if number == 0 else ""
        first, *others = row(label, f"{signed(lever.gain_v):<9} {lever.what}{change}")
        yield first
        yield from (f"{'':{2 + _LABEL + 10}}{line.strip()}" for line in others)
    if not placed.levers:
        yield from row("buys room", "nothing that is known here")


def signed(value_v: float) -> str:
    """A margin or gain, to a tenth of a millivolt: ``+12.4 mV``."""
    return f"{'-' if value_v < -5e-8 else '+'}{millivolts(abs(value_v))}"


def millivolts(value_v: float) -> str:
    """A difference of levels, to a tenth of a millivolt: ``12.4 mV``."""
    text = f"{value_v * 1e3:.1f}".removesuffix(".0")
    return f"{'0' if text == '-0' else text} mV"


def up_text(level_v: float) -> str:
    """A least level: the next tenth of a millivolt up."""
    if abs(level_v) > _MOST_ON_GRID_V:
        return show(level_v, _V)
    return f"{math.ceil(level_v * _GRID - 1e-6) / _GRID:.4f} V"


def down_text(level_v: float) -> str:
    """A greatest level: the next tenth of a millivolt down."""
    if abs(level_v) > _MOST_ON_GRID_V:
        return show(level_v, _V)
    return f"{math.floor(level_v * _GRID + 1e-6) / _GRID:.4f} V"


def all_levers(placed: Sequence[DetectorPlacement]) -> int:
    """How many levers to show of each: all where one detector is asked for, a few where several are."""
    return 100 if len(placed) == 1 else FEW_LEVERS
