"""The whole description."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final, Literal, TypeAlias

from tidegate.lint.description.model.detector import Bias, Comparator, Reference
from tidegate.lint.description.model.part import AtLeastOne, Date, Name, NotNegative, Part, Policy, Positive, Text
from tidegate.lint.description.model.process import Process
from tidegate.lint.description.model.reset_path import Bypass, Load, Neighbour, OutputStage, Reset
from tidegate.lint.description.model.supply import Domain, Rail
from tidegate.lint.quantity import Duration, Temperature, Voltage

CompleteSection: TypeAlias = Literal[
    "rails", "domains", "references", "biases", "comparators", "output_stages", "resets", "loads", "modes", "bypasses",
    "neighbours",
]  # fmt: skip
"""A section that may be said to hold all that there is."""

POLICY: Final[Mapping[str, str | float]] = {"combine": "worst_case", "coverage": 3.0, "false_trips": 0.001}
"""What holds where ``conditions`` do not say: how a house judges is no fact of a chip, and is never missing."""


class Conditions(Part, frozen=True, kw_only=True):
    """Conditions of use."""

    junction_temperature: Temperature | None = None
    service_life: Duration | None = None
    power_cycles: NotNegative | None = None
    combine: Policy[Literal["worst_case", "root_sum_square"]] | None = None
    coverage: Policy[Positive] | None = None
    false_trips: Policy[Positive] | None = None
    note: Text | None = None


class Mode(Part, frozen=True, kw_only=True):
    """Operating mode."""

    off: tuple[Name, ...] | None = None
    sampled: tuple[Name, ...] | None = None
    masked: tuple[Name, ...] | None = None
    note: Text | None = None


class Point(Part, frozen=True, kw_only=True):
    """Point of a waveform."""

    at: Duration
    level: Voltage


class Waveform(Part, frozen=True, kw_only=True):
    """Waveform."""

    rail: Name
    points: AtLeastOne[Point]


class Scenario(Part, frozen=True, kw_only=True):
    """Scenario."""

    waveforms: AtLeastOne[Waveform] = ()
    note: Text | None = None


class Waiver(Part, frozen=True, kw_only=True):
    """Waiver."""

    rule: Text
    element: Text
    subsystem: Text | None = None
    why: Text
    agreed_by: Text
    until: Date
    margin: Text | None = None
    note: Text | None = None


class Description(Part, frozen=True, kw_only=True):
    """Description of a reset and supply-monitor subsystem."""

    include: tuple[str, ...] = ()
    subsystem: Text | None = None
    revision: Text | None = None
    invented: bool | None = None
    note: Text | None = None
    conditions: Conditions | None = None
    process: Process | None = None
    rails: dict[Name, Rail] = {}
    domains: dict[Name, Domain] = {}
    references: dict[Name, Reference] = {}
    biases: dict[Name, Bias] = {}
    comparators: dict[Name, Comparator] = {}
    output_stages: dict[Name, OutputStage] = {}
    resets: dict[Name, Reset] = {}
    loads: dict[Name, Load] = {}
    modes: dict[Name, Mode] = {}
    bypasses: dict[Name, Bypass] = {}
    neighbours: dict[Name, Neighbour] = {}
    scenarios: dict[Name, Scenario] = {}
    complete: tuple[CompleteSection, ...] = ()
    waivers: tuple[Waiver, ...] = ()
