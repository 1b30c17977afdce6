"""The whole description."""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.part import Part
from tidegate.lint.description.model.process import Process
from tidegate.lint.description.model.reset_path import Bypass, Load, Neighbour, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.quantity import Duration, Temperature, Voltage


class Conditions(Part, frozen=True, kw_only=True):
    """Conditions of use."""

    junction_temperature: Temperature | None = None
    service_life: Duration | None = None
    power_cycles: float | None = None
    combine: Literal["worst_case", "root_sum_square"] | None = None
    coverage: float | None = None
    false_trips: float | None = None
    note: str | None = None


class Mode(Part, frozen=True, kw_only=True):
    """Operating mode."""

    off: tuple[str, ...] | None = None
    sampled: tuple[str, ...] | None = None
    masked: tuple[str, ...] | None = None
    note: str | None = None


class Point(Part, frozen=True, kw_only=True):
    """Point of a waveform."""

    at: Duration
    level: Voltage


class Waveform(Part, frozen=True, kw_only=True):
    """Waveform."""

    rail: str
    points: tuple[Point, ...]


class Scenario(Part, frozen=True, kw_only=True):
    """Scenario."""

    waveforms: tuple[Waveform, ...] = ()
    note: str | None = None


class Waiver(Part, frozen=True, kw_only=True):
    """Waiver."""

    rule: str
    element: str
    subsystem: str | None = None
    why: str
    agreed_by: str
    until: str
    margin: str | None = None
    note: str | None = None


class Description(Part, frozen=True, kw_only=True):
    """Description of a reset and supply-monitor subsystem."""

    include: tuple[str, ...] = ()
    subsystem: str | None = None
    revision: str | None = None
    invented: bool | None = None
    note: str | None = None
    conditions: Conditions | None = None
    process: Process | None = None
    rails: dict[str, Rail] = {}
    domains: dict[str, Domain] = {}
    references: dict[str, Reference] = {}
    biases: dict[str, Bias] = {}
    comparators: dict[str, Comparator] = {}
    output_stages: dict[str, OutputStage] = {}
    resets: dict[str, Reset] = {}
    loads: dict[str, Load] = {}
    modes: dict[str, Mode] = {}
    bypasses: dict[str, Bypass] = {}
    neighbours: dict[str, Neighbour] = {}
    scenarios: dict[str, Scenario] = {}
    waivers: tuple[Waiver, ...] = ()
