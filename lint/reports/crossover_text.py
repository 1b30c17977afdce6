"""What the components of a crossover make, for people: rows that follow those of a placement."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING

from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.crossover.crossover_words import DIMENSION_OF, corner_text
from tidegate.lint.quantity import Dimension, show
from tidegate.lint.reports.placement_text import millivolts, row, signed

if TYPE_CHECKING:
    from tidegate.lint.derived.crossover.crossover_sweep import CrossoverSweep, SecondCrossing, Tracking
    from tidegate.lint.physics.corner_spread import Spread


def crossover_rows(sweep: CrossoverSweep) -> Iterator[str]:
    """The level over corners and temperature, what moves it, tracking, and the second crossing."""
    level = sweep.level
    if isinstance(level, Unknown):
        yield from row("components", level.text())
    else:
        yield from _level(level, sweep.nominal_k)
    if isinstance(sweep.tracking, Unknown):
        yield from row("tracking", sweep.tracking.text())
    elif sweep.tracking is not None and not isinstance(level, Unknown):
        yield from row("tracking", _tracking(sweep.tracking, level))
    if isinstance(sweep.second, Unknown):
        yield from row("crosses", sweep.second.text())
    elif sweep.second is not None:
        yield from row("crosses", _second(sweep.second))


def _level(level: Spread, nominal_k: float | None) -> Iterator[str]:
    down, up = level.nominal_v - level.least_v, level.most_v - level.nominal_v
    text = (
        f"{_level_text(level.least_v)} to {_level_text(level.most_v)}: -{_per_cent(down / level.nominal_v)} to "
        f"+{_per_cent(up / level.nominal_v)} about {_level_text(level.nominal_v)}"
    )
    if nominal_k is not None:
        text += f" at {show(nominal_k, Dimension.TEMPERATURE)}"
    if level.slope_v_per_k is not None:
        text += f"; {'-' if level.slope_v_per_k < 0.0 else '+'}"
        text += show(abs(level.slope_v_per_k), Dimension.TEMPERATURE_SLOPE, digits=3)
    yield from row("components", text)
    yield from row("least", where_text(level.least_at, level))
    yield from row("most", where_text(level.most_at, level))
    yield from row("moved by", ", ".join(f"{name} {millivolts(width_v)}" for name, width_v in contributions(level)))


def contributions(level: Spread) -> list[tuple[str, float]]:
    """What each parameter does alone, in V, the widest first; those that do nothing are left out."""
    return [(_parameter(swing.name), swing.width_v) for swing in level.swings if swing.width_v > 0.0]


def _parameter(name: str) -> str:
    return name if name in DIMENSION_OF else "temperature"


def where_text(at: Mapping[str, float], level: Spread) -> str:
    """The temperature, and the parameters that move: ``at 125 degC with threshold 485 mV``."""
    moving = {swing.name for swing in level.swings if swing.width_v > 0.0}
    (t_k,) = (value for name, value in at.items() if name not in DIMENSION_OF)
    return corner_text({name: value for name, value in at.items() if name in moving and name in DIMENSION_OF}, t_k)


def _tracking(tracking: Tracking, level: Spread) -> str:
    least_at = tracking.margin.least_at
    where = "where the level is least" if least_at == level.least_at else where_text(least_at, tracking.margin)
    kept = f", {millivolts(tracking.hysteresis_v)} of hysteresis taken off" if tracking.hysteresis_v else ""
    return (
        f"{signed(tracking.margin.least_v)} at least, {where}; "
        f"{tracking.element} works from {show(tracking.need_v, Dimension.VOLTAGE)} there{kept}"
    )


def _second(second: SecondCrossing) -> str:
    level, room_v = second.level, second.level.least_v - second.in_service_v
    return (
        f"the crude current overtakes again from {_level_text(level.least_v)}, {where_text(level.least_at, level)}; "
        f"{millivolts(abs(room_v))} {'above' if room_v >= 0.0 else 'below'} the {_level_text(second.in_service_v)} "
        "reached in service"
    )


def _level_text(level_v: float) -> str:
    return show(level_v, Dimension.VOLTAGE)


def _per_cent(share: float) -> str:
    return f"{100.0 * share:.1f} %"
