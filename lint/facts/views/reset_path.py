"""Views of what carries a decision to the loads: output stages, reset nets, loads, overrides, neighbours.

Made from the model by ``python tests/record.py``: a fact is added there, not here.
"""

from __future__ import annotations

from typing import Literal

from tidegate.lint.description.model.reset_path import (
    Bypass,
    Discharge,
    Hold,
    Load,
    Need,
    Neighbour,
    OutputLine,
    OutputStage,
    Receiver,
    Reset,
    Transistor,
    VictimNode,
)
from tidegate.lint.facts.view import Entries, Facts, Named, Names, Number, Word
from tidegate.lint.facts.views.timing import TimingFacts


class HoldFacts(Facts[Hold], of=Hold):
    """Passive hold."""

    to: Word[Literal["high", "low"]]
    through: Word[Literal["resistor", "transistor"]]
    resistance: Number
    coupling: Number


class TransistorFacts(Facts[Transistor], of=Transistor):
    """Output transistor."""

    family: Word[str]
    threshold: Number
    gain: Number


class OutputLineFacts(Facts[OutputLine], of=OutputLine):
    """Output line."""

    layer: Word[str]
    width: Number
    length: Number
    via: Word[str]
    vias: Number


class DischargeFacts(Facts[Discharge], of=Discharge):
    """Discharge."""

    within: Number
    by: Word[str]


class OutputStageFacts(Facts[OutputStage], of=OutputStage):
    """Output stage."""

    driven_by: Names
    combine: Word[Literal["any_asserts", "all_agree"]]
    combined_against: Word[Literal["false_reset", "missed_reset"]]
    domain: Named
    kind: Word[Literal["gain", "inverter", "buffer", "schmitt", "latch", "level_shifter", "filter", "delay"]]
    inverting: Word[bool]
    hold: HoldFacts
    works_from: Number
    threshold: Number
    input_edge: Number
    nmos: TransistorFacts
    pmos: TransistorFacts
    drive: Number
    crowbar_peak: Number
    output: OutputLineFacts
    leakage: Number
    load: Number
    power_up: Word[Literal["asserts", "releases", "undefined"]]
    dwell: Number
    edges_per_cycle: Number
    delay: Number
    release_delay: Number
    discharge: DischargeFacts
    timing: TimingFacts
    gated_by: Named
    consumes: Number


class ReceiverFacts(Facts[Receiver], of=Receiver):
    """Receivers of a net."""

    levels: Word[Literal["JESD8C.01", "JESD8-5A.01", "JESD8-7A", "JESD8-11A", "JESD8-12A.01"]]
    threshold: Number
    leakage: Number
    count: Number


class ResetFacts(Facts[Reset], of=Reset):
    """Reset net."""

    driven_by: Names
    combine: Word[Literal["any_asserts", "all_agree"]]
    combined_against: Word[Literal["false_reset", "missed_reset"]]
    active: Word[Literal["high", "low"]]
    guards: Names
    domain: Named
    receivers: ReceiverFacts


class NeedFacts(Facts[Need], of=Need):
    """Need of a supply."""

    rail: Named
    works: Number


class LoadFacts(Facts[Load], of=Load):
    """Guarded load."""

    needs: Entries[NeedFacts]
    references: Names
    domain: Named
    ready: Number
    start: Number
    clocked: Word[bool]
    synchronised: Word[bool]
    consumes: Number
    leans_on: Names
    gated_by: Named


class BypassFacts(Facts[Bypass], of=Bypass):
    """Bypass."""

    overrides: Named
    forces: Word[Literal["released", "asserted"]]
    controlled_by: Word[Literal["pin", "register", "fuse", "test_port"]]
    domain: Named
    reset_by: Word[str]
    leans_on: Names
    default: Word[Literal["inactive", "active"]]
    hold: HoldFacts
    locked_outside_test: Word[bool]
    readable: Word[bool]


class VictimNodeFacts(Facts[VictimNode], of=VictimNode):
    """Victim node."""

    resistance: Number
    capacitance: Number


class NeighbourFacts(Facts[Neighbour], of=Neighbour):
    """Neighbours."""

    kind: Word[Literal["capacitance", "shared_reference", "supply_impedance", "shared_return"]]
    aggressor: Named
    victim: Named
    mutual: Word[bool]
    at: Word[Literal["rail", "input", "reference"]]
    capacitance: Number
    step: Number
    edge: Number
    node: VictimNodeFacts
    impedance: Number
    current_step: Number
    reference: Named
    charge: Number
