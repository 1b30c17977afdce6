"""What the components of a crossover make, for machines: every number as value and unit."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

from tidegate.lint.derived.asking import Unknown
from tidegate.lint.derived.crossover.crossover_words import DIMENSION_OF
from tidegate.lint.quantity import Dimension
from tidegate.lint.reports.crossover_text import contributions

if TYPE_CHECKING:
    from tidegate.lint.derived.crossover.crossover_sweep import CrossoverSweep, SecondCrossing, Tracking
    from tidegate.lint.physics.corner_spread import Spread


def crossover_entry(sweep: CrossoverSweep) -> dict[str, Any]:
    """The level, tracking and second crossing; null where there is no such question."""
    return {
        "level": _unknown(sweep.level) if isinstance(sweep.level, Unknown) else _level(sweep.level),
        "tracking": _unknown(sweep.tracking) if isinstance(sweep.tracking, Unknown) else _tracking(sweep.tracking),
        "second_crossing": _unknown(sweep.second) if isinstance(sweep.second, Unknown) else _second(sweep.second),
    }


def _unknown(why: Unknown) -> dict[str, Any]:
    return {"missing": list(why.missing), "problem": why.problem}


def _level(level: Spread) -> dict[str, Any]:
    slope = level.slope_v_per_k
    return {
        "missing": [],
        "problem": "",
        "least": _volts(level.least_v),
        "nominal": _volts(level.nominal_v),
        "most": _volts(level.most_v),
        "down": _per_cent((level.nominal_v - level.least_v) / level.nominal_v),
        "up": _per_cent((level.most_v - level.nominal_v) / level.nominal_v),
        "slope": None if slope is None else {"value": slope, "unit": "V/K"},
        "least_at": _at(level.least_at),
        "most_at": _at(level.most_at),
        "moved_by": [{"parameter": name, "width": _volts(width_v)} for name, width_v in contributions(level)],
    }


def _tracking(tracking: Tracking | None) -> dict[str, Any] | None:
    if tracking is None:
        return None
    return {
        "missing": [],
        "problem": "",
        "margin": _volts(tracking.margin.least_v),
        "at": _at(tracking.margin.least_at),
        "element": tracking.element,
        "needs": _volts(tracking.need_v),
        "hysteresis": _volts(tracking.hysteresis_v),
    }


def _second(second: SecondCrossing | None) -> dict[str, Any] | None:
    if second is None:
        return None
    level = _level(second.level)
    return {**level, "in_service": _volts(second.in_service_v)}


def _at(at: Mapping[str, float]) -> dict[str, Any]:
    """A corner: every parameter, and the temperature."""
    named = {name if name in DIMENSION_OF else "temperature": (name, value) for name, value in at.items()}
    return {
        shown: {"value": value, "unit": DIMENSION_OF.get(name, Dimension.TEMPERATURE).unit}
        for shown, (name, value) in named.items()
    }


def _volts(value_v: float) -> dict[str, Any]:
    return {"value": value_v, "unit": "V"}


def _per_cent(share: float) -> dict[str, Any]:
    return {"value": 100.0 * share, "unit": "%"}
