"""Views of the whole description.

Made from the model by ``python tests/record.py``: a fact is added there, not here.
"""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.description import Conditions, Description, Mode, Point, Scenario, Waiver, Waveform
from tidegate.lint.facts.view import Entries, Facts, Named, Names, Number, Word
from tidegate.lint.facts.views.detector import BiasFacts, ComparatorFacts, ReferenceFacts
from tidegate.lint.facts.views.process import ProcessFacts
from tidegate.lint.facts.views.reset_path import BypassFacts, LoadFacts, NeighbourFacts, OutputStageFacts, ResetFacts
from tidegate.lint.facts.views.supply import DomainFacts, RailFacts


class ConditionsFacts(Facts[Conditions], of=Conditions):
    """Conditions of use."""

    junction_temperature: Number
    service_life: Number
    power_cycles: Number
    combine: Word[Literal["worst_case", "root_sum_square"]]
    coverage: Number
    false_trips: Number


class ModeFacts(Facts[Mode], of=Mode):
    """Operating mode."""

    off: Names
    sampled: Names
    masked: Names


class PointFacts(Facts[Point], of=Point):
    """Point of a waveform."""

    at: Number
    level: Number


class WaveformFacts(Facts[Waveform], of=Waveform):
    """Waveform."""

    rail: Named
    points: Entries[PointFacts]


class ScenarioFacts(Facts[Scenario], of=Scenario):
    """Scenario."""

    waveforms: Entries[WaveformFacts]


class WaiverFacts(Facts[Waiver], of=Waiver):
    """Waiver."""

    rule: Word[str]
    element: Word[str]
    why: Word[str]
    agreed_by: Word[str]
    until: Word[str]
    margin: Word[str]


class DescriptionFacts(Facts[Description], of=Description):
    """Description of a reset and supply-monitor subsystem."""

    conditions: ConditionsFacts
    process: ProcessFacts
    rails: Entries[RailFacts]
    domains: Entries[DomainFacts]
    references: Entries[ReferenceFacts]
    biases: Entries[BiasFacts]
    comparators: Entries[ComparatorFacts]
    output_stages: Entries[OutputStageFacts]
    resets: Entries[ResetFacts]
    loads: Entries[LoadFacts]
    modes: Entries[ModeFacts]
    bypasses: Entries[BypassFacts]
    neighbours: Entries[NeighbourFacts]
    scenarios: Entries[ScenarioFacts]
