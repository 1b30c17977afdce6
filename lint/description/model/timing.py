"""Components that make a time."""

from __future__ import annotations

from tidegate.lint.description.model.part import Part, Positive, Text
from tidegate.lint.quantity import Capacitance, Current, Duration, Resistance, Voltage


class Timing(Part, frozen=True, kw_only=True):
    """Timing."""

    resistance: Resistance | None = None
    current: Current | None = None
    leakage: Current | None = None
    capacitance: Capacitance | None = None
    threshold: Voltage | None = None
    count: Positive | None = None
    period: Duration | None = None
    note: Text | None = None
