"""Rails and the domains they feed."""

from __future__ import annotations

from typing import ClassVar, Literal

from tidegate.lint.description.model.part import Ability, Element, Name, Part, Text
from tidegate.lint.quantity import Capacitance, Current, Duration, Frequency, Resistance, Slope, Voltage


class Dip(Part, frozen=True, kw_only=True):
    """Dip of the ramp."""

    depth: Voltage | None = None
    at: Voltage | None = None


class Ripple(Part, frozen=True, kw_only=True):
    """Ripple."""

    peak_to_peak: Voltage | None = None
    frequency: Frequency | None = None


class Rail(Element, frozen=True, kw_only=True):
    """Supply rail."""

    section: ClassVar[str] = "rails"

    nominal: Voltage | None = None
    delivered: Voltage | None = None
    guaranteed: Ability[Voltage] | None = None
    damage: Voltage | None = None
    rise: Duration | None = None
    fall: Duration | None = None
    collapse: Slope | None = None
    overshoot: Slope | None = None
    dip: Dip | None = None
    ripple: Ripple | None = None
    source_impedance: Resistance | None = None
    load_step: Current | None = None
    hold_up: Capacitance | None = None
    after: Name | None = None
    delay: Duration | None = None
    residual: Voltage | None = None
    off_time: Duration | None = None
    made_by: Name | None = None
    note: Text | None = None


class Domain(Element, frozen=True, kw_only=True):
    """Supply domain."""

    section: ClassVar[str] = "domains"

    rail: Name | None = None
    kind: Literal["always_on", "switched"] | None = None
    switched_by: Name | None = None
    budget: Current | None = None
    note: Text | None = None
